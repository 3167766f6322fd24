package output

import (
	"io"

	"annulet/app/files"
	"annulet/raytrace"
)

// WriteNPZ writes a plate for NumPy: total (rows, columns), every layer asked
// for (orders, rows, columns), row 0 at the bottom; alpha and beta, the screen
// coordinates of columns and rows, in M on a parallel field and else as
// tangents or radians; scene and numerics as UTF-8 bytes. Where the scene has
// several frequencies there are frequency, Hz, and totals (frequencies, rows,
// columns): spectrum has the plate of each.
func WriteNPZ(w io.Writer, plate *raytrace.Plate, v *raytrace.View, spectrum []*raytrace.Plate, layers []raytrace.Layer, p Provenance) error {
	field := v.Field
	n := files.NewNPZ(w)
	if err := n.Float32("total", plate.Total, plate.Rows, plate.Columns); err != nil {
		return err
	}
	stack := make([]float32, plate.Orders*len(plate.Total))
	for _, l := range kept(layers) {
		for order := range plate.Orders {
			copy(stack[order*len(plate.Total):], plate.Layer(l.Layer, order))
		}
		if err := n.Float32(l.Name, stack, plate.Orders, plate.Rows, plate.Columns); err != nil {
			return err
		}
	}
	alpha, beta := make([]float64, plate.Columns), make([]float64, plate.Rows)
	for k := range alpha {
		alpha[k], _ = field.PixelCenter(k, 0)
	}
	for k := range beta {
		_, beta[k] = field.PixelCenter(0, k)
	}
	if err := n.Float64("alpha", alpha, len(alpha)); err != nil {
		return err
	}
	if err := n.Float64("beta", beta, len(beta)); err != nil {
		return err
	}
	if len(spectrum) > 0 {
		totals := make([]float32, 0, len(spectrum)*len(plate.Total))
		for _, at := range spectrum {
			totals = append(totals, at.Total...)
		}
		if err := n.Float64("frequency", v.Frequencies(), len(spectrum)); err != nil {
			return err
		}
		if err := n.Float32("totals", totals, len(spectrum), plate.Rows, plate.Columns); err != nil {
			return err
		}
	}
	if err := n.Text("numerics", p.JSON()); err != nil {
		return err
	}
	if err := n.Text(sceneMember, p.Scene); err != nil {
		return err
	}
	return n.Close()
}

// sceneMember is the array that holds the scene.
const sceneMember = "scene"
