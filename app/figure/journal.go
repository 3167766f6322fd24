package figure

import "annulet/scenes"

// journals: widths of one column and of two, mm. Sources: A&A author's guide
// (88 and 180 mm); columns of the class files of AAS (aastex) and MNRAS,
// computed.
var journals = map[string][2]float64{
	"aa":    {88, 180},
	"aas":   {86.2, 180.3},
	"mnras": {85.8, 178.5},
}

// width is that of a figure, mm.
func width(f scenes.Figure) float64 {
	if f.Width > 0 {
		return f.Width
	}
	return journals[f.Journal][f.Columns-1]
}
