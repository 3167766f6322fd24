package raytrace

import (
	"fmt"
	"math"
	"slices"

	"annulet/raytrace/emit"
)

// AtTime returns the view at t = t_obs - r*(r_obs), M: spots and turning
// stars have moved on. What is traced for v serves it.
func (v *View) AtTime(t float64) *View {
	moved := *v
	moved.Emitters = slices.Clone(v.Emitters)
	for k, e := range v.Emitters {
		switch e := e.(type) {
		case *emit.Spot:
			spot := *e
			spot.Time = t
			moved.Emitters[k] = &spot
		case *emit.Surface:
			surface := *e
			surface.Time = t
			moved.Emitters[k] = &surface
		}
	}
	return &moved
}

// Frequencies returns the observed frequencies of the scene, Hz.
func (v *View) Frequencies() []float64 { return v.scene.Field.Frequency }

// WithFrequency returns the view at the kth of the scene's frequencies;
// views are made at the first one. Geometry does not depend on it: trace
// once, shade every frequency. Power-law spectra are normalised at the first
// frequency.
func (v *View) WithFrequency(k int) (*View, error) {
	all := v.Frequencies()
	if k < 0 || k >= len(all) {
		return nil, fmt.Errorf("raytrace: frequency %d of %d", k, len(all))
	}
	tuned := *v
	tuned.Emitters = slices.Clone(v.Emitters)
	tuned.frequency = k
	for i, e := range tuned.Emitters {
		spectrum := math.Pow(all[k]/all[v.frequency], v.scene.Emitters[i].SpectralIndex)
		hertz := all[k] * (1 + v.scene.Object.Redshift)
		switch e := e.(type) {
		case *emit.Disk:
			tuned.Emitters[i] = e.Tuned(hertz, spectrum)
		case *emit.Spot:
			if on := v.scene.SpotDisk(v.scene.Emitters[i]); on >= 0 {
				spectrum = math.Pow(all[k]/all[v.frequency], v.scene.Emitters[on].SpectralIndex)
			}
			tuned.Emitters[i] = e.Tuned(hertz, spectrum)
		case *emit.Surface:
			tuned.Emitters[i] = e.Tuned(hertz, spectrum)
		case *emit.Sky:
			sky := *e
			sky.Scale *= spectrum
			tuned.Emitters[i] = &sky
		}
	}
	return &tuned, nil
}

// TemperatureAt returns the effective temperature of the gas at r, M, of the
// first blackbody disk that holds it, K, as emitted there; NaN elsewhere.
func (v *View) TemperatureAt(r float64) float64 {
	for _, e := range v.Emitters {
		if d, ok := e.(*emit.Disk); ok {
			if t := d.Temperature(r); !math.IsNaN(t) {
				return t
			}
		}
	}
	return math.NaN()
}
