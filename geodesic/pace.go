package geodesic

import "math"

// pace is the step-size control of one path: proportional-integral, Hairer,
// Nørsett & Wanner (1993), section II.4, with their exponents.
type pace struct {
	perU, perW float64 // 1 over the local error allowed in u and in w
	h          float64 // next step to try
	logPrev    float64 // log2 of the last accepted error ratio
	ratio      float64 // error estimate of the last trial over what is allowed
	spent      float64 // sum of the accepted ratios
	tolerance  float64 // local, relative
	first      float64 // first step of a path that is not nearly radial
	trueLocal  float64 // relative error of an accepted step of ratio 1
	accepted   int
	tried      int
}

const (
	stepSafety = 0.9             // Hairer et al., fac
	stepShrink = 0.2             // largest change of step downwards
	stepGrow   = 5.0             // and upwards
	piOld      = 0.04            // Hairer et al., β
	piNew      = 0.2 - 0.75*0.04 // 1/5 - 3β/4
	logCalm    = -13.3           // log2 1e-4, floor of logPrev, as in their code
	// ratioFloor keeps the logarithm finite where the estimate vanishes;
	// the step then grows by stepGrow.
	ratioFloor = 1e-10
	// firstStep sets the first trial step in units of tolerance^(1/5)
	// radians, firstShare limits it to a share of the angle b over which a
	// plunging path ends. Taste: the control mends both within two steps.
	firstStep  = 8.0
	firstShare = 0.25
	// longestStep, radians, keeps loose tolerances where the error estimate
	// can be believed. Method: TestBoundsCover at 1e-4 and 1e-6.
	longestStep = 0.5
)

// plungeScale is the size of u near the hole. Errors of u are measured
// against it or against 1/b, the largest u of a path that stays far away.
const plungeScale = 1. / 3

// newPace prepares the control for paths of one tolerance.
func newPace(tolerance float64) pace {
	root := math.Pow(tolerance, 0.2)
	return pace{
		tolerance: tolerance,
		first:     min(firstStep*root, longestStep),
		trueLocal: extrapolated * tolerance * root,
	}
}

// start begins a path of impact parameter b.
func (c *pace) start(b float64) {
	c.perU = 1 / (c.tolerance * min(1/b, plungeScale))
	c.perW = b / c.tolerance
	c.spent, c.accepted, c.tried = 0, 0, 0
	c.restart(b)
}

// restart begins a further leg of the same path.
func (c *pace) restart(b float64) {
	c.h = min(c.first, firstShare*b)
	c.logPrev = logCalm
}

// judge says whether a trial of length h with these error estimates stands,
// and sets the length of the next one.
func (c *pace) judge(h, errU, errW float64) bool {
	c.tried++
	c.ratio = max(math.Abs(errU)*c.perU, math.Abs(errW)*c.perW)
	if !(c.ratio < math.MaxFloat64) { // the trial ran away
		c.h = h * stepShrink
		return false
	}
	logRatio := roughLog2(c.ratio + ratioFloor)
	if c.ratio > 1 {
		c.h = h * max(stepShrink, stepSafety*roughExp2(-piNew*logRatio))
		return false
	}
	grow := stepSafety * roughExp2(piOld*c.logPrev-piNew*logRatio)
	c.h = min(longestStep, h*min(stepGrow, max(stepShrink, grow)))
	c.logPrev = max(logRatio, logCalm)
	c.spent += max(c.ratio, leastRatio)
	c.accepted++
	return true
}

const (
	// roundoff is the relative rounding error of a step that the bounds
	// assume. Taste: four units in the last place.
	roundoff = 1e-15
	// extrapolated is the ratio of the true local error to
	// (error estimate)^(6/5). The estimate is that of the fourth-order
	// solution, of order h⁵; the path goes on with the fifth-order one, whose
	// error is of order h⁶. Method: measured by TestBoundsCover.
	extrapolated = 8.0
	// leastRatio is counted where the estimate is smaller: it can vanish by
	// chance where the error does not. Method, as above.
	leastRatio = 0.4
)

// local sums the relative local errors of the steps so far.
func (c *pace) local() float64 {
	return c.trueLocal*c.spent + roundoff*float64(c.accepted)
}

// roughLog2 and roughExp2 serve the choice of the step, which is free: they
// are right to 1 % and cost a tenth of math.Log and math.Exp.

// roughLog2 returns log2 x for normal x > 0 to within 0.01.
func roughLog2(x float64) float64 {
	bits := math.Float64bits(x)
	exponent := float64(int(bits>>52) - 1023)
	m := math.Float64frombits(bits&(1<<52-1)|1023<<52) - 1 // mantissa less 1, in [0, 1)
	return exponent + m*(1+0.3443*(1-m))                   // chord plus parabola, 4 (log2 1.5 - 1/2) at m = 1/2
}

// roughExp2 returns 2^x for |x| < 1000 to within 1 %.
func roughExp2(x float64) float64 {
	whole := math.Floor(x)
	m := x - whole
	return math.Float64frombits(uint64(int(whole)+1023)<<52) * (1 + m*(1-0.3431*(1-m)))
}
