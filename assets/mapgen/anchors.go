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

// tarnAnchors lead from a deep blue through teal to a pale green. Taste;
// lightness must rise.
var tarnAnchors = []anchor{
	{0.15, 0.030, 285},
	{0.30, 0.105, 266},
	{0.44, 0.100, 240},
	{0.58, 0.085, 205},
	{0.72, 0.095, 175},
	{0.86, 0.100, 145},
	{0.96, 0.050, 120},
}

// wheelAnchors go round: a dark blue through violet and rose to cream, and
// through green and teal back: lightness rises once and falls once. Taste.
var wheelAnchors = []anchor{
	{0.30, 0.110, 280},
	{0.46, 0.130, 320},
	{0.64, 0.110, 10},
	{0.80, 0.090, 60},
	{0.90, 0.050, 100},
	{0.80, 0.090, 140},
	{0.64, 0.080, 185},
	{0.46, 0.105, 245},
	{0.30, 0.110, 280},
}

// orderAnchors are the colours of orders 0 to 9: lightness rises by equal
// steps, blues and ambers alternate. Taste.
var orderAnchors = []anchor{
	{0.30, 0.110, 265},
	{0.40, 0.085, 50},
	{0.47, 0.080, 240},
	{0.54, 0.080, 70},
	{0.60, 0.050, 270},
	{0.67, 0.070, 80},
	{0.72, 0.050, 240},
	{0.79, 0.060, 85},
	{0.83, 0.030, 270},
	{0.90, 0.050, 95},
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
