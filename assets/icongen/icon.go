package main

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"math"

	"annulet/assets"
)

// The drawing, in units of the icon's side pixels, y downward. Taste.
const (
	side   = 256.0
	middle = side / 2
	corner = 52.0 // radius of the ground's corners

	// The ring lies between two circles; the inner one sits a little to the
	// right, which makes the left side wider.
	outer       = 92.0
	inner       = 74.0
	innerOffset = 9.0

	// brightest and faintest are where, on the map ember, the left and the
	// right end of the ring lie.
	brightest = 0.97
	faintest  = 0.36

	stops = 8 // of the gradient between them
)

// groundAt is where on ember the ground behind the ring lies.
const groundAt = 0.06

func ember(x float64) color.RGBA64 {
	m, ok := assets.Lookup("ember")
	if !ok {
		panic("icongen: assets has no map ember")
	}
	return m.At(x)
}

// glow returns the colour of the ring at horizontal place x.
func glow(x float64) color.RGBA64 {
	part := (x - (middle - outer)) / (2 * outer)
	return ember(brightest + part*(faintest-brightest))
}

func drawSVG() []byte {
	var out bytes.Buffer
	hex := func(c color.RGBA64) string {
		const to8 = 8
		return fmt.Sprintf("#%02x%02x%02x", c.R>>to8, c.G>>to8, c.B>>to8)
	}
	fmt.Fprintf(&out, `<svg xmlns="http://www.w3.org/2000/svg" width="%g" height="%g" viewBox="0 0 %g %g">`+"\n", side, side, side, side)
	fmt.Fprintln(&out, `  <title>Annulet</title>`)
	fmt.Fprintf(&out, `  <linearGradient id="glow" gradientUnits="userSpaceOnUse" x1="%g" y1="0" x2="%g" y2="0">`+"\n", middle-outer, middle+outer)
	for k := range stops + 1 {
		part := float64(k) / stops
		fmt.Fprintf(&out, `    <stop offset="%g" stop-color="%s"/>`+"\n", part, hex(glow(middle-outer+part*2*outer)))
	}
	fmt.Fprintln(&out, `  </linearGradient>`)
	fmt.Fprintf(&out, `  <rect width="%g" height="%g" rx="%g" fill="%s"/>`+"\n", side, side, corner, hex(ember(groundAt)))
	fmt.Fprintf(&out, `  <path fill="url(#glow)" fill-rule="evenodd" d="%s%s"/>`+"\n", circle(middle, outer), circle(middle+innerOffset, inner))
	fmt.Fprintln(&out, `</svg>`)
	return out.Bytes()
}

// circle returns a closed SVG path around a centre on the middle line.
func circle(x, radius float64) string {
	half := fmt.Sprintf("a%g,%g 0 1 0", radius, radius)
	return fmt.Sprintf("M%g,%g%s %g,0%s %g,0Z", x-radius, middle, half, 2*radius, half, -2*radius)
}

// drawPixels draws the same with edges smoothed over one pixel.
func drawPixels() *image.NRGBA {
	img := image.NewNRGBA(image.Rect(0, 0, side, side))
	ground := ember(groundAt)
	for py := range int(side) {
		for px := range int(side) {
			x, y := float64(px)+0.5, float64(py)+0.5 // the pixel's centre
			ring := covers(outer-math.Hypot(x-middle, y-middle)) *
				covers(math.Hypot(x-middle-innerOffset, y-middle)-inner)
			c := mix(ground, glow(x), ring)
			c.A = uint16(math.Round(covers(insideGround(x, y)) * math.MaxUint16))
			img.Set(px, py, c)
		}
	}
	return img
}

// insideGround returns how far inside the edge of the ground a point lies.
func insideGround(x, y float64) float64 {
	const straight = middle - corner
	dx := max(math.Abs(x-middle)-straight, 0)
	dy := max(math.Abs(y-middle)-straight, 0)
	return corner - math.Hypot(dx, dy)
}

// covers returns the part of a pixel that lies inside an edge at a distance,
// in pixels, inward from it.
func covers(distance float64) float64 { return min(max(distance+0.5, 0), 1) }

// mix returns the colour part of the way from a to b, in sRGB as SVG does.
func mix(a, b color.RGBA64, part float64) color.NRGBA64 {
	between := func(from, to uint16) uint16 {
		return uint16(math.Round(float64(from) + part*(float64(to)-float64(from))))
	}
	return color.NRGBA64{R: between(a.R, b.R), G: between(a.G, b.G), B: between(a.B, b.B)}
}
