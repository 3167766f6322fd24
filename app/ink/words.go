package ink

import (
	"image"
	"image/color"
	"strings"

	"golang.org/x/image/font"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/math/fixed"
)

// Face is a font at one size; it is not safe for concurrent use.
type Face struct{ face font.Face }

// NewFace makes a face of a TrueType or OpenType font, its size in pixels.
func NewFace(ttf []byte, pixels float64) (Face, error) {
	parsed, err := opentype.Parse(ttf)
	if err != nil {
		return Face{}, err
	}
	const pointsPerInch = 72 // size is then in pixels
	face, err := opentype.NewFace(parsed, &opentype.FaceOptions{Size: pixels, DPI: pointsPerInch, Hinting: font.HintingFull})
	return Face{face}, err
}

// Align says which part of the words stands at a point.
type Align int

// The alignments, along the line.
const (
	Left Align = iota
	Centre
	Right
)

// Width returns how wide words are, pixels.
func (f Face) Width(words string) float64 { return float64(font.MeasureString(f.face, words)) / 64 }

// Height returns the distance of lines, pixels.
func (f Face) Height() float64 { return float64(f.face.Metrics().Height) / 64 }

// Ascent returns how high letters stand over their line, pixels.
func (f Face) Ascent() float64 { return float64(f.face.Metrics().Ascent) / 64 }

// Write draws words, their base line at a point. A halo that is not
// transparent surrounds them.
func (f Face) Write(dst *image.RGBA, at Point, words string, colour, halo color.NRGBA, align Align) {
	if _, has := f.face.GlyphAdvance('−'); !has { // a dash of the same width stands for it
		words = strings.ReplaceAll(words, "−", "–")
	}
	switch align {
	case Centre:
		at.X -= f.Width(words) / 2
	case Right:
		at.X -= f.Width(words)
	}
	put := func(dx, dy int, colour color.NRGBA) {
		d := font.Drawer{Dst: dst, Src: image.NewUniform(colour), Face: f.face,
			Dot: fixed.P(int(at.X+0.5)+dx, int(at.Y+0.5)+dy)}
		d.DrawString(words)
	}
	if halo.A > 0 {
		for _, d := range [][2]int{{-1, 0}, {1, 0}, {0, -1}, {0, 1}, {-1, -1}, {1, 1}, {-1, 1}, {1, -1}} {
			put(d[0], d[1], halo)
		}
	}
	put(0, 0, colour)
}
