package raytrace

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/integrate/quad"
)

// cell is a pixel, or a part of one, that is cut along curves.
type cell struct {
	pixel        int // among the rough ones
	middle, half [2]float64
	rough        uint16            // orders that are cut
	depth        int               // quarterings so far
	level        int               // of the rules it is integrated by, see stages
	pieces       [2]int            // the first and the one after the last
	known        bool              // its coarser rule is the middle of the pixel
	bent         bool              // its curves are no cubics: only quarters may be
	blind        bool              // it may hold edges that are not cut along
	hides        bool              // blind, and a lensed image may lie between the samples
	least, most  [mostOrders]uint8 // rims within the crossings of its samples
	watched      bool
}

// sample is one path within a cell.
type sample struct {
	at     [2]float64
	weight float64 // area on the screen
	cell   int
	piece  int  // of all cells: between the same curves
	fine   bool // of the finer rule
}

// watch notes what samples of a blind cell have met.
func (c *cell) watch(m *mosaic, bins *[mostOrders]bin) {
	for n, rims := range m.rims {
		if !c.watched {
			c.least[n], c.most[n] = bins[n].rims, bins[n].rims
		}
		c.least[n], c.most[n] = min(c.least[n], bins[n].rims), max(c.most[n], bins[n].rims)
		if c.least[n] == 0 && int(c.most[n]) == len(rims) && len(rims) > 0 {
			c.hides = true
		}
	}
	c.watched = true
}

// The places, from edge to edge of a cell, between which curves are cubics.
const edgeNodes = 4

var edgeAt = [edgeNodes]float64{-1, -1. / 3, 1. / 3, 1}

// checkAt are places at which the cubics are checked, far from those that they
// go through.
var checkAt = [...][2]float64{{0.72, -0.7}, {-0.66, -0.75}}

// placed is how many places a cell has.
const placed = edgeNodes*edgeNodes + len(checkAt)

// survey aims at the places of all cells.
func (m *mosaic) survey() error {
	m.nodes = m.nodes[:0]
	for i := range m.cells {
		c := &m.cells[i]
		for _, y := range edgeAt {
			for _, x := range edgeAt {
				m.nodes = append(m.nodes, [2]float64{c.middle[0] + x*c.half[0], c.middle[1] + y*c.half[1]})
			}
		}
		for _, p := range checkAt {
			m.nodes = append(m.nodes, [2]float64{c.middle[0] + p[0]*c.half[0], c.middle[1] + p[1]*c.half[1]})
		}
	}
	b := m.bench
	b.dirs = m.view.Field.directions(m.nodes, b.dirs[:0])
	return b.aim(&b.rays)
}

func square(x float64) float64 { return x * x }

// curve is one that crosses a cell: at each place by how much b² is beyond
// that of the curve, M². On a parallel field b² is a quadratic, and lensed
// images are nearly circles.
type curve struct {
	order  int
	beyond [edgeNodes][edgeNodes]float64 // outer side, inner side
}

// cutter lays samples between the curves of a cell.
type cutter struct {
	curves []curve
	base   [mostOrders]int // marks of the order within the whole cell
	all    [mostOrders]int // its marks
	orders int
	dark   bool      // where nothing shines is known
	images []float64 // impact parameters of an order's marks
	breaks []float64 // across the lines
	inner  []float64 // along one
}

// rule is how many nodes of Gauss and Legendre lie across the lines of a piece
// and along them.
type rule struct{ lines, nodes int }

// stages are the rules that are tried in turn on the pieces of a cell, each
// beside a coarser one. Light changes most along lines, and pieces may be
// triangles. Method.
var stages = [...]struct{ fine, coarse rule }{
	{rule{2, 2}, rule{1, 1}},
	{rule{3, 4}, rule{2, 2}},
	{rule{4, 8}, rule{3, 4}},
}

// rules are Gauss and Legendre's on [-1, 1], by the number of nodes.
var rules = func() (r [9]struct{ at, weight []float64 }) {
	for _, n := range []int{1, 2, 3, 4, 8} {
		r[n].at, r[n].weight = make([]float64, n), make([]float64, n)
		quad.Legendre{}.FixedLocations(r[n].at, r[n].weight, -1, 1)
	}
	return r
}()

// lay appends the samples of cell i, of the finer rule and the coarser one.
func (t *cutter) lay(m *mosaic, i int) {
	c := &m.cells[i]
	along := t.find(m, i)
	c.pieces = [2]int{m.pieces, m.pieces}
	if c.bent && c.depth < m.deepest {
		return
	}
	t.breaks = append(t.breaks[:0], -1)
	for k := range t.curves {
		var first, last [edgeNodes]float64
		for o, at := range t.curves[k].beyond {
			first[o], last[o] = at[0], at[edgeNodes-1]
		}
		t.breaks = roots(&last, roots(&first, t.breaks))
	}
	slices.Sort(t.breaks)
	t.breaks = append(t.breaks, 1)
	stage := stages[c.level]
	for k := 1; k < len(t.breaks); k++ {
		from, to := t.breaks[k-1], t.breaks[k]
		if to-from < thinnest {
			continue
		}
		first := m.pieces
		c.known = len(t.curves) == 0 && c.depth == 0 && c.level == 0
		for k, r := range [...]rule{stage.coarse, stage.fine} {
			if k == 0 && c.known {
				continue
			}
			across := &rules[r.lines]
			for q, y := range across.at {
				t.line(m, i, along, first, (from+to)/2+(to-from)/2*y, across.weight[q]*(to-from)/2, r.nodes, k == 1)
			}
		}
	}
	c.pieces[1] = m.pieces
}

// thinnest is the width of pieces, in halves of a cell, that are left out.
// Method: rounding of the cuts.
const thinnest = 1e-9

// line lays the samples on one line through a cell, at outer in [-1, 1]. Its
// pieces are counted from first.
func (t *cutter) line(m *mosaic, i, along, first int, outer, weight float64, nodes int, fine bool) {
	c := &m.cells[i]
	across := cubicAt(outer)
	t.inner = append(t.inner[:0], -1)
	for k := range t.curves {
		var on [edgeNodes]float64
		for o := range on {
			for x, d := range t.curves[k].beyond[o] {
				on[x] += across[o] * d
			}
		}
		t.inner = roots(&on, t.inner)
	}
	slices.Sort(t.inner)
	t.inner = append(t.inner, 1)
	rule := &rules[nodes]
	area := c.half[0] * c.half[1]
	m.pieces = max(m.pieces, first+len(t.inner)-1)
	for k := 1; k < len(t.inner); k++ {
		from, to := t.inner[k-1], t.inner[k]
		if to-from < thinnest || t.dark && !t.shines(&across, (from+to)/2) {
			continue
		}
		for q, x := range rule.at {
			at := c.middle
			at[along] += c.half[along] * ((from+to)/2 + (to-from)/2*x)
			at[1-along] += c.half[1-along] * outer
			m.samples = append(m.samples, sample{
				at: at, weight: weight * rule.weight[q] * (to - from) / 2 * area, cell: i, piece: first + k - 1, fine: fine,
			})
		}
	}
}

// shines says whether anything can shine at a place: there is an order whose
// crossing lies between the first and the last of its marks.
func (t *cutter) shines(across *[edgeNodes]float64, inner float64) bool {
	along := cubicAt(inner)
	within := t.base
	for k := range t.curves {
		c, beyond := &t.curves[k], 0.0
		for o := range across {
			for x, d := range c.beyond[o] {
				beyond += across[o] * along[x] * d
			}
		}
		if beyond > 0 {
			within[c.order]++
		}
	}
	for n := range t.orders {
		if within[n] > 0 && within[n] < t.all[n] {
			return true
		}
	}
	return false
}

// find sets the curves that cross cell i, and returns the axis of the screen
// along which b changes most, on which lines are laid.
func (t *cutter) find(m *mosaic, i int) (along int) {
	c := &m.cells[i]
	rays := &m.bench.rays
	from := i * placed
	if math.Abs(c.middle[1]) > math.Abs(c.middle[0]) {
		along = 1
	}
	t.curves, t.orders = t.curves[:0], len(m.marks)
	t.dark = !m.stars && m.geometry != nil
	c.blind = m.stars || m.geometry == nil
	if !c.blind {
		for k := from; k < from+edgeNodes*edgeNodes; k++ {
			if !rays.Seen[k] || rays.KR[k] < 0 { // the path begins outward
				c.blind, t.dark = true, false
			}
		}
	}
	pixel := m.rough[c.pixel].at
	for n := range m.marks {
		t.all[n] = len(m.marks[n])
		switch k := int(m.bins[n][pixel].rims); {
		case k == 0:
			t.base[n] = 0
		case k >= len(m.rims[n]):
			t.base[n] = t.all[n]
		default:
			t.base[n] = 1 // it may shine
		}
		if c.rough&(1<<n) == 0 {
			continue
		}
		if m.curves[n] == nil || m.geometry == nil || c.blind && !m.stars {
			c.blind, t.dark = true, false
			continue
		}
		t.base[n] = 0
		c.bent = !t.across(m, n, from, along, m.allowed(n)*bentShare*max(c.half[0], c.half[1])) || c.bent
	}
	if m.dims && t.meet() {
		c.bent = true
	}
	if m.stars && m.geometry != nil { // the limb
		var limb curve
		for k := range edgeNodes * edgeNodes {
			place(&limb, along, k, square(rays.B[from+k])-square(m.geometry.Barrier))
		}
		if limb.crosses() {
			t.curves = append(t.curves, limb)
		}
	}
	return along
}

// bentShare is the part of the tolerance, of half a pixel, that cuts may be
// off. Method: orders 1 and 2 are much narrower than pixels.
const bentShare = 0.1

// across appends the curves of an order's marks that cross the cell whose
// places are the rays from on. It reports whether the cubics are right within
// off, on the screen.
func (t *cutter) across(m *mosaic, order, from, along int, off float64) (right bool) {
	rays := &m.bench.rays
	first := len(t.curves)
	for range m.marks[order] {
		t.curves = append(t.curves, curve{order: order})
	}
	t.images = resized(t.images, len(m.marks[order]))
	for k := range edgeNodes * edgeNodes {
		m.curves[order].At(m.geometry.SweptTo(rays.SinS[from+k], order), t.images)
		for j, image := range t.images {
			place(&t.curves[first+j], along, k, square(rays.B[from+k])-square(image))
		}
	}
	right = true
	kept := first
	for k := first; k < len(t.curves); k++ {
		switch c := &t.curves[k]; {
		case c.crosses():
			t.curves[kept] = *c
			kept++
			for q := range checkAt {
				ray := from + edgeNodes*edgeNodes + q
				m.curves[order].At(m.geometry.SweptTo(rays.SinS[ray], order), t.images)
				image := t.images[k-first]
				beyond := square(rays.B[ray]) - square(image)
				right = right && math.Abs(beyond-c.at(along, checkAt[q])) <= off*m.perScreen*2*image
			}
		case c.beyond[0][0] > 0:
			t.base[order]++
		}
	}
	t.curves = t.curves[:kept]
	return right
}

// meet says whether curves of different orders cut each other within the cell:
// all four combinations of their sides are there.
func (t *cutter) meet() bool {
	for i := range t.curves {
		for j := range i {
			a, b := &t.curves[i], &t.curves[j]
			if a.order == b.order {
				continue
			}
			var seen [4]bool
			for o := range a.beyond {
				for x := range a.beyond[o] {
					k := 0
					if a.beyond[o][x] > 0 {
						k++
					}
					if b.beyond[o][x] > 0 {
						k += 2
					}
					seen[k] = true
				}
			}
			if seen == [4]bool{true, true, true, true} {
				return true
			}
		}
	}
	return false
}

// at is the cubic at a place of the cell.
func (c *curve) at(along int, p [2]float64) (beyond float64) {
	outer, inner := cubicAt(p[1-along]), cubicAt(p[along])
	for o, row := range c.beyond {
		for x, d := range row {
			beyond += outer[o] * inner[x] * d
		}
	}
	return beyond
}

// place sets the kth place, rows from the bottom.
func place(c *curve, along, k int, beyond float64) {
	row, column := k/edgeNodes, k%edgeNodes
	if along == 1 {
		row, column = column, row
	}
	c.beyond[row][column] = beyond
}

// crosses says whether the curve passes between the places.
func (c *curve) crosses() bool {
	below, above := false, false
	for _, row := range c.beyond {
		for _, d := range row {
			below, above = below || d <= 0, above || d > 0
		}
	}
	return below && above
}

// cubicAt is the weights of the values at edgeAt in the cubic through them.
func cubicAt(x float64) (w [edgeNodes]float64) {
	a, b := x*x-1, 9*x*x-1
	w[0], w[3] = -b*(x-1)/16, b*(x+1)/16
	w[1], w[2] = 9*a*(3*x-1)/16, -9*a*(3*x+1)/16
	return w
}

// roots appends where the cubic through these values changes its sign: by
// the method of Illinois between two of its places (Dowell & Jarratt, BIT 11,
// 168 (1971), from memory).
func roots(f *[edgeNodes]float64, to []float64) []float64 {
	for k := 1; k < edgeNodes; k++ {
		lo, hi, fLo, fHi := edgeAt[k-1], edgeAt[k], f[k-1], f[k]
		if (fLo > 0) == (fHi > 0) {
			continue
		}
		x := hi
		kept := 0
		for range 40 {
			x = hi - fHi*(hi-lo)/(fHi-fLo)
			w := cubicAt(x)
			y := w[0]*f[0] + w[1]*f[1] + w[2]*f[2] + w[3]*f[3]
			if y == 0 || hi-lo < 1e-12 {
				break
			}
			if (y > 0) == (fHi > 0) {
				if hi-x < 1e-13 {
					break
				}
				hi, fHi = x, y
				if kept > 0 {
					fLo /= 2
				}
				kept = 1
			} else {
				if x-lo < 1e-13 {
					break
				}
				lo, fLo = x, y
				if kept < 0 {
					fHi /= 2
				}
				kept = -1
			}
		}
		to = append(to, x)
	}
	return to
}
