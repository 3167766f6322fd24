package emit

import "math"

// Grid is a drawn sky for finding one's way: parallels and meridians every
// 15 deg, told apart by width, dashes and lightness alone. Meridians are
// solid, parallels dashed and darker, the equator is solid and wide, and the
// meridian of azimuth 0 a double line. The pole N is a disk, the other one a
// ring, and the half of the sky around N is a little lighter.
type Grid struct{}

// NewGrid returns the grid.
func NewGrid() *Grid { return &Grid{} }

// The drawing, in degrees of arc and brightness. Taste.
const (
	gridStep       = 15 * math.Pi / 180
	lineHalf       = 0.22 * math.Pi / 180
	equatorHalf    = 0.45 * math.Pi / 180
	doubleOuter    = 1.1 * math.Pi / 180
	doubleInner    = 0.45 * math.Pi / 180
	dashStep       = 5 * math.Pi / 180 // three to a step, on the meridians too
	dashHalf       = 1.25 * math.Pi / 180
	meridianEnds   = 15 * math.Pi / 180 // from a pole; those every 90 deg go on
	poleDisk       = 4 * math.Pi / 180
	poleHole       = 2.5 * math.Pi / 180
	northGround    = 0.06
	southGround    = 0.015
	parallelShade  = 0.3
	meridianShade  = 0.5
	equatorShade   = 0.8
	zeroShade      = 1
	poleShade      = 1
	everyQuarter   = math.Pi / 2
	wholeTurn      = 2 * math.Pi
	thinnestCircle = 1e-6 // sin θ next to a pole
)

// over draws the grid: each line covers as much of a pixel as a box of the
// footprint's variance across the line says.
func (*Grid) over(f *footprint) float64 {
	theta, phi, du, dv := f.angles()
	wTheta, wPhi := math.Hypot(du[0], dv[0]), math.Hypot(du[1], dv[1])
	// half a line's width in azimuth, for a width in arc
	sinTheta := max(math.Sin(theta), thinnestCircle)
	narrow := func(half, step float64) float64 { return min(half/sinTheta, step/2) }

	north := covered(theta, 0, math.Pi/2, wTheta)
	shade := southGround + (northGround-southGround)*north
	paint := func(value, cover float64) { shade += (value - shade) * cover }
	paint(parallelShade, striped(theta, gridStep, lineHalf, wTheta)*striped(phi, dashStep, dashHalf, wPhi))
	away := covered(theta, meridianEnds, math.Pi-meridianEnds, wTheta)
	meridians := striped(phi, gridStep, narrow(lineHalf, gridStep), wPhi) * away
	quarters := striped(phi, everyQuarter, narrow(lineHalf, everyQuarter), wPhi)
	paint(meridianShade, max(meridians, quarters))
	paint(equatorShade, covered(theta, math.Pi/2-equatorHalf, math.Pi/2+equatorHalf, wTheta))
	paint(southGround, striped(phi, wholeTurn, narrow(doubleInner, wholeTurn), wPhi))
	paint(zeroShade, striped(phi, wholeTurn, narrow(doubleOuter, wholeTurn), wPhi)-striped(phi, wholeTurn, narrow(doubleInner, wholeTurn), wPhi))
	paint(poleShade, covered(theta, 0, poleDisk, wTheta))
	paint(southGround, covered(theta, math.Pi-poleHole, math.Pi, wTheta))
	paint(poleShade, covered(theta, math.Pi-poleDisk, math.Pi-poleHole, wTheta))
	return shade
}

// covered is the share of a box of that width around x within [from, to].
// The box is reflected at the poles.
func covered(x, from, to, width float64) float64 {
	if width < 1e-12 {
		if x >= from && x <= to {
			return 1
		}
		return 0
	}
	lo, hi := x-width/2, x+width/2
	share := overlap(lo, hi, from, to)
	if lo < 0 {
		share += overlap(0, -lo, from, to)
	}
	if hi > math.Pi {
		share += overlap(2*math.Pi-hi, math.Pi, from, to)
	}
	return share / width
}

func overlap(a, b, c, d float64) float64 { return max(0, min(b, d)-max(a, c)) }

// striped is the share of a box of that width around x within stripes around
// the multiples of step.
func striped(x, step, half, width float64) float64 {
	if width < 1e-12 {
		if math.Abs(math.Remainder(x, step)) <= half {
			return 1
		}
		return 0
	}
	upTo := func(x float64) float64 { // length of stripes from -half to x
		whole := math.Floor((x + half) / step)
		return whole*2*half + min(x+half-whole*step, 2*half)
	}
	return (upTo(x+width/2) - upTo(x-width/2)) / width
}
