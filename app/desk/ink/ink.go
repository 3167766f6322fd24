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

// fill draws all segments as one area, so that where they meet nothing is
// drawn twice.
func fill(dst *image.RGBA, lines [][]Point, width float64, colour color.NRGBA) {
	size := dst.Rect.Size()
	if size.X <= 0 || size.Y <= 0 {
		return
	}
	r := vector.NewRasterizer(size.X, size.Y)
	r.DrawOp = draw.Over
	for _, line := range lines {
		for k := 1; k < len(line); k++ {
			segment(r, line[k-1], line[k], width, size)
		}
	}
	r.Draw(dst, dst.Rect, image.NewUniform(colour), image.Point{})
}

// segment adds the rectangle of one piece of a line, half a width longer at
// both ends so that pieces join. All go round in the same sense.
func segment(r *vector.Rasterizer, a, b Point, width float64, size image.Point) {
	margin := width + 1
	if max(a.X, b.X) < -margin || max(a.Y, b.Y) < -margin || min(a.X, b.X) > float64(size.X)+margin || min(a.Y, b.Y) > float64(size.Y)+margin {
		return
	}
	a, b, ok := clip(a, b, float64(size.X)+2*margin, float64(size.Y)+2*margin)
	if !ok {
		return
	}
	length := math.Hypot(b.X-a.X, b.Y-a.Y)
	if !(length > 0) {
		return
	}
	half := width / 2
	ux, uy := (b.X-a.X)/length*half, (b.Y-a.Y)/length*half
	ends := min(1, length/width) / 2 // short pieces of a curve overlap less
	a.X, a.Y, b.X, b.Y = a.X-ux*ends, a.Y-uy*ends, b.X+ux*ends, b.Y+uy*ends
	r.MoveTo(float32(a.X-uy), float32(a.Y+ux))
	r.LineTo(float32(b.X-uy), float32(b.Y+ux))
	r.LineTo(float32(b.X+uy), float32(b.Y-ux))
	r.LineTo(float32(a.X+uy), float32(a.Y-ux))
	r.ClosePath()
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
