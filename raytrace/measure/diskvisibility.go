package measure

import (
	"context"
	"math"
	"math/cmplx"

	"annulet/raytrace"
)

// Lines for the longest baseline. Method: about a radian of phase from line
// to line along a ring near the critical curve.
const (
	linesPerCycle       = 500 // times M
	mostVisibilityLines = 8000
)

// DiskVisibilities returns the visibility of the whole images of all disks at
// frequencies along α and β, cycles per M, order by order: order, then place.
// No pixel is in it, so that baselines may be long: a patch counts with its
// own size, as a parallelogram of even brightness. The field must be parallel.
func DiskVisibilities(ctx context.Context, v *raytrace.View, at [][2]float64, o Options) ([][]Visibility, error) {
	if !v.Field.IsParallel() {
		return nil, cannot("the field is not parallel")
	}
	if o.Lines <= 0 {
		longest := 0.0
		for _, p := range at {
			longest = max(longest, math.Hypot(p[0], p[1]))
		}
		o.Lines = max(defaultLines, int(min(mostVisibilityLines, linesPerCycle*longest)))
	}
	o = o.filled()
	s, err := newSampler(ctx, v, false, o)
	if err != nil {
		return nil, err
	}
	_, emitters := disks(v)
	if len(emitters) == 0 {
		return nil, cannot("the scene has no disk")
	}
	var orders [][]Visibility
	for n := range v.Plan.MaxOrder + 1 {
		var all []patch
		for _, disk := range emitters {
			lines, err := s.image(ctx, disk, n)
			if err != nil {
				return nil, err
			}
			for _, line := range lines {
				for _, p := range line {
					if p.intensity > 0 {
						all = append(all, p)
					}
				}
			}
		}
		order := make([]Visibility, len(at))
		shared(len(at), func() struct{} { return struct{}{} }, func(_ struct{}, k int) {
			if ctx.Err() == nil {
				order[k] = Visibility{at[k][0], at[k][1], patchSum(all, at[k][0], at[k][1])}
			}
		})
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		orders = append(orders, order)
		if o.Report != nil {
			o.Report(n+1, v.Plan.MaxOrder+1)
		}
	}
	return orders, nil
}

// patchSum is ∫ I exp(-2πi(uα + vβ)) over patches.
func patchSum(all []patch, u, v float64) (sum complex128) {
	for k := range all {
		p := &all[k]
		phase := u*p.alpha + v*p.beta
		b := math.Hypot(p.alpha, p.beta)
		out, round := 0.0, (v*p.alpha-u*p.beta)*p.turn
		if b > 0 {
			out = phase / b * p.span
		}
		sum += cmplx.Rect(p.area*p.intensity*sinc(out)*sinc(round), -2*math.Pi*phase)
	}
	return sum
}
