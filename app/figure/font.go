package figure

import (
	"sync"

	"codeberg.org/go-fonts/dejavu/dejavusans"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// fontName is that of the one font: it has all glyphs that are needed (Δ α β
// µ − superscripts), and its licence lets it be embedded.
const fontName = "DejaVu Sans"

var fontFile = dejavusans.TTF

const (
	mmPerPoint = 25.4 / 72 // of PostScript, exact
	capHeight  = 0.729     // of DejaVu Sans, in em
)

var parsedFont = sync.OnceValue(func() *sfnt.Font {
	f, err := sfnt.Parse(fontFile)
	if err != nil {
		panic(err) // the font is part of the program
	}
	return f
})

// textWidth returns how wide a text of that size is, mm.
func textWidth(text string, size float64) float64 {
	f := parsedFont()
	var b sfnt.Buffer
	em := fixed.I(int(f.UnitsPerEm()))
	var sum fixed.Int26_6
	for _, r := range text {
		g, err := f.GlyphIndex(&b, r)
		if err != nil {
			continue
		}
		if a, err := f.GlyphAdvance(&b, g, em, font.HintingNone); err == nil {
			sum += a
		}
	}
	return size * float64(sum) / float64(em)
}
