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
	s.play(&pdfCanvas{f: f})
	return f.Output(w)
}

// pdfCanvas draws with fpdf.
type pdfCanvas struct {
	f        *fpdf.Fpdf
	pictures int
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
	var file bytes.Buffer
	if err := encodePicture(&file, img); err != nil {
		c.f.SetError(err)
		return
	}
	c.pictures++
	name := fmt.Sprintf("picture %d", c.pictures)
	o := fpdf.ImageOptions{ImageType: "PNG"}
	c.f.RegisterImageOptionsReader(name, o, &file)
	c.f.ImageOptions(name, at.Left, at.Top, at.width(), at.height(), false, o, 0, "")
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
