package measure

import (
	"math"

	"annulet/raytrace"
)

// Image is an intensity on square pixels of a parallel field.
type Image struct {
	Columns, Rows int
	Pitch         float64    // width of a pixel, M
	Center        [2]float64 // screen coordinates of the field's middle, M
	Pixels        []float64  // Rows·Columns, row 0 at the bottom
}

// NewImage returns the image of a layer of intensities, Rows·Columns values
// with row 0 at the bottom.
func NewImage(f raytrace.Field, values []float32) (*Image, error) {
	if !f.IsParallel() {
		return nil, cannot("the field is not parallel, so that its pixels are no equal squares of the sky")
	}
	if f.Columns < leastPixels || f.Rows < leastPixels {
		return nil, cannot("an image of %d x %d pixels has no ring in it; it takes %d x %d", f.Columns, f.Rows, leastPixels, leastPixels)
	}
	m := &Image{Columns: f.Columns, Rows: f.Rows, Pitch: f.Pitch(), Center: f.Center, Pixels: make([]float64, len(values))}
	for k, x := range values {
		m.Pixels[k] = float64(x)
	}
	return m, nil
}

// leastPixels is the least side of an image that is measured. Taste.
const leastPixels = 8

// Check refuses images that show nothing, or hold no numbers.
func (m *Image) Check() error {
	total := 0.0
	for _, x := range m.Pixels {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return cannot("the image holds values that are no numbers")
		}
		total += x
	}
	if !(total > 0) {
		return cannot("the image is dark")
	}
	return nil
}

// at returns the screen coordinates of a pixel's middle, M.
func (m *Image) at(column, row int) (alpha, beta float64) {
	return m.Center[0] + (float64(column)+0.5-float64(m.Columns)/2)*m.Pitch,
		m.Center[1] + (float64(row)+0.5-float64(m.Rows)/2)*m.Pitch
}

// Value returns the intensity at a place of the screen, M, by cubic
// convolution of the pixels; 0 outside. Keys, IEEE Trans. ASSP 29, 1153
// (1981), from memory.
func (m *Image) Value(alpha, beta float64) float64 {
	x := (alpha-m.Center[0])/m.Pitch + float64(m.Columns)/2 - 0.5
	y := (beta-m.Center[1])/m.Pitch + float64(m.Rows)/2 - 0.5
	column, row := math.Floor(x), math.Floor(y)
	wx, wy := keys(x-column), keys(y-row)
	sum := 0.0
	for j, v := range wy {
		r := int(row) + j - 1
		if r < 0 || r >= m.Rows {
			continue
		}
		for i, w := range wx {
			if c := int(column) + i - 1; c >= 0 && c < m.Columns {
				sum += v * w * m.Pixels[r*m.Columns+c]
			}
		}
	}
	return sum
}

// keys are the weights of four neighbours at a fraction t.
func keys(t float64) [4]float64 {
	t2, t3 := t*t, t*t*t
	return [4]float64{-t/2 + t2 - t3/2, 1 - 5*t2/2 + 3*t3/2, t/2 + 2*t2 - 3*t3/2, -t2/2 + t3/2}
}

// Coarser returns the image in pixels k times as wide, by averaging; a last
// part of a pixel is left out.
func (m *Image) Coarser(k int) *Image {
	c := &Image{Columns: m.Columns / k, Rows: m.Rows / k, Pitch: m.Pitch * float64(k), Center: m.Center}
	c.Center[0] -= float64(m.Columns-c.Columns*k) / 2 * m.Pitch
	c.Center[1] -= float64(m.Rows-c.Rows*k) / 2 * m.Pitch
	c.Pixels = make([]float64, c.Columns*c.Rows)
	for row := range c.Rows * k {
		for column := range c.Columns * k {
			c.Pixels[row/k*c.Columns+column/k] += m.Pixels[row*m.Columns+column] / float64(k*k)
		}
	}
	return c
}

// centroid is the flux-weighted mean place, M.
func (m *Image) centroid() (alpha, beta float64) {
	var total float64
	for k, w := range m.Pixels {
		x, y := m.at(k%m.Columns, k/m.Columns)
		alpha += w * x
		beta += w * y
		total += w
	}
	return alpha / total, beta / total
}
