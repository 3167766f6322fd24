package scenes

import "fmt"

// memoryLimit bounds one float32 layer of an image, in bytes. Larger images
// are no use to anybody yet; whether all layers that a request keeps fit is
// for those to say who keep them.
const memoryLimit = 4 << 30

const bytesPerValue = 4 // float32

// memory refuses an image too large, and says how large.
func (b *builder) memory() {
	pixels := b.get("field", 0, "pixels")
	columns, rows := pixels.numbers[0].value, pixels.numbers[1].value // float64: their product may pass every integer
	need := columns * rows * bytesPerValue
	if need <= memoryLimit {
		return
	}
	b.failAt(pixels, Error{
		Problem: fmt.Sprintf("one layer of the image would need %s of memory, %d bytes for each of %.0f x %.0f pixels",
			gibibytes(need), bytesPerValue, columns, rows),
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
