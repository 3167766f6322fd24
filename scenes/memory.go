package scenes

import "fmt"

// memoryLimit bounds the float32 layers of a plate, in bytes.
const memoryLimit = 4 << 30

// Layers of a plate: the total, and intensity g r phi delay mu of each order.
const (
	layersOnce     = 1
	layersPerOrder = 6
	bytesPerValue  = 4 // float32
)

// memory refuses a plate too large, and says how large.
func (b *builder) memory() {
	pixels, maxOrder := b.get("field", 0, "pixels"), b.get("trace", 0, "max_order")
	columns, rows := pixels.numbers[0].value, pixels.numbers[1].value // float64: their product may pass every integer
	perPixel := b.scene.bytesPerPixel()
	need := columns * rows * float64(perPixel)
	if need <= memoryLimit {
		return
	}
	blame := pixels
	if !pixels.given {
		blame = maxOrder
	}
	b.failAt(blame, Error{
		Problem: fmt.Sprintf("the image would need %s of memory, %d bytes for each of %.0f x %.0f pixels with max_order %d",
			gibibytes(need), perPixel, columns, rows, b.scene.Trace.MaxOrder),
		Allowed: "at most " + gibibytes(memoryLimit),
	})
}

// gibibytes writes a number of bytes in GiB, large ones in TiB.
func gibibytes(n float64) string {
	if n >= 1<<40 {
		return fmt.Sprintf("%.4g TiB", n/(1<<40))
	}
	return fmt.Sprintf("%.4g GiB", n/(1<<30))
}

// PlateBytes is the memory of the scene's image with all layers, in bytes.
func (s Scene) PlateBytes() float64 {
	return float64(s.Field.Pixels[0]) * float64(s.Field.Pixels[1]) * float64(s.bytesPerPixel())
}

func (s Scene) bytesPerPixel() int {
	return (layersOnce + layersPerOrder*(s.Trace.MaxOrder+1)) * bytesPerValue
}
