package measure

import (
	"runtime"

	"golang.org/x/sync/errgroup"
	"gonum.org/v1/gonum/dsp/fourier"

	"annulet/geodesic/guard"
)

// transform is the discrete Fourier transform of a real image on a grid of
// columns by rows: coefficients of columns/2+1 by rows.
type transform struct {
	columns, rows, half int
	coefficients        []complex128
}

// fastSize returns the least product of 2, 3 and 5 that is even and at least
// n.
func fastSize(n int) int {
	for n = max(n, 2); ; n++ {
		k := n
		for _, p := range []int{2, 3, 5} {
			for k%p == 0 {
				k /= p
			}
		}
		if k == 1 && n%2 == 0 {
			return n
		}
	}
}

// shared runs work for 0 … n-1 in as many goroutines as there are processors,
// each with a state of its own. A panic of theirs becomes one of the caller.
func shared[S any](n int, state func() S, work func(s S, k int)) {
	var group errgroup.Group
	workers := min(n, runtime.GOMAXPROCS(0))
	for w := range workers {
		group.Go(guard.Work(func() error {
			s := state()
			for k := n * w / workers; k < n*(w+1)/workers; k++ {
				work(s, k)
			}
			return nil
		}))
	}
	if err := group.Wait(); err != nil {
		panic(err)
	}
}

// newTransform transforms an image in the corner of a grid that is dark
// elsewhere.
func newTransform(m *Image, columns, rows int) *transform {
	t := &transform{columns: columns, rows: rows, half: columns/2 + 1}
	t.coefficients = make([]complex128, t.half*rows)
	type along struct {
		fft  *fourier.FFT
		line []float64
	}
	shared(m.Rows, func() along { return along{fourier.NewFFT(columns), make([]float64, columns)} }, func(s along, row int) {
		copy(s.line, m.Pixels[row*m.Columns:(row+1)*m.Columns])
		s.fft.Coefficients(t.coefficients[row*t.half:(row+1)*t.half], s.line)
	})
	t.acrossRows(func(fft *fourier.CmplxFFT, line []complex128) { fft.Coefficients(line, line) })
	return t
}

// acrossRows changes every column of coefficients.
func (t *transform) acrossRows(change func(*fourier.CmplxFFT, []complex128)) {
	type up struct {
		fft  *fourier.CmplxFFT
		line []complex128
	}
	shared(t.half, func() up { return up{fourier.NewCmplxFFT(t.rows), make([]complex128, t.rows)} }, func(s up, column int) {
		for row := range t.rows {
			s.line[row] = t.coefficients[row*t.half+column]
		}
		change(s.fft, s.line)
		for row := range t.rows {
			t.coefficients[row*t.half+column] = s.line[row]
		}
	})
}

// frequency returns the frequency of a coefficient, cycles a pixel.
func (t *transform) frequency(column, row int) (x, y float64) {
	if row > t.rows/2 {
		row -= t.rows
	}
	return float64(column) / float64(t.columns), float64(row) / float64(t.rows)
}

// back writes the inverse transform over the image; the transform is used up.
func (t *transform) back(m *Image) {
	t.acrossRows(func(fft *fourier.CmplxFFT, line []complex128) { fft.Sequence(line, line) })
	scale := 1 / float64(t.columns*t.rows)
	type along struct {
		fft  *fourier.FFT
		line []float64
	}
	shared(m.Rows, func() along { return along{fourier.NewFFT(t.columns), make([]float64, t.columns)} }, func(s along, row int) {
		s.fft.Sequence(s.line, t.coefficients[row*t.half:(row+1)*t.half])
		for column := range m.Columns {
			m.Pixels[row*m.Columns+column] = s.line[column] * scale
		}
	})
}
