package figure

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"time"

	"codeberg.org/go-pdf/fpdf"

	"annulet/app/output"
)

// WritePDF writes the sheet as a page of its own size, with the text of the
// scene as an attachment.
func (s *Sheet) WritePDF(w io.Writer, p output.Provenance) error {
	f := fpdf.NewCustom(&fpdf.InitType{UnitStr: "mm", OrientationStr: "P", Size: fpdf.SizeType{Wd: s.Width, Ht: s.Height}})
	f.SetMargins(0, 0, 0)
	f.SetAutoPageBreak(false, 0)
	f.SetCatalogSort(true)
	// No clock in a file: the same scene gives the same bytes.
	f.SetCreationDate(time.Unix(0, 0).UTC())
	f.SetModificationDate(time.Unix(0, 0).UTC())
	f.SetProducer("Annulet "+p.Version, true)
	f.SetTitle(p.Title, true)
	f.SetSubject(output.NotIncludedLine(p.NotIncluded), true)
	f.SetKeywords(p.JSON(), true)
	f.SetAttachments([]fpdf.Attachment{{Content: []byte(p.Scene), Filename: output.SceneFile, Description: "the scene of this figure"}})
	f.AddUTF8FontFromBytes(fontName, "", fontFile)
	f.AddPage()
	f.SetLineJoinStyle("round")
	s.play(&pdfCanvas{f: f, widths: map[int]bool{}})
	return f.Output(w)
}

// pdfCanvas draws with fpdf.
type pdfCanvas struct {
	f      *fpdf.Fpdf
	widths map[int]bool // of the pictures so far, pixels
}

func (c *pdfCanvas) stroke(p pen, line []point) {
	if len(line) < 2 {
		return
	}
	c.f.SetDrawColor(int(p.Colour.R), int(p.Colour.G), int(p.Colour.B))
	c.f.SetLineWidth(p.Width)
	c.f.SetLineCapStyle("butt")
	c.f.SetDashPattern(p.Dash, 0)
	c.f.MoveTo(line[0].X, line[0].Y)
	for _, q := range line[1:] {
		c.f.LineTo(q.X, q.Y)
	}
	c.f.DrawPath("D")
}

func (c *pdfCanvas) fill(colour color.RGBA, outline []point) {
	c.f.SetFillColor(int(colour.R), int(colour.G), int(colour.B))
	points := make([]fpdf.PointType, len(outline))
	for k, q := range outline {
		points[k] = fpdf.PointType{X: q.X, Y: q.Y}
	}
	c.f.Polygon(points, "F")
}

func (c *pdfCanvas) picture(img *image.Paletted, at rect) {
	// The library writes pictures in the order of their widths in pixels, and
	// those of one width in any order: so none has that of another, and what it
	// has too much is clipped away.
	columns := img.Rect.Dx()
	for c.widths[columns] {
		columns++
	}
	c.widths[columns] = true
	if extra := columns - img.Rect.Dx(); extra > 0 {
		img = widened(img, extra)
		c.clip(at)
		defer c.unclip()
		at.Right += at.width() * float64(extra) / float64(columns-extra)
	}
	var file bytes.Buffer
	if err := encodePicture(&file, img); err != nil {
		c.f.SetError(err)
		return
	}
	name := fmt.Sprintf("picture %d", columns)
	o := fpdf.ImageOptions{ImageType: "PNG"}
	c.f.RegisterImageOptionsReader(name, o, &file)
	c.f.ImageOptions(name, at.Left, at.Top, at.width(), at.height(), false, o, 0, "")
}

// widened repeats the last column.
func widened(img *image.Paletted, extra int) *image.Paletted {
	columns, rows := img.Rect.Dx(), img.Rect.Dy()
	wide := image.NewPaletted(image.Rect(0, 0, columns+extra, rows), img.Palette)
	for row := range rows {
		from := img.Pix[row*img.Stride : row*img.Stride+columns]
		to := wide.Pix[row*wide.Stride : (row+1)*wide.Stride]
		copy(to, from)
		for k := range extra {
			to[columns+k] = from[columns-1]
		}
	}
	return wide
}

// encodePicture writes the pixels as PNG.
func encodePicture(w io.Writer, img *image.Paletted) error {
	e := png.Encoder{CompressionLevel: png.BestCompression}
	return e.Encode(w, img)
}

func (c *pdfCanvas) write(w words) {
	c.f.SetFont(fontName, "", w.Size/mmPerPoint)
	c.f.SetTextColor(int(w.Colour.R), int(w.Colour.G), int(w.Colour.B))
	at := w.At
	width := c.f.GetStringWidth(w.Text)
	shift := map[align]float64{left: 0, centre: width / 2, right: width}[w.Align]
	if w.Upright {
		c.f.TransformBegin()
		c.f.TransformRotate(90, at.X, at.Y)
		c.f.Text(at.X-shift, at.Y, w.Text)
		c.f.TransformEnd()
		return
	}
	c.f.Text(at.X-shift, at.Y, w.Text)
}

func (c *pdfCanvas) clip(to rect) { c.f.ClipRect(to.Left, to.Top, to.width(), to.height(), false) }
func (c *pdfCanvas) unclip()      { c.f.ClipEnd() }
