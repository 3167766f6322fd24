package measure

import (
	"context"
	"math"
	"math/cmplx"
)

// Visibility is V = ∫ I exp(-2πi (u l + v m)) of an image at one place of the
// plane of frequencies, both in cycles per M along α and β. V is in M² of the
// image's unit; its value at 0 is the flux.
type Visibility struct {
	U, V  float64 // cycles per M, along +α and +β of the screen
	Value complex128
}

// Visibility returns the exact sum over pixels at one frequency along α and
// one along β, with the response of square pixels divided out. The screen's
// zero is the centre of phase.
func (m *Image) Visibility(u, v float64) complex128 {
	columns := make([]complex128, m.Columns)
	for k := range columns {
		alpha, _ := m.at(k, 0)
		columns[k] = cmplx.Rect(1, -2*math.Pi*u*alpha)
	}
	var sum complex128
	for row := range m.Rows {
		var along complex128
		for k, w := range m.Pixels[row*m.Columns : (row+1)*m.Columns] {
			along += complex(w, 0) * columns[k]
		}
		_, beta := m.at(0, row)
		sum += along * cmplx.Rect(1, -2*math.Pi*v*beta)
	}
	return sum * complex(m.Pitch*m.Pitch/(sinc(u*m.Pitch)*sinc(v*m.Pitch)), 0)
}

// Nyquist is the largest frequency that the pixels tell, cycles per M.
func (m *Image) Nyquist() float64 { return 1 / (2 * m.Pitch) }

// sinc is sin(πx)/(πx).
func sinc(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Sin(math.Pi*x) / (math.Pi * x)
}

// Visibilities sums directly at many places; a dark image has 0 everywhere.
func (m *Image) Visibilities(ctx context.Context, at [][2]float64) ([]Visibility, error) {
	out := make([]Visibility, len(at))
	shared(len(at), func() struct{} { return struct{}{} }, func(_ struct{}, k int) {
		if ctx.Err() == nil {
			out[k] = Visibility{at[k][0], at[k][1], m.Visibility(at[k][0], at[k][1])}
		}
	})
	return out, ctx.Err()
}

// Map is the visibility on a grid, by Fourier transform of the padded image.
type Map struct {
	Columns, Rows int     // odd; the middle one is 0
	Step          float64 // between frequencies, cycles per M
	Values        []complex128
}

// VisibilityMap returns frequencies up to most along both axes, at steps of
// at most 1/(padding · side of the field); padding >= 1.
func (m *Image) VisibilityMap(ctx context.Context, most float64, padding int) (*Map, error) {
	if !(most > 0 && most <= m.Nyquist()) {
		return nil, cannot("frequencies up to %.4g cycles per M are beyond what pixels of %.4g M tell", most, m.Pitch)
	}
	const mostSide = 8192
	side := fastSize(max(m.Columns, m.Rows) * max(1, padding))
	if side > mostSide {
		return nil, cannot("a padded grid of %d x %d is larger than %d x %d", side, side, mostSide, mostSide)
	}
	t := newTransform(m, side, side)
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	step := 1 / (float64(side) * m.Pitch)
	half := int(most / step)
	out := &Map{Columns: 2*half + 1, Rows: 2*half + 1, Step: step}
	out.Values = make([]complex128, out.Columns*out.Rows)
	// the transform has its zero in the middle of pixel 0, 0
	alpha, beta := m.at(0, 0)
	for row := -half; row <= half; row++ {
		for column := -half; column <= half; column++ {
			i, j := column, row
			if i < 0 { // of a real image
				i, j = -i, -j
			}
			value := t.coefficients[(j+t.rows)%t.rows*t.half+i]
			if column < 0 {
				value = cmplx.Conj(value)
			}
			u, v := float64(column)*step, float64(row)*step
			value *= cmplx.Rect(m.Pitch*m.Pitch/(sinc(u*m.Pitch)*sinc(v*m.Pitch)), -2*math.Pi*(u*alpha+v*beta))
			out.Values[(row+half)*out.Columns+column+half] = value
		}
	}
	return out, nil
}

// Null is a minimum of the amplitude along a line through 0.
type Null struct {
	Baseline  float64 // cycles per M
	Amplitude float64 // left there, relative to the flux
}

// Nulls finds the minima of the amplitude along a direction of the screen,
// radians from +α, up to a baseline, between steps.
func (m *Image) Nulls(ctx context.Context, direction, most float64, steps int) ([]Null, error) {
	if err := m.Check(); err != nil {
		return nil, err
	}
	sin, cos := math.Sincos(direction)
	amplitude := func(u float64) float64 { return cmplx.Abs(m.Visibility(u*cos, u*sin)) }
	flux := amplitude(0)
	at := make([][2]float64, steps+1)
	step := most / float64(steps)
	for k := range at {
		u := float64(k) * step
		at[k] = [2]float64{u * cos, u * sin}
	}
	values, err := m.Visibilities(ctx, at)
	if err != nil {
		return nil, err
	}
	var nulls []Null
	for k := 1; k < steps; k++ {
		before, here, after := cmplx.Abs(values[k-1].Value), cmplx.Abs(values[k].Value), cmplx.Abs(values[k+1].Value)
		if here < before && here <= after {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			u, low := golden(func(u float64) float64 { return -amplitude(u) }, float64(k-1)*step, float64(k+1)*step)
			nulls = append(nulls, Null{u, -low / flux})
		}
	}
	return nulls, nil
}

// ClosurePhase returns arg V₁ V₂ V₃ of a triangle of baselines that closes,
// radians.
func ClosurePhase(v1, v2, v3 complex128) float64 { return cmplx.Phase(v1 * v2 * v3) }
