package sweep

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"strings"
)

// Axis is one key of the scene and the values it takes, as texts that the
// scene file understands.
type Axis struct {
	Key    string   `json:"key"`
	Values []string `json:"values"`
}

// maxValues bounds an axis, and the product of all.
const maxValues = 1_000_000

// ErrVary is what is wrong with a KEY=FROM:TO:STEP; every error about one
// wraps it.
var ErrVary = errors.New("allowed are KEY=FROM:TO:STEP, as in observer.inclination=10:80:10deg, and KEY=VALUE,VALUE,…")

// ParseAxis reads KEY=FROM:TO:STEP, both ends included, or KEY=VALUE,…. A
// unit may stand behind the last number, for all three, or behind each, the
// same one.
func ParseAxis(text string) (Axis, error) {
	key, values, ok := strings.Cut(text, "=")
	key, values = strings.TrimSpace(key), strings.TrimSpace(values)
	if !ok || key == "" || values == "" {
		return Axis{}, fmt.Errorf("%q: %w", text, ErrVary)
	}
	axis := Axis{Key: key}
	var err error
	if parts := strings.Split(values, ":"); len(parts) == 3 {
		axis.Values, err = steps(parts)
	} else {
		axis.Values, err = list(values)
	}
	if err != nil {
		return Axis{}, fmt.Errorf("%q: %w", text, err)
	}
	return axis, nil
}

// list splits at the commas outside brackets and quotes: a value may be a
// TOML array.
func list(text string) ([]string, error) {
	var values []string
	depth, from, quoted := 0, 0, false
	for at, c := range text {
		switch {
		case c == '"':
			quoted = !quoted
		case quoted:
		case c == '[' || c == '{':
			depth++
		case c == ']' || c == '}':
			depth--
		case c == ',' && depth == 0:
			values = append(values, text[from:at])
			from = at + 1
		}
	}
	values = append(values, text[from:])
	seen := map[string]bool{}
	for k, v := range values {
		v = strings.TrimSpace(v)
		if v == "" {
			return nil, fmt.Errorf("a value is empty: %w", ErrVary)
		}
		if seen[v] {
			return nil, fmt.Errorf("the value %s stands twice: %w", v, ErrVary)
		}
		seen[v], values[k] = true, v
	}
	return values, nil
}

// steps works in exact fractions, so that 0:1:0.1 has eleven values and none
// of them is 0.30000000000000004.
func steps(parts []string) ([]string, error) {
	var numbers [3]*big.Rat
	var unit string
	for k, part := range parts {
		number, own := cutUnit(strings.TrimSpace(part))
		if own != "" && unit != "" && own != unit {
			return nil, fmt.Errorf("units %s and %s: %w", unit, own, ErrVary)
		}
		if own != "" {
			unit = own
		}
		if strings.ContainsAny(own, "0123456789") {
			return nil, fmt.Errorf("%q is no unit: %w", own, ErrVary)
		}
		if len(number) > 40 { // an exponent may ask for a fraction of any size
			return nil, fmt.Errorf("%q is no number: %w", number, ErrVary)
		}
		if e := strings.IndexAny(number, "eE"); e >= 0 && len(number)-e > 5 || number == "" {
			return nil, fmt.Errorf("%q is no number: %w", number, ErrVary)
		}
		r, ok := new(big.Rat).SetString(number)
		if !ok {
			return nil, fmt.Errorf("%q is no number: %w", part, ErrVary)
		}
		if x, _ := r.Float64(); math.IsInf(x, 0) {
			return nil, fmt.Errorf("%q is too large: %w", part, ErrVary)
		}
		numbers[k] = r
	}
	from, to, step := numbers[0], numbers[1], numbers[2]
	if step.Sign() == 0 || new(big.Rat).Sub(to, from).Sign()*step.Sign() < 0 {
		return nil, fmt.Errorf("no number of steps leads from %s to %s: %w", parts[0], parts[1], ErrVary)
	}
	span := new(big.Rat).Quo(new(big.Rat).Sub(to, from), step)
	n := new(big.Int).Quo(span.Num(), span.Denom())
	if !n.IsInt64() || n.Int64() >= maxValues {
		return nil, fmt.Errorf("%s values, allowed are %d: %w", n, maxValues, ErrVary)
	}
	var values []string
	for k := range n.Int64() + 1 {
		r := new(big.Rat).Add(from, new(big.Rat).Mul(step, new(big.Rat).SetInt64(k)))
		text := decimal(r)
		if unit != "" {
			text += " " + unit
		}
		values = append(values, text)
	}
	return values, nil
}

// cutUnit splits "10deg" and "1e3 M" into number and unit.
func cutUnit(text string) (number, unit string) {
	end := 0
	for end < len(text) {
		c := text[end]
		exponent := (c == 'e' || c == 'E') && end > 0 && end+1 < len(text) && strings.IndexByte("0123456789+-", text[end+1]) >= 0
		if strings.IndexByte("0123456789.+-", c) < 0 && !exponent {
			break
		}
		end++
	}
	return text[:end], strings.TrimSpace(text[end:])
}

// decimal prints a fraction whose denominator divides a power of ten, all of
// its digits.
func decimal(r *big.Rat) string {
	if r.IsInt() {
		return r.Num().String()
	}
	digits, exact := r.FloatPrec()
	if !exact || digits > 17 {
		x, _ := r.Float64()
		return fmt.Sprint(x)
	}
	return r.FloatString(digits)
}
