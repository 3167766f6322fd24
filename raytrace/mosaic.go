package raytrace

import (
	"image"
	"math"

	"annulet/geodesic"
)

// mosaic is one goroutine's scratch for the pixels of a tile as areas.
type mosaic struct {
	*areas
	bench *bench // follows the paths within pixels
	want  geodesic.Want

	// of the tile with its halo, ray by ray
	stride int
	light  [mostOrders][]float64 // by order, of all but skies, times Field.weight
	bins   [mostOrders][]bin     // by order: where the crossing is, or behind
	sky    []float64             // light of skies
	skyIn  []uint8               // and its order

	rough       []roughPixel
	cells, next []cell
	samples     []sample
	nodes       [][2]float64
	cutter      cutter
	pieces      int       // of all cells
	sums        []float64 // by piece, rule and order
	paths       int
}

// behind marks an order that an opaque emitter hides.
var behind = bin{255, 255}

// roughPixel is one that is cut.
type roughPixel struct {
	at       int                 // in the tile with its halo
	integral [mostOrders]float64 // of Field.weight times light over the screen
	off      [mostOrders]float64 // its estimated error
	scale    [mostOrders]float64 // what it is judged against, see areas.allowed
}

func (a *areas) newMosaic(table *geodesic.OrbitTable) (*mosaic, error) {
	b, err := a.view.newBench(table)
	return &mosaic{areas: a, bench: b, want: a.view.want(layerSet{})}, err
}

// integrate replaces the intensities of a tile of the plate, which is exposed
// already, by means over the pixels. B holds the shaded rays of the tile and
// its halo.
func (m *mosaic) integrate(b *bench, tile image.Rectangle, plate *Plate) (fluxes, error) {
	m.stride, m.paths = tile.Dx()+2*halo, 0
	m.gather(b)
	var light fluxes
	m.rough = m.rough[:0]
	f := &m.view.Field
	across, up := f.Pitches()
	area := across * up
	orders := len(m.marks)
	m.cells = m.cells[:0]
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		for column := tile.Min.X; column < tile.Max.X; column++ {
			k := (row-tile.Min.Y+halo)*m.stride + column - tile.Min.X + halo
			var mean, off [mostOrders]float64
			if rough := m.smooth(k, &mean, &off); rough != 0 {
				m.begin(k, rough, b)
				continue
			}
			for n := range orders {
				light.off[n] += off[n] * area
				mean[n] *= area
			}
			m.write(b, k, tile, &mean, plate, &light)
		}
	}
	if err := m.refine(); err != nil {
		return fluxes{}, err
	}
	for i := range m.rough {
		p := &m.rough[i]
		for n := range orders {
			light.off[n] += p.off[n]
		}
		m.write(b, p.at, tile, &p.integral, plate, &light)
	}
	return light, nil
}

// gather sums the light of the tile's rays.
func (m *mosaic) gather(b *bench) {
	rays := len(b.screen)
	for n := range m.marks {
		m.light[n] = resized(m.light[n], rays)
		m.bins[n] = resized(m.bins[n], rays)
	}
	m.sky, m.skyIn = resized(m.sky, rays), resized(m.skyIn, rays)
	var light [mostOrders]float64
	var bins [mostOrders]bin
	for k := range rays {
		m.sky[k], m.skyIn[k] = m.read(b, k, &light, &bins)
		weight := m.view.Field.weight(b.screen[k])
		for n := range m.marks {
			m.light[n][k], m.bins[n][k] = light[n]*weight, bins[n]
		}
	}
}

func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// read sums the light of ray k order by order, that of skies apart.
func (m *mosaic) read(b *bench, k int, light *[mostOrders]float64, bins *[mostOrders]bin) (sky float64, skyIn uint8) {
	unknown := bin{254, 254}
	for n := range m.marks {
		light[n], bins[n] = 0, unknown
	}
	through := 1.0
	for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
		n := b.at.Order[j]
		if b.at.Surface[j] == geodesic.Plane && bins[n] == unknown {
			bins[n] = m.bin(int(n), b.at.R[j])
		}
		s, lit, passes := b.look(j)
		if !lit {
			continue
		}
		if b.at.Surface[j] == geodesic.Sky {
			sky, skyIn = through*s.intensity, n
			continue
		}
		light[n] += through * s.intensity
		if through *= passes; through == 0 {
			for n := range m.marks {
				if bins[n] == unknown {
					bins[n] = behind
				}
			}
			break
		}
	}
	for n := range m.marks {
		if bins[n] == unknown { // the path escaped before, or fell in
			bins[n] = bin{uint8(len(m.rims[n])), uint8(len(m.kinks[n]))}
			if b.rays.Seen[k] && b.rays.B[k] < m.dark {
				bins[n] = bin{}
			}
		}
	}
	return sky, skyIn
}

// smooth gives a pixel's mean and its error, by order, from its neighbours.
// It returns the orders, as bits, for which they do not tell.
func (m *mosaic) smooth(k int, mean, off *[mostOrders]float64) (rough uint16) {
	w := m.stride
	for n := range m.marks {
		light := m.light[n]
		c := light[k]
		sides, ends := light[k-1]+light[k+1], light[k-w]+light[k+w]
		corners := light[k-w-1] + light[k-w+1] + light[k+w-1] + light[k+w+1]
		x, y := sides-2*c, ends-2*c
		mixed := corners - 2*(sides+ends) + 4*c
		// the next term of the series: the fourth derivatives along the axes
		// are those of a power or an exponential of these second ones
		mean[n], off[n] = c+(x+y)/24, math.Abs(mixed)/160
		if c != 0 || x != 0 || y != 0 {
			off[n] += (x*x + y*y) / math.Abs(c) / 160
		}
		switch m.around(n, k) {
		case hidden:
			rough |= 1 << n
			continue
		case edge: // at most the pixel lies on its other side
			mean[n], off[n] = c, max(math.Abs(x), math.Abs(y), math.Abs(mixed))
		case kink:
			mean[n], off[n] = c, (math.Abs(x)+math.Abs(y))/8
		}
		if !(off[n] <= m.allowed(n)*max(mean[n], m.least[n])) {
			rough |= 1 << n
		}
	}
	return rough
}

// What lies between the middles of a pixel and of its neighbours.
type seam int

const (
	none   seam = iota
	kink        // light goes on, its slope changes
	edge        // there is light on one side only
	hidden      // a whole image may lie between two middles
)

// around returns what lies around pixel k in an order.
func (m *mosaic) around(order, k int) seam {
	bins, w := m.bins[order], m.stride
	at := bins[k]
	least, most, same := at.rims, at.rims, true
	for _, row := range [...]int{k - w, k, k + w} {
		for _, b := range bins[row-1 : row+2] {
			least, most, same = min(least, b.rims), max(most, b.rims), same && b == at
		}
	}
	switch {
	case same:
		return none
	case least == most:
		return kink
	case most-least > 1: // two rims between two middles
		return hidden
	}
	return edge
}

// begin sets a pixel down to be cut.
func (m *mosaic) begin(k int, rough uint16, b *bench) {
	f := &m.view.Field
	across, up := f.Pitches()
	p := roughPixel{at: k}
	for n := range m.marks {
		p.scale[n] = max(m.light[n][k], m.least[n]) * across * up
	}
	m.cells = append(m.cells, cell{
		pixel: len(m.rough), middle: b.screen[k], half: [2]float64{across / 2, up / 2}, rough: rough,
	})
	m.rough = append(m.rough, p)
}

// refine integrates the cells, and their quarters, until they are known.
func (m *mosaic) refine() error {
	for len(m.cells) > 0 {
		if err := m.sample(); err != nil {
			return err
		}
		m.next = m.next[:0]
		for i := range m.cells {
			m.judge(&m.cells[i])
		}
		m.cells, m.next = m.next, m.cells
	}
	return nil
}

// The error of a rule of two nodes is 0.13 d²/I, d its difference from a rule
// of one node, for the integral I of an exponential; with more nodes it is
// less. squareShare leaves room, and shareOfRest is the most that is believed.
// Method.
const squareShare, shareOfRest = 0.5, 0.1

// faintShare is what an order may be off in a pixel where others outshine it,
// in units of the tolerance and of all the light there. Taste: orders 3 and
// more are narrower than their paths are known.
const faintShare = 0.1

// leastBlind is how often pixels with edges that are not known are quartered
// at least. Method: a few samples may all miss what lies in a corner.
const leastBlind = 2

// judge adds a cell to its pixel, or has it integrated better.
func (m *mosaic) judge(c *cell) {
	p := &m.rough[c.pixel]
	var sum, off [mostOrders]float64
	orders := len(m.marks)
	for piece := c.pieces[0]; piece < c.pieces[1]; piece++ {
		both := m.sums[2*piece*orders:][:2*orders]
		for n, fine := range both[orders:] {
			d := math.Abs(fine - both[n])
			if !c.blind && d > 0 {
				d *= min(shareOfRest, squareShare*d/math.Abs(fine))
			}
			sum[n] += fine
			off[n] += d
		}
	}
	known := !c.bent
	whole := 0.0
	for n := range m.marks {
		whole += max(p.scale[n], sum[n])
	}
	for n := range m.marks {
		if c.depth == 0 {
			p.scale[n] = max(p.scale[n], sum[n])
		}
		// quarters may be off by half of what the whole may
		most := m.allowed(n)*p.scale[n] + faintShare*m.tolerance*whole
		known = known && off[n] <= math.Ldexp(most, -c.depth)
	}
	if c.blind && (c.hides || c.depth < leastBlind) {
		known = false
	}
	switch {
	case known || c.depth >= m.deepest && (c.blind || c.bent || c.level == len(stages)-1):
		for n := range m.marks {
			p.integral[n] += sum[n]
			p.off[n] += off[n]
		}
	case c.level < len(stages)-1 && !c.blind && !c.bent:
		again := *c
		again.level++
		m.next = append(m.next, again)
	default:
		for q := range 4 {
			part := cell{pixel: c.pixel, middle: c.middle, rough: c.rough, depth: c.depth + 1, level: c.level}
			part.half = [2]float64{c.half[0] / 2, c.half[1] / 2}
			part.middle[0] += part.half[0] * float64(2*(q&1)-1)
			part.middle[1] += part.half[1] * float64(q&2-1)
			m.next = append(m.next, part)
		}
	}
}

// sampleBlock is how many paths within pixels are followed at a time.
const sampleBlock = 1024

// sample integrates the cells by both rules.
func (m *mosaic) sample() error {
	b := m.bench
	if err := m.survey(); err != nil {
		return err
	}
	m.samples, m.pieces = m.samples[:0], 0
	for i := range m.cells {
		m.cutter.lay(m, i)
	}
	orders := len(m.marks)
	m.sums = resized(m.sums, 2*orders*m.pieces)
	clear(m.sums)
	for i := range m.cells {
		if c := &m.cells[i]; c.known {
			m.knownMiddle(c)
		}
	}
	m.paths += len(m.samples)
	var light [mostOrders]float64
	var bins [mostOrders]bin
	for from := 0; from < len(m.samples); from += sampleBlock {
		block := m.samples[from:min(from+sampleBlock, len(m.samples))]
		b.screen = b.screen[:0]
		for i := range block {
			b.screen = append(b.screen, block[i].at)
		}
		if _, err := b.follow(m.want); err != nil {
			return err
		}
		b.shade()
		for k := range block {
			s := &block[k]
			m.read(b, k, &light, &bins)
			into := m.sums[2*orders*s.piece:][:orders]
			if s.fine {
				into = m.sums[2*orders*s.piece+orders:][:orders]
			}
			weight := s.weight * m.view.Field.weight(s.at)
			for n := range into {
				into[n] += weight * light[n]
			}
			if c := &m.cells[s.cell]; c.blind {
				c.watch(m, &bins)
			}
		}
	}
	return nil
}

// knownMiddle takes the coarsest rule of an uncut pixel from its middle, which
// was followed before.
func (m *mosaic) knownMiddle(c *cell) {
	coarse := m.sums[2*len(m.marks)*c.pieces[0]:]
	for n := range m.marks {
		coarse[n] = 4 * c.half[0] * c.half[1] * m.light[n][m.rough[c.pixel].at]
	}
}

// write replaces the intensities of a pixel. The integral is over Field.weight
// times light.
func (m *mosaic) write(b *bench, k int, tile image.Rectangle, integral *[mostOrders]float64, plate *Plate, light *fluxes) {
	column, row := tile.Min.X+k%m.stride-halo, tile.Min.Y+k/m.stride-halo
	solid := m.view.Field.SolidAngle(column, row)
	pixel := (row-plate.firstRow)*plate.Columns + column
	total := m.sky[k]
	for n := range m.marks {
		mean := integral[n] / solid
		light.flux[n] += integral[n]
		total += mean
		if m.sky[k] != 0 && int(m.skyIn[k]) == n {
			mean += m.sky[k]
			light.flux[n] += m.sky[k] * solid
		}
		set(plate.Layer(Intensity, n), pixel, mean)
	}
	plate.Total[pixel] = float32(total)
}
