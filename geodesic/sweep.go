package geodesic

import "math"

// SweepAll integrates many Schwarzschild light paths that leave inverse
// radius uObs inward, each until it is back at uObs or reaches uEnd >= 1/3 on
// the way in, and stores the angle swept, in radians, and whether it was
// captured. Impact parameters b are in M, all with a path from uObs;
// tolerance is that of pace. The slices have one entry a path.
//
// Three paths advance in turn in one loop: each step depends on the one
// before, and a processor works on all three while it waits.
func SweepAll(uObs, uEnd, tolerance float64, b, swept []float64, captured []bool) {
	var lanes [3]lane
	next := 0
	load := func(l *lane) {
		l.path = -1
		if next < len(b) {
			l.start(next, uObs, b[next], tolerance)
			next++
		}
	}
	for k := range lanes {
		lanes[k].uObs, lanes[k].uEnd = uObs, uEnd
		load(&lanes[k])
	}
	for lanes[0].path >= 0 || lanes[1].path >= 0 || lanes[2].path >= 0 {
		for k := range lanes {
			l := &lanes[k]
			if l.path >= 0 && l.advance() {
				swept[l.path], captured[l.path] = l.finish()
				load(l)
			}
		}
	}
}

// lane is a path in hand, with the step control of pace and nothing that
// rides along.
type lane struct {
	u, w, f    float64 // at the start of the step; f = u″
	u1, w1, f1 float64 // at its end
	psi, h     float64
	perU, perW float64
	logPrev    float64
	uObs, uEnd float64
	b          float64
	path       int // index, -1 for an empty lane
}

func (l *lane) start(path int, uObs, b, tolerance float64) {
	l.path, l.b = path, b
	l.u, l.psi = uObs, 0
	l.w = math.Sqrt(max(0, 1/(b*b)-uObs*uObs*(1-2*uObs)))
	l.f = bend(uObs, 0)
	l.perU = 1 / (tolerance * min(1/b, plungeScale))
	l.perW = b / tolerance
	l.h = min(laneFirst, firstShare*b)
	l.logPrev = logCalm
}

// laneFirst is the first step of a lane, radians. Taste.
const laneFirst = 0.1

// fold is orbit.try without the stages: the step of length h from (u, w)
// with f = u″, no charge.
func fold(u, w, f, h float64) (u7, w7, f7, errU, errW float64) {
	hw, hh := h*w, h*h
	u2 := u + 1./5*hw
	f2 := u2 * (3*u2 - 1)
	u3 := u + 3./10*hw + hh*(g31*f)
	f3 := u3 * (3*u3 - 1)
	u4 := u + 4./5*hw + hh*(g41*f+g42*f2)
	f4 := u4 * (3*u4 - 1)
	u5 := u + 8./9*hw + hh*(g51*f+g52*f2+g53*f3)
	f5 := u5 * (3*u5 - 1)
	u6 := u + hw + hh*(g61*f+g62*f2+g63*f3+g64*f4)
	f6 := u6 * (3*u6 - 1)
	u7 = u + hw + hh*(g71*f+g73*f3+g74*f4+g75*f5)
	f7 = u7 * (3*u7 - 1)
	w7 = w + h*(a71*f+a73*f3+a74*f4+a75*f5+a76*f6)
	errU = hh * (eg1*f + eg2*f2 + eg3*f3 + eg4*f4 + eg5*f5 + eg6*f6)
	errW = h * (e1*f + e3*f3 + e4*f4 + e5*f5 + e6*f6 + e7*f7)
	return u7, w7, f7, errU, errW
}

// advance tries one step; it returns true when the step reaches an end.
func (l *lane) advance() bool {
	h := l.h
	u, w, f, errU, errW := fold(l.u, l.w, l.f, h)
	ratio := max(math.Abs(errU)*l.perU, math.Abs(errW)*l.perW)
	logRatio := roughLog2(ratio + ratioFloor)
	if !(ratio <= 1) {
		l.h = h * max(stepShrink, stepSafety*roughExp2(-piNew*logRatio))
		if !(ratio < math.MaxFloat64) {
			l.h = h * stepShrink
		}
		return false
	}
	if w > 0 && u >= l.uEnd || w < 0 && u <= l.uObs {
		l.u1, l.w1, l.f1 = u, w, f
		return true
	}
	grow := stepSafety * roughExp2(piOld*l.logPrev-piNew*logRatio)
	l.h = min(longestStep, h*min(stepGrow, max(stepShrink, grow)))
	l.logPrev = max(logRatio, logCalm)
	l.psi += h
	l.u, l.w, l.f = u, w, f
	return false
}

// finish ends the last step on the end it overshot; see roundTracer.finish.
func (l *lane) finish() (swept float64, captured bool) {
	end := l.uObs
	if captured = l.w1 > 0; captured {
		end = l.uEnd
	}
	// Newton's method on the quintic, from the chord
	h := l.h
	theta := (end - l.u) / (l.u1 - l.u)
	if !captured {
		theta = 1 - (end-l.u1)/(l.w1*-h)
	}
	theta = min(1, max(0, theta))
	for range 4 {
		off := quintic(theta, h, l.u, l.u1, l.w, l.w1, l.f, l.f1) - end
		theta -= off / (h * dense(theta, h, l.w, l.w1, l.f, l.f1, 0))
	}
	h *= theta
	u, w, f, _, _ := fold(l.u, l.w, l.f, h)
	exact := math.Copysign(math.Sqrt(max(0, 1/(l.b*l.b)-end*end*(1-2*end))), w)
	rest := ((end-u)*w + (exact-w)*f) / (w*w + f*f)
	return l.psi + h + rest, captured
}
