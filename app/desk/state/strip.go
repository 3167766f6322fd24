package state

import (
	"fmt"
	"math"
	"time"

	"annulet/scenes"
)

// LeftOut says what the model does not include.
const LeftOut = "Not included: returning radiation, self-occultation by thickness, scattering. The emission model is assumed, not fitted."

// Picture is what the strip tells about the picture shown.
type Picture struct {
	Scene         scenes.Scene
	Width         float64 // of the field: M, or radians in the plane of an angular field
	Columns, Rows int
	Coarsening    int
	Traced        time.Duration
	WorstBound    float64 // relative, on r; 0 when no path met the gas
}

// Describe returns the state of the picture in words.
func (p Picture) Describe() string {
	if p.Coarsening > 1 {
		return fmt.Sprintf("%s · preview, one of %d × %d pixels traced …", p.field(), p.Coarsening, p.Coarsening)
	}
	bound := ""
	switch {
	case math.IsNaN(p.WorstBound) || math.IsInf(p.WorstBound, 0):
		bound = ", bound on r unknown"
	case p.WorstBound > 0:
		bound = fmt.Sprintf(", relative bound on r %s", power(p.WorstBound))
	}
	return fmt.Sprintf("%s · traced %d × %d%s, %.2f s", p.field(), p.Columns, p.Rows, bound, p.Traced.Seconds())
}

// power writes a bound with one figure, rounded up: 3e-9.
func power(x float64) string {
	exponent := math.Floor(math.Log10(x))
	figure := math.Ceil(x/math.Pow(10, exponent) - 1e-9)
	if figure == 10 {
		figure, exponent = 1, exponent+1
	}
	return fmt.Sprintf("%.0fe%.0f", figure, exponent)
}

// field tells how wide the field is.
func (p Picture) field() string {
	switch p.Scene.Field.Projection {
	case allSky:
		return "field: the whole sky"
	case parallel:
	default:
		return fmt.Sprintf("field %.4g deg", 2*math.Atan(p.Width/2)*180/math.Pi)
	}
	text := fmt.Sprintf("field %.4g M", p.Width)
	if theta, ok := p.Scene.ThetaG(); ok && math.IsInf(p.Scene.Observer.Radius, 1) {
		text += fmt.Sprintf(" = %.4g µas", p.Width*theta)
	}
	return text
}

// Working says how far a long trace is.
func Working(done, tiles int) string {
	if tiles <= 0 {
		return "tracing …"
	}
	return fmt.Sprintf("tracing, %d %% …", 100*done/tiles)
}
