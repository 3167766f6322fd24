package output

import (
	"io"

	"annulet/app/files"
	"annulet/raytrace"
)

// WriteNPZ writes a plate for NumPy: total (rows, columns), every layer asked
// for (orders, rows, columns), row 0 at the bottom; alpha and beta, the screen
// coordinates of columns and rows, in M on a parallel field and else as
// tangents or radians; scene and numerics as UTF-8 bytes.
func WriteNPZ(w io.Writer, plate *raytrace.Plate, field raytrace.Field, layers []raytrace.Layer, p Provenance) error {
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
