package main

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/interp"

	"annulet/assets/oklab"
)

const (
	entries = 256   // of a table
	code16  = 65535 // full scale of a 16-bit component

	// fineSteps is into how many chords a curve is cut to measure its
	// length. Method: the chord error falls with its square, far below the
	// 16-bit rounding of the entries.
	fineSteps = 20000
)

// table holds encoded sRGB, full scale 65535.
type table [entries][3]uint16

// curve is a path through OKLab, parametrised over [0, end].
type curve struct {
	l, a, b interp.Predictor
	end     float64
}

func (c curve) at(s float64) oklab.Lab {
	return oklab.Lab{L: c.l.Predict(s), A: c.a.Predict(s), B: c.b.Predict(s)}
}

// through fits a curve to points: lightness by a monotone cubic (Fritsch &
// Butland 1984), so that it rises or falls wherever the anchors do; a and b
// by natural cubics, which bend evenly.
func through(points []oklab.Lab) (curve, error) {
	n := len(points)
	s, l, a, b := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i, p := range points {
		if i > 0 {
			s[i] = s[i-1] + p.Distance(points[i-1])
		}
		l[i], a[i], b[i] = p.L, p.A, p.B
	}
	var lightness interp.FritschButland
	var across, along interp.NaturalCubic
	if err := lightness.Fit(s, l); err != nil {
		return curve{}, fmt.Errorf("lightness: %w", err)
	}
	if err := across.Fit(s, a); err != nil {
		return curve{}, fmt.Errorf("a: %w", err)
	}
	if err := along.Fit(s, b); err != nil {
		return curve{}, fmt.Errorf("b: %w", err)
	}
	return curve{l: &lightness, a: &across, b: &along, end: s[n-1]}, nil
}

// atFractions returns the colours at the given fractions of the curve's
// length in ΔE. Fractions must not fall.
func (c curve) atFractions(fractions []float64) []oklab.Lab {
	length := make([]float64, fineSteps+1)
	param := func(i int) float64 { return c.end * float64(i) / fineSteps }
	last := c.at(0)
	for i := 1; i <= fineSteps; i++ {
		p := c.at(param(i))
		length[i] = length[i-1] + p.Distance(last)
		last = p
	}
	out := make([]oklab.Lab, len(fractions))
	i := 1
	for k, f := range fractions {
		want := f * length[fineSteps]
		for i < fineSteps && length[i] < want {
			i++
		}
		part := (want - length[i-1]) / (length[i] - length[i-1])
		out[k] = c.at(param(i-1) + part*(param(i)-param(i-1)))
	}
	return out
}

// sequential cuts the curve through the anchors into equal steps.
func sequential(anchors []anchor) (table, error) {
	points := make([]oklab.Lab, len(anchors))
	for i, p := range anchors {
		points[i] = oklab.FromHue(p.lightness, p.chroma, radians(p.hueDeg))
	}
	c, err := through(points)
	if err != nil {
		return table{}, err
	}
	fractions := make([]float64, entries)
	for k := range fractions {
		fractions[k] = float64(k) / (entries - 1)
	}
	var t table
	for k, p := range c.atFractions(fractions) {
		if t[k], err = encode(p); err != nil {
			return table{}, fmt.Errorf("entry %d: %w", k, err)
		}
	}
	return t, nil
}

// discrete gives every anchor an equal share of the entries.
func discrete(anchors []anchor) (table, error) {
	var t table
	var err error
	for k := range t {
		a := anchors[k*len(anchors)/entries]
		if t[k], err = encode(oklab.FromHue(a.lightness, a.chroma, radians(a.hueDeg))); err != nil {
			return table{}, fmt.Errorf("entry %d: %w", k, err)
		}
	}
	return t, nil
}

// diverging cuts both arms into equal steps. The centre itself falls between
// the two middle entries, half a step from each.
func diverging(d arms) (table, error) {
	const arm = entries / 2
	fractions := make([]float64, arm)
	for k := range fractions {
		fractions[k] = (float64(k) + 0.5) / (arm - 0.5) // half a step off the centre, 1 at the end
	}
	var t table
	for _, side := range []struct {
		hueDeg, turn float64
		entry        func(k int) int
	}{
		{d.lowHueDeg, -1, func(k int) int { return arm - 1 - k }},
		{d.highHueDeg, +1, func(k int) int { return arm + k }},
	} {
		points := make([]oklab.Lab, len(d.along))
		for i, p := range d.along {
			points[i] = oklab.FromHue(p.lightness, p.chroma, radians(side.hueDeg+side.turn*p.turnDeg))
		}
		c, err := through(points)
		if err != nil {
			return table{}, err
		}
		for k, p := range c.atFractions(fractions) {
			if t[side.entry(k)], err = encode(p); err != nil {
				return table{}, fmt.Errorf("entry %d: %w", side.entry(k), err)
			}
		}
	}
	return t, nil
}

// encode refuses a colour that no sRGB display can show: clipping it would
// spoil the equal steps.
func encode(p oklab.Lab) ([3]uint16, error) {
	c := p.RGB()
	if !c.Inside() {
		return [3]uint16{}, fmt.Errorf("%+v is outside sRGB: linear %+v", p, c)
	}
	code := func(v float64) uint16 { return uint16(math.Round(code16 * oklab.Encode(v))) }
	return [3]uint16{code(c.R), code(c.G), code(c.B)}, nil
}

func radians(deg float64) float64 { return deg * math.Pi / 180 }
