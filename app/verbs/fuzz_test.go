package verbs

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// FuzzColumns: a table of baselines is refused as bad usage, or holds finite
// numbers, two a row.
func FuzzColumns(f *testing.F) {
	for _, text := range []string{
		"u,v\n1,2\n3,4\n", "v,u\n1,2\n", "\ufeffu,v\n 1 , 2 \n", "u,v\n1,inf\n", "u,v\n", "", "u\n1\n", "u,v,w\n1,2,3\n", "u,v\n1,2,3\n",
		"u,u\n1,2\n", "u,v\n\"1\n\",2\n", "u,v\r\n1,2\r\n", "u,v\n1e999,2\n", "u,v\n0x1p3,1_0\n", "\x00\n",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		pairs, err := readColumns("-", strings.NewReader(text), "u", "v")
		if err != nil {
			if !errors.As(err, new(usage)) {
				t.Errorf("not the request's fault: %v", err)
			}
			return
		}
		for _, p := range pairs {
			if s := p[0] + p[1]; math.IsNaN(s) || math.IsInf(p[0], 0) || math.IsInf(p[1], 0) {
				t.Errorf("%v", p)
			}
		}
		if len(pairs) == 0 {
			t.Error("no rows and no error")
		}
	})
}

// FuzzNumbers: what flags understand as a number is one, in its range.
func FuzzNumbers(f *testing.F) {
	for _, text := range []string{"1", "-1", "1e999", "nan", "inf", "infinity", "10 Msun", "4M", "2GiB", "1e300TB", "0x1p-3", "1_0", "", "1,2", "total", "5e-324", "1e15kB"} {
		f.Add(text)
	}
	between := func(lo, hi float64) func(float64) bool { return func(x float64) bool { return x >= lo && x <= hi } }
	size := func(text string) (float64, error) {
		n, err := parseBytes(text)
		return float64(n), err
	}
	f.Fuzz(func(t *testing.T, text string) {
		for name, p := range map[string]struct {
			parse func(string) (float64, error)
			right func(float64) bool
		}{
			"finite":    {parseFinite, between(-math.MaxFloat64, math.MaxFloat64)},
			"impact":    {parseImpact, between(0, math.MaxFloat64)},
			"tolerance": {parseTolerance, between(minTolerance, maxTolerance)},
			"bin":       {parseBin, between(0, math.MaxFloat64)},
			"length":    {parseLength, between(-math.MaxFloat64, math.MaxFloat64)},
			"mass":      {parseMass, between(5e-324, math.MaxFloat64)},
			"station":   {parseStation, between(0, math.Inf(1))},
			"positive":  {parsePositive, between(5e-324, math.MaxFloat64)},
			"size":      {size, between(1, 1e15)},
		} {
			if x, err := p.parse(text); err == nil && !p.right(x) {
				t.Errorf("%s %q: %g", name, text, x)
			}
		}
		if at, err := parsePair("at", text); err == nil && (math.IsNaN(at[0]+at[1]) || math.IsInf(at[0], 0) || math.IsInf(at[1], 0)) {
			t.Errorf("pair %q: %v", text, at)
		}
	})
}
