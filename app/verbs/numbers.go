package verbs

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
)

// number is a float64 as outputs print it: the fewest digits that read back
// to the same value, ±Inf the string "infinity" or "-infinity", NaN (what
// does not exist) null, in CSV empty.
type number float64

// MarshalJSON implements json.Marshaler.
func (x number) MarshalJSON() ([]byte, error) {
	switch {
	case math.IsNaN(float64(x)):
		return []byte("null"), nil
	case math.IsInf(float64(x), 0):
		return strconv.AppendQuote(nil, x.csv()), nil
	}
	return json.Marshal(float64(x))
}

// csv returns the number as a CSV field.
func (x number) csv() string {
	switch f := float64(x); {
	case math.IsNaN(f):
		return ""
	case math.IsInf(f, 1):
		return "infinity"
	case math.IsInf(f, -1):
		return "-infinity"
	default:
		return strconv.FormatFloat(f, 'g', -1, 64)
	}
}

// parseFinite reads a finite number.
func parseFinite(text string) (float64, error) {
	x, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
	if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%q is not a finite number", text)
	}
	return x, nil
}

// parseImpact reads an impact parameter in M.
func parseImpact(text string) (float64, error) {
	b, err := parseFinite(strings.TrimSuffix(strings.TrimSpace(text), "M"))
	if err != nil {
		return 0, err
	}
	if b < 0 {
		return 0, fmt.Errorf("%s M is negative; an impact parameter is 0 or more", number(b).csv())
	}
	return b, nil
}

// parseTolerance reads the relative tolerance of a path.
func parseTolerance(text string) (float64, error) {
	t, err := parseFinite(text)
	if err != nil {
		return 0, err
	}
	if !(t >= minTolerance && t <= maxTolerance) {
		return 0, fmt.Errorf("%s is out of range; allowed: %g to %g", number(t).csv(), minTolerance, maxTolerance)
	}
	return t, nil
}

// quantity is a flag whose text parse turns into a number.
type quantity struct {
	value float64
	given bool
	shown string // the default, for help
	name  string // of its kind, for help
	parse func(string) (float64, error)
}

// String implements pflag.Value.
func (q *quantity) String() string {
	if q.given {
		return number(q.value).csv()
	}
	return q.shown
}

// Type implements pflag.Value.
func (q *quantity) Type() string { return q.name }

// Set implements pflag.Value.
func (q *quantity) Set(text string) (err error) {
	q.value, err = q.parse(text)
	q.given = err == nil
	return err
}

// writeJSON prints one document. The whole of it is made before any is
// written.
func writeJSON(w io.Writer, document any) error {
	var text bytes.Buffer
	encoder := json.NewEncoder(&text)
	encoder.SetIndent("", "  ")
	encoder.SetEscapeHTML(false)
	if err := encoder.Encode(document); err != nil {
		return err
	}
	_, err := w.Write(text.Bytes())
	return err
}

// honest prints x with the digits that an absolute bound supports, and no
// more than a float64 holds.
func honest(x, bound float64) string {
	if x == 0 || math.IsNaN(x) || math.IsInf(x, 0) {
		return number(x).csv()
	}
	const mostDigits = 15 // that every float64 keeps
	decimals := mostDigits - 1 - int(math.Floor(math.Log10(math.Abs(x))))
	if bound > 0 {
		decimals = min(decimals, int(math.Ceil(-math.Log10(bound))))
	}
	return strconv.FormatFloat(x, 'f', max(decimals, 0), 64)
}
