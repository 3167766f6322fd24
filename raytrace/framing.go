package raytrace

import (
	"math"

	"annulet/geodesic"
	"annulet/raytrace/emit"
)

const (
	// framingMargin is what width = "auto" leaves around everything that
	// shines; the design's 5 %.
	framingMargin = 1.05
	// framingAngles is how many points of a rim's image are looked at.
	// Method: the extent between two of them is missed by less than 1e-3.
	framingAngles = 256
	// widestPerspective limits an automatic perspective field, whose tangent
	// plane cannot hold a half-space. Taste.
	widestPerspective = 120 * math.Pi / 180
)

// autoWidth returns the width that shows the images of all disks, of every
// order up to maxOrder, plus the margin, in screen coordinates.
func autoWidth(f Field, o geodesic.Observer, disks []*emit.Disk, maxOrder int) float64 {
	sinI, cosI := math.Sincos(o.InclinationDeg * math.Pi / 180)
	if o.InclinationDeg == 90 {
		cosI = 0
	}
	lapse := geodesic.Lapse(o.Radius)
	half := 0.0
	for _, d := range disks {
		for k := range framingAngles {
			sinS, cosS := math.Sincos(2 * math.Pi * float64(k) / framingAngles)
			for n := range maxOrder + 1 {
				psi := geodesic.FirstPlaneAngle(sinI, cosI, sinS) + float64(n)*math.Pi
				size := geodesic.RimImpact(1/o.Radius, psi, d.Outer)
				if !f.Parallel { // b to the tangent plane
					size = math.Tan(math.Asin(min(1, size*lapse/o.Radius)))
				}
				across := math.Abs(size*cosS - f.Center[0])
				up := math.Abs(size*sinS-f.Center[1]) * float64(f.Columns) / float64(f.Rows)
				half = max(half, across, up)
			}
		}
	}
	if half == 0 { // nothing shines: frame the critical curve
		half = 2 * geodesic.CriticalImpact
		if !f.Parallel {
			half = 2 * math.Tan(math.Asin(min(0.5, geodesic.CriticalImpact*lapse/o.Radius)))
		}
	}
	width := 2 * half * framingMargin
	if !f.Parallel {
		width = min(width, 2*math.Tan(widestPerspective/2))
	}
	return width
}
