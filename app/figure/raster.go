package figure

import (
	"image"
	"image/color"
	"image/draw"
	"math"

	xdraw "golang.org/x/image/draw"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	"golang.org/x/image/vector"

	"annulet/app/ink"
)

// Raster draws the sheet at a resolution, pixels an inch, on a ground.
func (s *Sheet) Raster(dpi float64) (*image.RGBA, error) {
	scale := dpi / 25.4
	dst := image.NewRGBA(image.Rect(0, 0, int(math.Round(s.Width*scale)), int(math.Round(s.Height*scale))))
	draw.Draw(dst, dst.Rect, image.White, image.Point{}, draw.Src)
	c := &rasterCanvas{dst: dst, scale: scale}
	c.now = dst
	s.play(c)
	return dst, nil
}

// rasterCanvas draws pixels. Under a clip it draws on a copy, of which the
// clipped part is then put back.
type rasterCanvas struct {
	dst, now *image.RGBA
	within   image.Rectangle
	scale    float64 // pixels a mm
}

func (c *rasterCanvas) at(p point) ink.Point { return ink.Point{X: p.X * c.scale, Y: p.Y * c.scale} }

func (c *rasterCanvas) line(points []point) []ink.Point {
	all := make([]ink.Point, len(points))
	for k, p := range points {
		all[k] = c.at(p)
	}
	return all
}

func nrgba(c color.RGBA) color.NRGBA { return color.NRGBA(c) } // opaque

func (c *rasterCanvas) stroke(p pen, line []point) {
	q := ink.Pen{Width: p.Width * c.scale, Colour: nrgba(p.Colour)}
	for _, x := range p.Dash {
		q.Dash = append(q.Dash, x*c.scale)
	}
	part, points := c.part(c.line(line), 2*q.Width+2)
	if part != nil {
		ink.Stroke(part, q, points)
	}
}

// part returns the part of the picture that lines may touch, some pixels
// around them, and the lines in its coordinates: filling costs what there is
// to fill. It is nil if that is outside.
func (c *rasterCanvas) part(line []ink.Point, margin float64) (*image.RGBA, []ink.Point) {
	var around image.Rectangle
	for k, p := range line {
		at := image.Rect(int(p.X-margin)-1, int(p.Y-margin)-1, int(p.X+margin)+2, int(p.Y+margin)+2)
		if k == 0 {
			around = at
		}
		around = around.Union(at)
	}
	around = around.Intersect(c.now.Rect)
	if around.Empty() {
		return nil, nil
	}
	moved := make([]ink.Point, len(line))
	for k, p := range line {
		moved[k] = ink.Point{X: p.X - float64(around.Min.X), Y: p.Y - float64(around.Min.Y)}
	}
	return c.now.SubImage(around).(*image.RGBA), moved
}

func (c *rasterCanvas) fill(colour color.RGBA, outline []point) {
	part, points := c.part(c.line(outline), 0)
	if part == nil {
		return
	}
	r := vector.NewRasterizer(part.Rect.Dx(), part.Rect.Dy())
	for k, p := range points {
		if k == 0 {
			r.MoveTo(float32(p.X), float32(p.Y))
		} else {
			r.LineTo(float32(p.X), float32(p.Y))
		}
	}
	r.ClosePath()
	r.Draw(part, part.Rect, image.NewUniform(colour), image.Point{})
}

func (c *rasterCanvas) pixels(r rect) image.Rectangle {
	round := func(x float64) int { return int(math.Round(x * c.scale)) }
	return image.Rect(round(r.Left), round(r.Top), round(r.Right), round(r.Bottom))
}

func (c *rasterCanvas) picture(img *image.Paletted, at rect) {
	to := c.pixels(at)
	how := xdraw.Interpolator(xdraw.CatmullRom)
	if to.Dx() > img.Rect.Dx() { // pixels stay pixels
		how = xdraw.NearestNeighbor
	}
	how.Scale(c.now, to, img, img.Rect, xdraw.Src, nil)
}

// write fills the outlines of the glyphs: sizes are exact at any resolution,
// and words may stand upright.
func (c *rasterCanvas) write(w words) {
	shift := map[align]float64{left: 0, centre: 0.5, right: 1}[w.Align] * textWidth(w.Text, w.Size)
	f := parsedFont()
	var b sfnt.Buffer
	const em = 2048 // outlines are asked for in these units
	unit := w.Size / em
	pen := -shift
	ends := []ink.Point{c.at(point{w.At.X - shift, w.At.Y}), c.at(point{w.At.X + textWidth(w.Text, w.Size) - shift, w.At.Y})}
	if w.Upright {
		ends = []ink.Point{c.at(point{w.At.X, w.At.Y + shift}), c.at(point{w.At.X, w.At.Y + shift - textWidth(w.Text, w.Size)})}
	}
	part, _ := c.part(ends, 1.5*w.Size*c.scale)
	if part == nil {
		return
	}
	corner := part.Rect.Min
	r := vector.NewRasterizer(part.Rect.Dx(), part.Rect.Dy())
	for _, char := range w.Text {
		g, err := f.GlyphIndex(&b, char)
		if err != nil {
			continue
		}
		segments, err := f.LoadGlyph(&b, g, fixed.I(em), nil)
		if err != nil {
			continue
		}
		place := func(p fixed.Point26_6) (float32, float32) {
			x, y := pen+unit*float64(p.X)/64, unit*float64(p.Y)/64
			if w.Upright {
				x, y = y, -x
			}
			q := c.at(point{w.At.X + x, w.At.Y + y})
			return float32(q.X - float64(corner.X)), float32(q.Y - float64(corner.Y))
		}
		for _, s := range segments {
			x0, y0 := place(s.Args[0])
			x1, y1 := place(s.Args[1])
			x2, y2 := place(s.Args[2])
			switch s.Op {
			case sfnt.SegmentOpMoveTo:
				r.ClosePath()
				r.MoveTo(x0, y0)
			case sfnt.SegmentOpLineTo:
				r.LineTo(x0, y0)
			case sfnt.SegmentOpQuadTo:
				r.QuadTo(x0, y0, x1, y1)
			case sfnt.SegmentOpCubeTo:
				r.CubeTo(x0, y0, x1, y1, x2, y2)
			}
		}
		r.ClosePath()
		if a, err := f.GlyphAdvance(&b, g, fixed.I(em), font.HintingNone); err == nil {
			pen += unit * float64(a) / 64
		}
	}
	r.Draw(part, part.Rect, image.NewUniform(w.Colour), image.Point{})
}

func (c *rasterCanvas) clip(to rect) {
	c.within = c.pixels(to)
	c.now = image.NewRGBA(c.dst.Rect)
	draw.Draw(c.now, c.within, c.dst, c.within.Min, draw.Src)
}

func (c *rasterCanvas) unclip() {
	draw.Draw(c.dst, c.within, c.now, c.within.Min, draw.Src)
	c.now = c.dst
}
