package raytrace

import (
	"context"
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
	// skyFrame and darkFrame are how many critical impact parameters an
	// automatic field reaches to if only the sky shines, or nothing. Taste.
	skyFrame, darkFrame = 4, 2
)

// autoWidth returns the width that shows the images of all disks and the
// star's surface, of every order, plus the margin, in screen coordinates.
// The sky shines everywhere and does not count.
func autoWidth(v *View, object *geodesic.Round) (float64, error) {
	f, o := v.Field, v.Observer
	var half float64
	_, bent := v.Spacetime.(*geodesic.Round)
	plain := bent && o.Motion == geodesic.Static && object.PhotonSphere() == geodesic.PhotonSphere && o.Radius > max(geodesic.PhotonSphere, object.Edge())
	if plain {
		half = exactReach(v, object)
	} else {
		var err error
		if half, err = probedReach(v); err != nil {
			return 0, err
		}
	}
	if half == 0 { // frame the critical curve
		half = darkFrame * object.CriticalImpact()
		if v.Plan.Sky {
			half = skyFrame * object.CriticalImpact()
		}
		if !f.IsParallel() {
			sin := half * object.Lapse(o.Radius) / o.Radius
			half = math.Inf(1) // as wide as a perspective field gets
			if sin < 1 && o.Radius > object.PhotonSphere() {
				half = tangent(sin)
			}
		}
	}
	width := 2 * half * framingMargin
	if !f.IsParallel() {
		width = min(width, 2*math.Tan(widestPerspective/2))
	}
	return width, nil
}

// tangent is tan a for a given sin a, no more than 1.
func tangent(sin float64) float64 { return math.Tan(math.Asin(min(1, sin))) }

// reach is how far a field of this shape must go from its centre to hold a
// point of the screen.
func (f Field) reach(alpha, beta float64) float64 {
	return max(math.Abs(alpha-f.Center[0]), math.Abs(beta-f.Center[1])*float64(f.Columns)/float64(f.Rows))
}

// exactReach is the reach of everything that shines, by closed form, for a
// static observer outside an object without charge.
func exactReach(v *View, object *geodesic.Round) (half float64) {
	f, o := v.Field, v.Observer
	sinI, cosI := geodesic.SinCosDeg(o.InclinationDeg)
	lapse := object.Lapse(o.Radius)
	size := func(b float64) float64 {
		if f.IsParallel() {
			return b
		}
		return tangent(b * lapse / o.Radius)
	}
	for _, e := range v.Emitters {
		for k := range framingAngles {
			sinS, cosS := math.Sincos(2 * math.Pi * float64(k) / framingAngles)
			switch e := e.(type) {
			case *emit.Disk, *emit.Spot:
				for n := range v.Plan.MaxOrder + 1 {
					psi := geodesic.FirstPlaneAngle(sinI, cosI, sinS) + float64(n)*math.Pi
					rim := size(geodesic.RimImpact(1/o.Radius, psi, outerRim(e)))
					half = max(half, f.reach(rim*cosS, rim*sinS))
				}
			case *emit.Surface: // its limb; inside 3 M light circles the photon sphere first
				limb := size(geodesic.ImpactAtPeriapsis(max(e.Radius, geodesic.PhotonSphere)))
				half = max(half, f.reach(limb*cosS, limb*sinS))
			}
		}
	}
	return half
}

// outerRim is the largest radius, M, of what shines in the disk plane.
func outerRim(e Emitter) float64 {
	switch e := e.(type) {
	case *emit.Disk:
		return e.Outer
	case *emit.Spot:
		return e.Outer()
	}
	return 0
}

// probedReach is the reach of everything but the sky that shines, by tracing
// a fan of lines of sight. Features thinner than its steps may be missed;
// nobody sees them at that scale.
func probedReach(v *View) (half float64, err error) {
	const angles, steps, finer = 64, 192, 12
	fan := *v
	fan.Emitters, fan.Plan.Sky = nil, false
	far := math.Tan(widestPerspective / 2)
	for _, e := range v.Emitters {
		switch e.(type) {
		case *emit.Sky:
			continue
		case *emit.Disk, *emit.Spot:
			if v.Field.IsParallel() {
				far = max(far, 2*outerRim(e)+4*geodesic.CriticalImpact)
			}
		}
		fan.Emitters = append(fan.Emitters, e)
	}
	if len(fan.Emitters) == 0 {
		return 0, nil
	}
	var cos, sin, lo, hi [angles]float64
	for k := range angles {
		sin[k], cos[k] = math.Sincos(2 * math.Pi * float64(k) / angles)
	}
	lit := func(at [][2]float64, found func(alpha, beta float64)) error {
		readings, err := fan.Probe(context.Background(), at)
		for _, r := range readings {
			found(r.Alpha, r.Beta)
		}
		return err
	}
	step := far / steps
	for k := range angles {
		var at [][2]float64
		for n := range steps {
			rho := step * float64(n+1)
			at = append(at, [2]float64{rho * cos[k], rho * sin[k]})
		}
		err := lit(at, func(alpha, beta float64) { lo[k] = max(lo[k], math.Hypot(alpha, beta)) })
		if err != nil {
			return 0, err
		}
		hi[k] = lo[k] + step
	}
	for range finer { // halve towards the outermost edge
		for k := range angles {
			mid := (lo[k] + hi[k]) / 2
			bright := false
			err := lit([][2]float64{{mid * cos[k], mid * sin[k]}}, func(float64, float64) { bright = true })
			if err != nil {
				return 0, err
			}
			if bright {
				lo[k] = mid
			} else {
				hi[k] = mid
			}
		}
	}
	for k := range angles {
		if lo[k] > 0 {
			half = max(half, v.Field.reach(hi[k]*cos[k], hi[k]*sin[k]))
		}
	}
	return half, nil
}
