package raytrace

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"annulet/geodesic"
)

// Difference is how far a quantity of the image is from its closed form.
type Difference struct {
	Worst, Median float64
	Compared      int
}

// Audit compares paths of an image with closed forms.
type Audit struct {
	Paths     int // pixels drawn, with replacement
	Crossings int // of these paths with what shines, compared
	// Missed crossings are in the image and not in the closed form, or the
	// other way round: paths that graze a rim or end at one.
	Missed    int
	R         Difference // relative; of crossings of the disk plane
	G         Difference // relative
	Delay     Difference // M
	Angle     Difference // radians, of the place on star or sky
	Intensity Difference // of the pixel's total, relative to the brightest of the sample
	Shared    int        // paths taken from shared orbits; the others were integrated
}

// ErrNoAudit: no closed form judges this scene.
var ErrNoAudit = errors.New("there is no closed form for paths of this object and observer (closed forms: an uncharged hole or an opaque star, from outside)")

// Audit draws samples of the field's pixels, seeded, and compares the path of
// each pixel's centre, followed as Render follows it, with its closed form.
func (v *View) Audit(ctx context.Context, samples int, seed uint64) (*Audit, error) {
	round, ok := v.Spacetime.(*geodesic.Round)
	if !ok {
		return nil, ErrNoAudit
	}
	closed, err := round.ClosedTracer(v.Observer, v.Plan)
	if errors.Is(err, geodesic.ErrNoClosedForm) {
		return nil, ErrNoAudit
	}
	if err != nil {
		return nil, err
	}
	table, err := v.shared(ctx, 0, true)
	if err != nil {
		return nil, err
	}
	image, err := v.newBench(table)
	if err != nil {
		return nil, err
	}
	judge, err := v.newBench(nil)
	if err != nil {
		return nil, err
	}
	judge.tracer = closed
	random := rand.New(rand.NewPCG(seed, 0))
	want := geodesic.Want{Delay: true, Slope: v.Plan.Sky}
	a := &Audit{Paths: samples}
	var s spreads
	for left := samples; left > 0; {
		if err := ctx.Err(); err != nil {
			return nil, fmt.Errorf("raytrace: audit: %w", err)
		}
		n := min(left, probeBlock)
		left -= n
		image.screen = image.screen[:0]
		for range n {
			x, y := v.Field.PixelCenter(random.IntN(v.Field.Columns), random.IntN(v.Field.Rows))
			image.screen = append(image.screen, [2]float64{x, y})
		}
		judge.screen = append(judge.screen[:0], image.screen...)
		integrated, err := image.follow(want)
		if err != nil {
			return nil, err
		}
		a.Shared += n - integrated
		if _, err := judge.follow(want); err != nil {
			return nil, err
		}
		image.shade()
		judge.shade()
		for k := range n {
			s.compare(a, image, judge, k)
		}
	}
	brightest := 0.0
	for _, pair := range s.totals {
		brightest = max(brightest, pair[0], pair[1])
	}
	for _, pair := range s.totals {
		if brightest > 0 {
			s.intensity = append(s.intensity, math.Abs(pair[0]-pair[1])/brightest)
		}
	}
	a.R, a.G, a.Delay, a.Angle, a.Intensity = summary(s.r), summary(s.g), summary(s.delay), summary(s.angle), summary(s.intensity)
	return a, nil
}

// spreads are the differences so far.
type spreads struct {
	r, g, delay, angle, intensity []float64
	totals                        [][2]float64 // of each pixel, image and closed form
}

// compare takes ray k of both.
func (s *spreads) compare(a *Audit, image, judge *bench, k int) {
	type lit struct {
		sight
		j int32
	}
	list := func(b *bench) (all []lit, total float64) {
		through := 1.0
		for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
			seen, shines, passes := b.look(j)
			seen.intensity *= through
			through *= passes
			if shines {
				all = append(all, lit{seen, j})
				total += seen.intensity
			}
			if through == 0 {
				break
			}
		}
		return all, total
	}
	got, total := list(image)
	want, wanted := list(judge)
	s.totals = append(s.totals, [2]float64{total, wanted})
	for _, x := range got {
		at := slices.IndexFunc(want, func(y lit) bool {
			return judge.at.Surface[y.j] == image.at.Surface[x.j] && judge.at.Order[y.j] == image.at.Order[x.j]
		})
		if at < 0 {
			a.Missed++
			continue
		}
		y := want[at]
		want = slices.Delete(want, at, at+1)
		a.Crossings++
		s.g = append(s.g, math.Abs(x.g/y.g-1))
		if image.at.Surface[x.j] == geodesic.Plane {
			s.r = append(s.r, math.Abs(image.at.R[x.j]/judge.at.R[y.j]-1))
		} else {
			s.angle = append(s.angle, apart(&image.at, x.j, &judge.at, y.j))
		}
		if image.at.Surface[x.j] != geodesic.Sky {
			s.delay = append(s.delay, math.Abs(image.at.Delay[x.j]-judge.at.Delay[y.j]))
		}
	}
	a.Missed += len(want)
}

// apart is the angle between two places on star or sky.
func apart(a *geodesic.Crossings, i int32, b *geodesic.Crossings, j int32) float64 {
	sinA, sinB := math.Sqrt(max(0, 1-a.CosTheta[i]*a.CosTheta[i])), math.Sqrt(max(0, 1-b.CosTheta[j]*b.CosTheta[j]))
	half := math.Sin((a.Phi[i] - b.Phi[j]) / 2)
	up, out := a.CosTheta[i]-b.CosTheta[j], sinA-sinB
	chord := math.Sqrt(out*out + 4*sinA*sinB*half*half + up*up) // keeps its digits for small angles
	return 2 * math.Asin(min(1, chord/2))
}

func summary(off []float64) Difference {
	if len(off) == 0 {
		return Difference{Worst: math.NaN(), Median: math.NaN()}
	}
	slices.Sort(off)
	return Difference{Worst: off[len(off)-1], Median: off[len(off)/2], Compared: len(off)}
}
