package figure

import (
	"bytes"
	"encoding/base64"
	"encoding/xml"
	"fmt"
	"image"
	"image/color"
	"io"
	"slices"
	"strconv"
	"strings"

	"codeberg.org/go-pdf/fpdf"

	"annulet/app/output"
)

// WriteSVG writes the sheet as SVG 1.1 in millimetres, with the scene in its
// metadata and the glyphs that are used as an embedded font.
func (s *Sheet) WriteSVG(w io.Writer, p output.Provenance) error {
	c := &svgCanvas{}
	fmt.Fprintf(&c.out, `<?xml version="1.0" encoding="UTF-8"?>
<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" version="1.1" width="%smm" height="%smm" viewBox="0 0 %s %s">
`, mm(s.Width), mm(s.Height), mm(s.Width), mm(s.Height))
	fmt.Fprintf(&c.out, "<title>%s</title>\n<desc>%s</desc>\n", escaped(p.Title), escaped(strings.Join(p.Lines(), " ")))
	fmt.Fprintf(&c.out, "<metadata>%s%s%s</metadata>\n", output.SVGSceneBegin, base64.StdEncoding.EncodeToString([]byte(p.Scene)), output.SVGSceneEnd)
	font := fpdf.UTF8CutFont(fontFile, glyphsOf(s.texts))
	fmt.Fprintf(&c.out, "<style>@font-face{font-family:'Annulet figure';src:url(data:font/ttf;base64,%s)}\ntext{font-family:'Annulet figure','%s',sans-serif}</style>\n",
		base64.StdEncoding.EncodeToString(font), fontName)
	s.play(c)
	c.out.WriteString("</svg>\n")
	if c.err != nil {
		return c.err
	}
	_, err := w.Write(c.out.Bytes())
	return err
}

// glyphsOf returns the characters of texts, each once, in order.
func glyphsOf(texts []string) string {
	runes := []rune(strings.Join(texts, ""))
	slices.Sort(runes)
	return string(slices.Compact(runes))
}

// mm writes a length to 0.1 µm.
func mm(x float64) string {
	text := strconv.FormatFloat(x, 'f', 4, 64)
	return strings.TrimRight(strings.TrimRight(text, "0"), ".")
}

func escaped(text string) string {
	var b bytes.Buffer
	_ = xml.EscapeText(&b, []byte(text)) // a buffer takes all
	return b.String()
}

func hex(c color.RGBA) string { return fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B) }

// svgCanvas writes elements.
type svgCanvas struct {
	out   bytes.Buffer
	clips int
	err   error
}

func (c *svgCanvas) path(line []point) string {
	var d strings.Builder
	for k, q := range line {
		d.WriteString(map[bool]string{true: "M", false: "L"}[k == 0] + mm(q.X) + " " + mm(q.Y))
	}
	return d.String()
}

func (c *svgCanvas) stroke(p pen, line []point) {
	if len(line) < 2 {
		return
	}
	dash := ""
	if len(p.Dash) > 0 {
		var lengths []string
		for _, x := range p.Dash {
			lengths = append(lengths, mm(x))
		}
		dash = ` stroke-dasharray="` + strings.Join(lengths, " ") + `"`
	}
	fmt.Fprintf(&c.out, `<path d="%s" fill="none" stroke="%s" stroke-width="%s" stroke-linejoin="round"%s/>`+"\n", c.path(line), hex(p.Colour), mm(p.Width), dash)
}

func (c *svgCanvas) fill(colour color.RGBA, outline []point) {
	fmt.Fprintf(&c.out, `<path d="%sZ" fill="%s"/>`+"\n", c.path(outline), hex(colour))
}

func (c *svgCanvas) picture(img *image.Paletted, at rect) {
	var file bytes.Buffer
	if err := encodePicture(&file, img); err != nil {
		c.err = err
		return
	}
	fmt.Fprintf(&c.out, `<image x="%s" y="%s" width="%s" height="%s" preserveAspectRatio="none" xlink:href="data:image/png;base64,%s"/>`+"\n",
		mm(at.Left), mm(at.Top), mm(at.width()), mm(at.height()), base64.StdEncoding.EncodeToString(file.Bytes()))
}

func (c *svgCanvas) write(w words) {
	anchor := map[align]string{left: "start", centre: "middle", right: "end"}[w.Align]
	turn := ""
	if w.Upright {
		turn = fmt.Sprintf(` transform="rotate(-90 %s %s)"`, mm(w.At.X), mm(w.At.Y))
	}
	fmt.Fprintf(&c.out, `<text x="%s" y="%s" font-size="%s" fill="%s" text-anchor="%s"%s>%s</text>`+"\n",
		mm(w.At.X), mm(w.At.Y), mm(w.Size), hex(w.Colour), anchor, turn, escaped(w.Text))
}

func (c *svgCanvas) clip(to rect) {
	c.clips++
	fmt.Fprintf(&c.out, `<clipPath id="c%d"><rect x="%s" y="%s" width="%s" height="%s"/></clipPath><g clip-path="url(#c%d)">`+"\n",
		c.clips, mm(to.Left), mm(to.Top), mm(to.width()), mm(to.height()), c.clips)
}

func (c *svgCanvas) unclip() { c.out.WriteString("</g>\n") }
