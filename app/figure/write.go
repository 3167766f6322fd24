package figure

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"annulet/app/files"
	"annulet/app/output"
)

// Formats are the extensions of a figure's files.
var Formats = []string{".pdf", ".svg", ".png", ".tif", ".tiff"}

// Write writes the sheet in the format of an extension.
func (m *Made) Write(w io.Writer, path string, p output.Provenance) error {
	switch strings.ToLower(filepath.Ext(path)) {
	case ".pdf":
		return m.WritePDF(w, p)
	case ".svg":
		return m.WriteSVG(w, p)
	case ".png", ".tif", ".tiff":
		img, err := m.Raster(m.Dpi)
		if err != nil {
			return err
		}
		if strings.EqualFold(filepath.Ext(path), ".png") {
			return files.EncodePNGAt(w, img, p.PNGTexts(), m.Dpi)
		}
		return output.WriteTIFFAt(w, img, p, m.Dpi)
	}
	return fmt.Errorf("figure: %s: allowed: %s", path, strings.Join(Formats, ", "))
}

// CaptionPath is where the draft of the caption goes beside a figure's file.
func CaptionPath(path string) string {
	return strings.TrimSuffix(path, filepath.Ext(path)) + ".caption.txt"
}
