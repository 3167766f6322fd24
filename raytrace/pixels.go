package raytrace

import (
	"math"

	"annulet/geodesic"
)

// cover fills b.pixels: how (b cos s, b sin s) changes across the pixel
// around each line of sight of the block. It aims at the middles of the
// pixel's four sides, so that it holds for any motion of the observer; the
// relative error is that of a central difference, about pixel²/24.
func (b *bench) cover() error {
	v := b.view
	b.pixels.Orient(v.Observer.InclinationDeg, v.Observer.AzimuthDeg)
	b.pixels.Resize(len(b.screen))
	if err := b.unfold(); err != nil {
		return err
	}
	across, up := v.Field.Pitches()
	if err := b.differ(across/2, 0, b.pixels.Column); err != nil {
		return err
	}
	return b.differ(0, up/2, b.pixels.Row)
}

// Light that arrives at right angles to the radius has the largest b of its
// observer: there db vanishes across a pixel and dψ/db is infinite. Below
// foldKR in |k^r/E| both are taken a little further in, by foldShift of the
// screen coordinates. Method: far enough for the digits, and much less than a
// pixel.
const (
	foldKR    = 1e-6
	foldShift = 1e-5
)

// unfold moves the lines of sight of b.screen next to such a fold, and gives
// their crossings of the sky the slope there. The paths are traced by now.
func (b *bench) unfold() error {
	b.dirs, b.folded = b.dirs[:0], b.folded[:0]
	for k := range b.screen {
		if b.rays.Seen[k] && math.Abs(b.rays.KR[k]) < foldKR {
			p := &b.screen[k]
			p[0], p[1] = p[0]*(1-foldShift), p[1]*(1-foldShift)
			b.folded = append(b.folded, k)
			b.dirs = append(b.dirs, b.view.Field.direction(p[0], p[1]))
		}
	}
	if len(b.folded) == 0 {
		return nil
	}
	if err := b.aim(&b.after); err != nil {
		return err
	}
	b.tracer.Cross(&b.after, geodesic.Want{Slope: true}, &b.beside)
	for i, k := range b.folded {
		to, from := b.at.Start[k+1]-1, b.beside.Start[i+1]-1 // the sky comes last
		if to >= b.at.Start[k] && from >= b.beside.Start[i] {
			b.at.Slope[to] = b.beside.Slope[from]
		}
	}
	return nil
}

// differ fills out with the differences between the lines of sight moved by
// +(x, y) and by -(x, y) on the screen. Where one of the two has no path the
// middle stands for it.
func (b *bench) differ(x, y float64, out [][2]float64) error {
	for side, rays := range []*geodesic.Rays{&b.before, &b.after} {
		sign := float64(2*side - 1)
		b.dirs = b.dirs[:0]
		for _, p := range b.screen {
			b.dirs = append(b.dirs, b.view.Field.direction(p[0]+sign*x, p[1]+sign*y))
		}
		if err := b.aim(rays); err != nil {
			return err
		}
	}
	for k := range out {
		from, to, span := &b.before, &b.after, 1.0
		if !from.Seen[k] {
			from, span = &b.rays, 2
		}
		if !to.Seen[k] {
			to, span = &b.rays, 2
		}
		p, q := momentum(from, k), momentum(to, k)
		out[k] = [2]float64{span * (q[0] - p[0]), span * (q[1] - p[1])}
	}
	return nil
}

// momentum is (b cos s, b sin s) of ray k, M.
func momentum(rays *geodesic.Rays, k int) [2]float64 {
	b := rays.Impact(k)
	return [2]float64{b * rays.CosS[k], b * rays.SinS[k]}
}
