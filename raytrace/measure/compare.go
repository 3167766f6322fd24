package measure

import "math"

// Angle is one on the sky with the user's error, both in one unit.
type Angle struct{ Value, Sigma float64 }

// Comparison holds a model's ring against a measured one.
type Comparison struct {
	Model    Angle // the model's diameter; its error is that of the scale
	Measured Angle
	// Implied is the angular scale GM/(c² D) at which the model's diameter
	// is the measured one. Nothing else of the model is varied.
	Implied Angle
	// Sigmas is (model - measured) over their errors combined; NaN if
	// neither has any.
	Sigmas float64
	// Critical is the diameter of the critical curve. Rings are not the
	// critical curve: their ratio tests nothing.
	Critical Angle
}

// Compare scales a ring's diameter in M with the angle that M has on the sky
// (scale) and holds it against a measurement of the same estimator.
func Compare(diameter, critical float64, scale, measured Angle) Comparison {
	c := Comparison{
		Model:    Angle{diameter * scale.Value, diameter * scale.Sigma},
		Measured: measured,
		Implied:  Angle{measured.Value / diameter, measured.Sigma / diameter},
		Critical: Angle{critical * scale.Value, critical * scale.Sigma},
		Sigmas:   math.NaN(),
	}
	if sigma := math.Hypot(c.Model.Sigma, measured.Sigma); sigma > 0 {
		c.Sigmas = (c.Model.Value - measured.Value) / sigma
	}
	return c
}
