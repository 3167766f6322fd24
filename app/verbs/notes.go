package verbs

import "annulet/app/output"

// notIncluded is what the model leaves out. Every output says so.
var notIncluded = output.NotIncluded

// notIncludedLine is the same for people.
var notIncludedLine = output.NotIncludedLine(notIncluded)
