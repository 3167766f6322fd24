package emit

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/interp"
)

// Profile is how the light of a disk depends on radius, in the gas frame. It
// is called once a block.
type Profile interface {
	// Fill writes the profile at the radii r, M, that are lit.
	Fill(r []float64, lit []bool, values []float64)
}

// At returns a profile at one radius, M.
func At(p Profile, r float64) float64 {
	value := []float64{0}
	p.Fill([]float64{r}, []bool{true}, value)
	return value[0]
}

// Power is the power law (r/M)^-Power.
type Power float64

// Fill implements Profile.
func (p Power) Fill(r []float64, lit []bool, values []float64) {
	for j, is := range lit {
		if is {
			values[j] = power(r[j], -float64(p))
		}
	}
}

// BrokenPower is a power law in pieces, continuous at the breaks; the
// innermost piece is (r/M)^-index.
type BrokenPower struct{ index, breaks, scale []float64 }

// NewBrokenPower takes one index more than breaks, radii in M that grow.
func NewBrokenPower(index, breaks []float64) *BrokenPower {
	p := &BrokenPower{index: index, breaks: breaks, scale: []float64{1}}
	for k, r := range breaks {
		p.scale = append(p.scale, p.scale[k]*math.Pow(r, index[k+1]-index[k]))
	}
	return p
}

// Breaks returns the radii, M, where the slope changes.
func (p *BrokenPower) Breaks() []float64 { return p.breaks }

// Fill implements Profile.
func (p *BrokenPower) Fill(r []float64, lit []bool, values []float64) {
	for j, is := range lit {
		if !is {
			continue
		}
		k := 0
		for k < len(p.breaks) && r[j] > p.breaks[k] {
			k++
		}
		values[j] = p.scale[k] * power(r[j], -p.index[k])
	}
}

// Table is a profile read from a file. Between its points it is the monotone
// cubic of Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5, 300 (1984), from
// memory, which never overshoots.
type Table struct {
	curve        interp.FritschButland
	exponent     int     // the curve is that of value / 2^exponent, so that no step of it overflows
	Inner, Outer float64 // where it begins and ends, M
}

// Bounds of what a table may hold. Method: far beyond any disk, and where the
// coefficients of cubics stay numbers.
const (
	minTableRadius, maxTableRadius = 1e-6, 1e12 // M
	minTableStep                   = 1e-12      // relative, from radius to radius
	maxTableValue                  = 1e300
)

// maxTableRows bounds a table. Taste: far more than a profile needs.
const maxTableRows = 1_000_000

// LoadTable reads a CSV file of radius, M, and value: the radii growing, the
// values not negative. A first line that is not numbers is a header; empty
// lines and lines that begin with # do not count. Errors name the line.
func LoadTable(file string) (*Table, error) {
	f, err := os.Open(file)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	t, err := readTable(f)
	if err != nil {
		return nil, fmt.Errorf("%s:%w", file, err)
	}
	return t, nil
}

// readTable is LoadTable; its errors begin with the number of the line.
func readTable(from io.Reader) (*Table, error) {
	var radii, values []float64
	lines := bufio.NewScanner(from)
	line, header := 0, false
	for lines.Scan() {
		line++
		text := strings.TrimSpace(strings.TrimPrefix(lines.Text(), "\ufeff"))
		if text == "" || text[0] == '#' {
			continue
		}
		r, value, err := tableRow(text)
		switch {
		case err != nil && len(radii) == 0 && !header && !strings.ContainsAny(text[:1], "+-.0123456789"):
			header = true
		case err != nil:
			return nil, fmt.Errorf("%d: %w", line, err)
		case len(radii) > 0 && r <= radii[len(radii)-1]:
			return nil, fmt.Errorf("%d: radii must grow, and %g M does not come after %g M", line, r, radii[len(radii)-1])
		case len(radii) > 0 && r < radii[len(radii)-1]*(1+minTableStep):
			return nil, fmt.Errorf("%d: radii must grow by one part in 1e12 or more, and %.17g M comes after %.17g M", line, r, radii[len(radii)-1])
		case len(radii) == maxTableRows:
			return nil, fmt.Errorf("%d: more than %d rows", line, maxTableRows)
		default:
			radii, values = append(radii, r), append(values, value)
		}
	}
	if err := lines.Err(); err != nil {
		return nil, fmt.Errorf("%d: %w", line+1, err)
	}
	if len(radii) < 2 {
		return nil, fmt.Errorf("%d: a table of %d rows; allowed: two or more of r [M],value", line, len(radii))
	}
	t := &Table{Inner: radii[0], Outer: radii[len(radii)-1]}
	_, t.exponent = math.Frexp(slices.Max(values))
	for k := range values {
		values[k] = math.Ldexp(values[k], -t.exponent)
	}
	if err := t.curve.Fit(radii, values); err != nil {
		return nil, fmt.Errorf("%d: %w", line, err)
	}
	return t, nil
}

// tableRow reads a row of two numbers.
func tableRow(text string) (r, value float64, err error) {
	left, right, two := strings.Cut(text, ",")
	if !two || strings.Contains(right, ",") {
		return 0, 0, fmt.Errorf("%q: allowed: two numbers with a comma between, r [M],value", text)
	}
	if r, err = strconv.ParseFloat(strings.TrimSpace(left), 64); err != nil {
		return 0, 0, fmt.Errorf("radius %q is not a number", left)
	}
	if value, err = strconv.ParseFloat(strings.TrimSpace(right), 64); err != nil {
		return 0, 0, fmt.Errorf("value %q is not a number", right)
	}
	switch {
	case !(r >= minTableRadius && r <= maxTableRadius):
		return 0, 0, fmt.Errorf("radius %g: allowed: %g to %g M", r, minTableRadius, maxTableRadius)
	case !(value >= 0 && value <= maxTableValue):
		return 0, 0, fmt.Errorf("value %g: allowed: 0 or more, up to %g", value, maxTableValue)
	}
	return r, value, nil
}

// ErrTableShort: a disk reaches beyond its table.
var ErrTableShort = errors.New("the table does not cover the disk")

// Covers returns an error that wraps ErrTableShort unless the table holds
// both rims, M.
func (t *Table) Covers(inner, outer float64) error {
	if inner < t.Inner || outer > t.Outer {
		return fmt.Errorf("%w: it has r from %g to %g M, the disk lies from %g to %g M", ErrTableShort, t.Inner, t.Outer, inner, outer)
	}
	return nil
}

// Fill implements Profile.
func (t *Table) Fill(r []float64, lit []bool, values []float64) {
	for j, is := range lit {
		if is {
			values[j] = math.Ldexp(max(0, t.curve.Predict(r[j])), t.exponent)
		}
	}
}
