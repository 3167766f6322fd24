package measure

import (
	"context"
	"math"
)

// Beam is an elliptical Gaussian.
type Beam struct {
	Major, Minor float64 // FWHM, M
	Angle        float64 // of the major axis on the screen, radians counter-clockwise from +α
}

// sigmaPerFWHM is 1/(2 √(2 ln 2)).
const sigmaPerFWHM = 0.42466090014400953

// beamReach is how far beyond the image the grid reaches so that its
// periods do not meet, in standard deviations. Method: e^(-32).
const beamReach = 8

// Blurred returns the image convolved with a beam of unit volume, by Fourier
// transform. Light beyond the field is taken as none, and light that the beam
// moves out of it is lost.
func (m *Image) Blurred(ctx context.Context, b Beam) (*Image, error) {
	if !(b.Minor >= 0 && b.Major >= b.Minor) || math.IsInf(b.Major, 0) {
		return nil, cannot("a beam of %g by %g M has no shape", b.Major, b.Minor)
	}
	width := float64(min(m.Columns, m.Rows)) * m.Pitch
	if b.Major > width {
		return nil, cannot("the beam of %.4g M is larger than the field of %.4g M", b.Major, width)
	}
	pad := int(beamReach * b.Major * sigmaPerFWHM / m.Pitch)
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	t := newTransform(m, fastSize(m.Columns+pad), fastSize(m.Rows+pad))
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	sin, cos := math.Sincos(b.Angle)
	major := 2 * math.Pi * math.Pi * math.Pow(b.Major*sigmaPerFWHM/m.Pitch, 2)
	minor := 2 * math.Pi * math.Pi * math.Pow(b.Minor*sigmaPerFWHM/m.Pitch, 2)
	for row := range t.rows {
		for column := range t.half {
			x, y := t.frequency(column, row)
			along, across := x*cos+y*sin, y*cos-x*sin
			t.coefficients[row*t.half+column] *= complex(math.Exp(-major*along*along-minor*across*across), 0)
		}
	}
	blurred := *m
	blurred.Pixels = make([]float64, len(m.Pixels))
	t.back(&blurred)
	return &blurred, ctx.Err()
}
