package main

// anchor is a colour a map passes through: lightness and chroma in OKLab, hue
// in degrees from +a towards +b.
type anchor struct{ lightness, chroma, hueDeg float64 }

// emberAnchors lead from a neutral near-black through garnet, coal red and
// amber to a pale cream. Taste; lightness must rise, which the tests check.
var emberAnchors = []anchor{
	{0.10, 0.000, 18},
	{0.22, 0.045, 18},
	{0.36, 0.105, 25},
	{0.50, 0.150, 34},
	{0.63, 0.155, 48},
	{0.76, 0.140, 67},
	{0.88, 0.100, 86},
	{0.97, 0.030, 98},
}

// armAnchor is a colour at the same place of both arms of a diverging map:
// lightness, chroma, and how far, in degrees, the hue has turned from where
// the arm starts. Equal arms have equal lengths in OKLab, so one step means
// the same on both sides.
type armAnchor struct{ lightness, chroma, turnDeg float64 }

// arms is a diverging map: the hues, in degrees, in which its two arms leave
// the neutral centre, and the colours along either. The hue of the low arm
// falls by the turn, that of the high arm rises by it.
type arms struct {
	lowHueDeg, highHueDeg float64
	along                 []armAnchor
}

// shiftAnchors: the low arm runs from light neutral through orange to dark
// red (g < 1), the high arm through sky blue to deep blue (g > 1). Taste.
var shiftAnchors = arms{
	lowHueDeg: 66, highHueDeg: 228,
	along: []armAnchor{
		{0.95, 0.000, 0},
		{0.86, 0.055, 4},
		{0.74, 0.105, 11},
		{0.60, 0.128, 20},
		{0.46, 0.120, 29},
		{0.34, 0.090, 36},
	},
}
