package state

import "annulet/app/tone"

// Tones returns the names of the tone's curves, in the order of tone.Curve.
func Tones() []string {
	return []string{tone.Linear: "linear", tone.SquareRoot: "square root", tone.Logarithmic: "logarithmic"}
}
