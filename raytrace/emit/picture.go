package emit

import "math"

// Picture is an equirectangular map of brightness over the sky. Its top row
// is around N, its left and right edges at azimuth 0, and azimuth decreases
// to the right: an observer at azimuth 0 who looks ahead, through flat space,
// sees it upright and unmirrored with its middle, azimuth 180 deg, ahead.
type Picture struct {
	levels []level // of halving size, the first as given
}

// level is one size of a map, row 0 at N.
type level struct {
	columns, rows int
	values        []float32
}

// mostProbes limits the samples along the longer axis of a footprint; longer
// ones are blurred across. Taste.
const mostProbes = 32

// newPicture returns the picture of a map and all its smaller sizes.
func newPicture(columns, rows int, values []float32) *Picture {
	p := &Picture{levels: []level{{columns, rows, values}}}
	for columns > 1 || rows > 1 {
		next := p.levels[len(p.levels)-1].halved()
		columns, rows = next.columns, next.rows
		p.levels = append(p.levels, next)
	}
	return p
}

// halved averages to half the columns and rows, rounded down, over exactly
// the solid angle that each new element covers.
func (l level) halved() level {
	half := level{columns: max(1, l.columns/2), rows: max(1, l.rows/2)}
	half.values = make([]float32, half.columns*half.rows)
	across := make([]float64, half.columns)
	for y := range half.rows {
		clear(across)
		var weight float64
		top, bottom := share(y, l.rows, half.rows)
		for row := int(top); float64(row) < bottom; row++ {
			from, to := max(top, float64(row)), min(bottom, float64(row+1))
			size := bandWeight(from, to, l.rows)
			weight += size
			line := l.values[row*l.columns : (row+1)*l.columns]
			for x := range half.columns {
				left, right := share(x, l.columns, half.columns)
				var sum float64
				for column := int(left); float64(column) < right; column++ {
					sum += float64(line[column]) * (min(right, float64(column+1)) - max(left, float64(column)))
				}
				across[x] += size * sum / (right - left)
			}
		}
		for x := range half.columns {
			half.values[y*half.columns+x] = float32(across[x] / weight)
		}
	}
	return half
}

// share is what element k of few covers of many.
func share(k, many, few int) (from, to float64) {
	return float64(k*many) / float64(few), float64((k+1)*many) / float64(few)
}

// bandWeight is the share of the sky between two rows.
func bandWeight(from, to float64, rows int) float64 {
	unit := math.Pi / float64(rows)
	return math.Cos(from*unit) - math.Cos(to*unit)
}

// at interpolates at x in [0, 1) from the left, around the sky, and y in
// [0, 1] from the top.
func (l *level) at(x, y float64) float64 {
	x = x*float64(l.columns) - 0.5
	y = max(0, min(float64(l.rows-1), y*float64(l.rows)-0.5))
	floorX := math.Floor(x)
	left := wrapIndex(int(floorX), l.columns)
	right := wrapIndex(left+1, l.columns)
	top := int(y)
	bottom := min(top+1, l.rows-1)
	fx, fy := x-floorX, y-float64(top)
	a, b := l.values[top*l.columns:], l.values[bottom*l.columns:]
	upper := float64(a[left])*(1-fx) + float64(a[right])*fx
	lower := float64(b[left])*(1-fx) + float64(b[right])*fx
	return upper*(1-fy) + lower*fy
}

func wrapIndex(k, n int) int {
	k %= n
	if k < 0 {
		k += n
	}
	return k
}

// over averages over a footprint: samples along its longer axis, each of
// about the size of its shorter one (Heckbert's elliptical filter, Master's
// thesis, Berkeley (1989), in the cheap form of graphics hardware).
func (p *Picture) over(f *footprint) float64 {
	theta, phi, du, dv := f.angles()
	base := &p.levels[0]
	// in elements of the map, x to the right and y down
	scaleX, scaleY := -float64(base.columns)/(2*math.Pi), float64(base.rows)/math.Pi
	ux, uy, vx, vy := du[1]*scaleX, du[0]*scaleY, dv[1]*scaleX, dv[0]*scaleY
	xx, xy, yy := ux*ux+vx*vx, ux*uy+vx*vy, uy*uy+vy*vy
	mean, split := (xx+yy)/2, math.Hypot((xx-yy)/2, xy)
	long, short := math.Sqrt(mean+split), math.Sqrt(max(0, mean-split))
	sin, cos := math.Sincos(math.Atan2(2*xy, xx-yy) / 2)
	probes := int(max(1, min(mostProbes, math.Ceil(long/max(short, 1)))))
	size := max(1, short, long/float64(probes))
	height := min(math.Log2(size), float64(len(p.levels)-1))
	lower := int(height)
	upper := min(lower+1, len(p.levels)-1)
	blend := height - float64(lower)
	x0, y0 := 1-phi/(2*math.Pi), theta/math.Pi
	dx, dy := cos*long/float64(base.columns), sin*long/float64(base.rows)
	var sum float64
	for i := range probes {
		t := (float64(i)+0.5)/float64(probes) - 0.5
		x, y := x0+t*dx, y0+t*dy
		if y < 0 || y > 1 { // over a pole to the other side
			y = math.Abs(y)
			y, x = min(y, 2-y), x+0.5
		}
		sum += p.levels[lower].at(x, y)*(1-blend) + p.levels[upper].at(x, y)*blend
	}
	return sum / float64(probes)
}
