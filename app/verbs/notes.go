package verbs

import "strings"

// notIncluded is what the model leaves out. Every output says so.
var notIncluded = []string{"returning radiation", "self-occultation by thickness", "scattering"}

// notIncludedLine is the same for people.
var notIncludedLine = "Not included: " + strings.Join(notIncluded, ", ") + "."
