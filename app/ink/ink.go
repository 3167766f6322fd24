package ink

import (
	"image"
	"image/color"
	"image/draw"
	"math"

	"golang.org/x/image/vector"
)

// Point is a place on the pixels.
type Point struct{ X, Y float64 }

// Pen is how a line is drawn.
type Pen struct {
	Width  float64 // pixels
	Colour color.NRGBA
	Dash   []float64   // lengths of ink and gap, in turn, pixels; nil for none
	Halo   color.NRGBA // drawn one pixel wider beneath, so that the line shows on any ground; transparent for none
}

// Stroke draws lines, each through its points; a point that is not finite
// breaks its line.
func Stroke(dst *image.RGBA, pen Pen, lines ...[]Point) {
	var dashed [][]Point
	for _, line := range lines {
		dashed = append(dashed, dash(line, pen.Dash)...)
	}
	if pen.Halo.A > 0 {
		fill(dst, dashed, pen.Width+2, pen.Halo)
	}
	fill(dst, dashed, pen.Width, pen.Colour)
}

// fill draws each line as one strip, so that where its pieces meet nothing is
// drawn twice.
func fill(dst *image.RGBA, lines [][]Point, width float64, colour color.NRGBA) {
	size := dst.Rect.Size()
	if size.X <= 0 || size.Y <= 0 {
		return
	}
	r := vector.NewRasterizer(size.X, size.Y)
	r.DrawOp = draw.Over
	for _, line := range lines {
		margin := width + 1
		for _, piece := range visible(line, float64(size.X)+2*margin, float64(size.Y)+2*margin) {
			strip(r, piece, width/2)
		}
	}
	r.Draw(dst, dst.Rect, image.NewUniform(colour), image.Point{})
}

// shortest is how near, in pixels, two points of a line may be; nearer ones
// are left out.
const shortest = 0.7

// visible returns the pieces of a line within a rectangle about the picture.
func visible(line []Point, right, bottom float64) [][]Point {
	var all [][]Point
	var piece []Point
	for k := 1; k < len(line); k++ {
		a, b, some := clip(line[k-1], line[k], right, bottom)
		if !some {
			continue
		}
		if len(piece) == 0 || piece[len(piece)-1] != a && a != line[k-1] {
			if len(piece) > 1 {
				all = append(all, piece)
			}
			piece = []Point{a}
		}
		if last := piece[len(piece)-1]; math.Hypot(b.X-last.X, b.Y-last.Y) >= shortest || k == len(line)-1 && len(piece) == 1 {
			piece = append(piece, b)
		}
	}
	if len(piece) > 1 {
		all = append(all, piece)
	}
	return all
}

// sharpest bounds how far the corner of a strip reaches, in half widths.
const sharpest = 1.5

// strip adds the outline of a line: along it on one side, back on the other.
func strip(r *vector.Rasterizer, line []Point, half float64) {
	n := len(line)
	closed := n > 3 && line[0] == line[n-1]
	side := make([]Point, n) // from each point to its left edge
	for k := range line {
		var before, after Point // directions
		if k > 0 || closed {
			before = direction(line[(k-1+n)%n], line[k])
			if k == 0 {
				before = direction(line[n-2], line[0])
			}
		}
		if k < n-1 || closed {
			after = direction(line[k], line[(k+1)%n])
			if k == n-1 {
				after = direction(line[0], line[1])
			}
		}
		if k == 0 && !closed {
			before = after
		}
		if k == n-1 && !closed {
			after = before
		}
		mean := direction(Point{}, Point{before.X + after.X, before.Y + after.Y})
		cos := mean.X*after.X + mean.Y*after.Y
		reach := half * min(sharpest, 1/max(cos, 1e-9))
		side[k] = Point{-mean.Y * reach, mean.X * reach}
	}
	r.MoveTo(float32(line[0].X+side[0].X), float32(line[0].Y+side[0].Y))
	for k := 1; k < n; k++ {
		r.LineTo(float32(line[k].X+side[k].X), float32(line[k].Y+side[k].Y))
	}
	for k := n - 1; k >= 0; k-- {
		r.LineTo(float32(line[k].X-side[k].X), float32(line[k].Y-side[k].Y))
	}
	r.ClosePath()
}

// direction returns the unit vector from a to b, of length 0 where they are
// one.
func direction(a, b Point) Point {
	length := math.Hypot(b.X-a.X, b.Y-a.Y)
	if length == 0 {
		return Point{}
	}
	return Point{(b.X - a.X) / length, (b.Y - a.Y) / length}
}

// clip cuts a segment to the rectangle from -limit to limit, so that far
// points cost nothing (Liang & Barsky, ACM TOG 3, 1 (1984), from memory).
func clip(a, b Point, right, bottom float64) (Point, Point, bool) {
	from, to := 0., 1.
	dx, dy := b.X-a.X, b.Y-a.Y
	for _, side := range [4][2]float64{{-dx, a.X + right}, {dx, right - a.X}, {-dy, a.Y + bottom}, {dy, bottom - a.Y}} {
		p, q := side[0], side[1]
		switch {
		case p == 0 && q < 0:
			return a, b, false
		case p < 0:
			from = max(from, q/p)
		case p > 0:
			to = min(to, q/p)
		}
	}
	if from > to {
		return a, b, false
	}
	return Point{a.X + from*dx, a.Y + from*dy}, Point{a.X + to*dx, a.Y + to*dy}, true
}

// dash cuts a line into its inked pieces, and where points are not finite.
func dash(line []Point, pattern []float64) [][]Point {
	var all [][]Point
	var piece []Point
	end := func() {
		if len(piece) > 1 {
			all = append(all, piece)
		}
		piece = nil
	}
	finite := func(p Point) bool { return !math.IsNaN(p.X+p.Y) && !math.IsInf(p.X+p.Y, 0) }
	left, k := math.Inf(1), 0
	if len(pattern) > 0 {
		left = pattern[0]
	}
	for i, p := range line {
		if !finite(p) {
			end()
			continue
		}
		if i == 0 || !finite(line[i-1]) {
			piece = append(piece, p)
			continue
		}
		at := line[i-1]
		for length := math.Hypot(p.X-at.X, p.Y-at.Y); length > left; length = math.Hypot(p.X-at.X, p.Y-at.Y) {
			at = Point{at.X + (p.X-at.X)*left/length, at.Y + (p.Y-at.Y)*left/length}
			if k%2 == 0 {
				piece = append(piece, at)
				end()
			} else {
				piece = []Point{at}
			}
			k++
			left = pattern[k%len(pattern)]
		}
		left -= math.Hypot(p.X-at.X, p.Y-at.Y)
		if k%2 == 0 {
			piece = append(piece, p)
		}
	}
	end()
	return all
}

// Disc draws a filled circle.
func Disc(dst *image.RGBA, at Point, radius float64, colour color.NRGBA) {
	const points = 24
	r := vector.NewRasterizer(dst.Rect.Dx(), dst.Rect.Dy())
	r.DrawOp = draw.Over
	for k := range points {
		sin, cos := math.Sincos(2 * math.Pi * float64(k) / points)
		x, y := float32(at.X+radius*cos), float32(at.Y+radius*sin)
		if k == 0 {
			r.MoveTo(x, y)
		} else {
			r.LineTo(x, y)
		}
	}
	r.ClosePath()
	r.Draw(dst, dst.Rect, image.NewUniform(colour), image.Point{})
}

// Fill paints the whole picture.
func Fill(dst *image.RGBA, colour color.NRGBA) {
	draw.Draw(dst, dst.Rect, image.NewUniform(colour), image.Point{}, draw.Src)
}

// Box paints a rectangle.
func Box(dst *image.RGBA, r image.Rectangle, colour color.NRGBA) {
	draw.Draw(dst, r, image.NewUniform(colour), image.Point{}, draw.Over)
}

// Lay puts a picture over another of the same size, within a rectangle.
func Lay(dst, over *image.RGBA, within image.Rectangle) {
	draw.Draw(dst, within, over, within.Min, draw.Over)
}

// LayAt puts a picture over another, its corner at a point.
func LayAt(dst, over *image.RGBA, corner image.Point) {
	draw.Draw(dst, over.Rect.Add(corner), over, image.Point{}, draw.Over)
}
