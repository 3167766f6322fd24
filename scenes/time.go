package scenes

import "math"

// maxFrames bounds the frames of [time]. Taste.
const maxFrames = 100_000

// defaultSteps is how many steps lead from start to end. Taste.
const defaultSteps = 100

// time reads when frames are taken.
func (b *builder) time() {
	get := func(key string) reading { return b.get("time", 0, key) }
	t := &b.scene.Time
	t.Start = b.span(get("start"))
	t.End = t.Start
	end, step := get("end"), get("step")
	if step.given {
		t.Step = b.span(step)
	}
	if end.given {
		t.End = b.span(end)
	}
	switch {
	case t.End < t.Start:
		b.failAt(end, Error{Problem: "the end lies before the start", Allowed: formatNumber(t.Start) + " M or more"})
	case t.End > t.Start && !step.given:
		t.Step = (t.End - t.Start) / defaultSteps
	case t.End > t.Start && (t.End-t.Start)/t.Step > maxFrames:
		b.failAt(step, Error{Problem: "too many frames", Allowed: "at least " + formatShort((t.End-t.Start)/maxFrames) + " M, for " + formatNumber(maxFrames) + " frames"})
	}
}

// Frames returns the times of all frames, M.
func (t Time) Frames() []float64 {
	frames := []float64{t.Start}
	if t.Step <= 0 {
		return frames
	}
	// an end that the steps miss by rounding is met
	n := int(math.Floor((t.End-t.Start)/t.Step*(1+1e-12) + 1e-9))
	for k := 1; k <= n; k++ {
		frames = append(frames, t.Start+float64(k)*t.Step)
	}
	return frames
}

// span converts a duration to M of the object's own time: seconds are those
// of the observer, longer by 1 + z; an orbit is the period of the first spot.
func (b *builder) span(r reading) float64 {
	q := r.numbers[0]
	u := orDefault(q.unit, r.key.Unit)
	switch u.base {
	case "s":
		q.value /= 1 + b.scene.Object.Redshift
	case "orbit":
		for _, e := range b.scene.Emitters {
			if e.Kind == spot {
				q.value *= b.scene.Object.OrbitalPeriod(e.Radius)
				u, _ = findUnit("M")
				break
			}
		}
		if u.base == "orbit" {
			b.fail(r, q.span, Error{Problem: "orbit needs a spot", Allowed: r.key.Allowed()})
			return 0
		}
	}
	x, missing := b.scene.lengthInM(q.value, u)
	if missing != "" {
		b.fail(r, q.span, Error{Problem: missing})
		return 0
	}
	b.inRange(r, q, x, r.key.Range, "M")
	return x
}
