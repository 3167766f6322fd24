package curves

import "math"

// Isolines returns the lines on which a layer has a value, by marching
// squares: within each cell of four pixel centres a line is straight. Values
// have length columns·rows, row 0 at the bottom; a line's points are columns
// and rows from the centre of the first pixel, and a closed line ends where it
// begins. Cells with a value that is missing have none.
func Isolines(values []float32, columns, rows int, level float64) [][][2]float64 {
	const none = -1
	v := func(c, r int) float64 { return float64(values[r*columns+c]) - level }
	// A crossing lies on the edge from a pixel to the right or upwards.
	key := func(c, r, up int) int { return 2*(r*columns+c) + up }
	place := map[int][2]float64{}
	next := map[int][2]int{} // neighbours along the line
	var order []int
	join := func(a, b int) {
		for _, k := range [2]int{a, b} {
			if _, known := next[k]; !known {
				next[k] = [2]int{none, none}
				order = append(order, k)
			}
		}
		add := func(k, other int) {
			n := next[k]
			if n[0] == none {
				n[0] = other
			} else {
				n[1] = other
			}
			next[k] = n
		}
		add(a, b)
		add(b, a)
	}
	for r := range rows - 1 {
		for c := range columns - 1 {
			a, b, e, f := v(c, r), v(c+1, r), v(c+1, r+1), v(c, r+1)
			if math.IsNaN(a+b+e+f) || math.IsInf(a+b+e+f, 0) {
				continue
			}
			var ends []int
			edge := func(p, q float64, x, y, up int) {
				if (p > 0) == (q > 0) {
					return
				}
				t, k := p/(p-q), key(x, y, up)
				at := [2]float64{float64(x) + t, float64(y)}
				if up == 1 {
					at = [2]float64{float64(x), float64(y) + t}
				}
				place[k] = at
				ends = append(ends, k)
			}
			edge(a, b, c, r, 0)
			edge(b, e, c+1, r, 1)
			edge(f, e, c, r+1, 0)
			edge(a, f, c, r, 1)
			for k := 0; k+1 < len(ends); k += 2 {
				join(ends[k], ends[k+1])
			}
		}
	}
	done := map[int]bool{}
	var lines [][][2]float64
	follow := func(start int) {
		line := [][2]float64{place[start]}
		done[start] = true
		for at := start; ; {
			n := next[at]
			to := n[0]
			if to == none || done[to] {
				to = n[1]
			}
			if to == none || done[to] {
				if len(line) > 2 && (n[0] == start || n[1] == start) {
					line = append(line, line[0])
				}
				break
			}
			done[to] = true
			line = append(line, place[to])
			at = to
		}
		lines = append(lines, line)
	}
	for _, k := range order { // open lines from their ends, then the closed ones
		if !done[k] && next[k][1] == none {
			follow(k)
		}
	}
	for _, k := range order {
		if !done[k] {
			follow(k)
		}
	}
	return lines
}
