package geodesic

import "math"

// flat is the inside of a thin shell: ds² = -A dt² + dr² + r² dΩ² with A that
// of the shell's outside, so that t is continuous. Light goes straight; its
// angle in the local static frames is the same on both sides of the shell,
// sin θ = b √A/R. Source: Israel, Nuovo Cimento 44B, 1 (1966), for the
// junction; the rest is flat geometry.
type flat struct{ radius, lapse float64 }

func newFlat(r float64) *flat { return &flat{r, math.Sqrt(1 - 2/r)} }

// closest is the distance of the straight line from the centre.
func (f *flat) closest(b float64) float64 { return b * f.lapse }

func (f *flat) Radius(b, phi float64) float64 { return f.closest(b) / math.Cos(phi) }

func (f *flat) Phase(b, r, w float64) float64 { return math.Atan2(w, 1/r) }

// PhaseSlope is that of cos φ = b √A/r.
func (f *flat) PhaseSlope(b, r, w float64) float64 { return -1 / (r * b * w) }

func (f *flat) Time(b, phi float64) float64 { return b * math.Tan(phi) }

func (f *flat) TimeTo(b, r, w float64) float64 { return b * w * r }

func (f *flat) Lapse(float64) float64 { return f.lapse }

func (f *flat) Ruler(float64) float64 { return 1 }

func (f *flat) TortoiseBelow(r float64) float64 { return (f.radius - r) / f.lapse }
