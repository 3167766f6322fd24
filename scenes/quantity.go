package scenes

import (
	"math"
	"strconv"
	"strings"
)

// quantity is a number, perhaps with an error, and its unit as written; an
// empty unit name is a bare number.
type quantity struct {
	value, sigma float64
	hasSigma     bool
	unit         unit
	span         span
}

// scanQuantity reads "number unit" or "number +- number unit" ("±" too), with
// or without blanks. A problem is returned in a few words, "" when it is well.
func scanQuantity(text string) (q quantity, problem string) {
	rest := strings.TrimSpace(text)
	if notFinite(rest) {
		return q, "not a finite number"
	}
	number, rest := splitNumber(rest)
	if number == "" {
		return q, "not a number with a unit"
	}
	q.value, _ = strconv.ParseFloat(number, 64) // splitNumber has checked it; beyond the range it gives ±Inf
	rest = strings.TrimSpace(rest)
	for _, sign := range []string{"+-", "±"} {
		after, found := strings.CutPrefix(rest, sign)
		if !found {
			continue
		}
		after = strings.TrimSpace(after)
		if notFinite(after) {
			return q, "not a finite number"
		}
		number, rest = splitNumber(after)
		if number == "" || number[0] == '-' || number[0] == '+' {
			return q, "no error after " + sign
		}
		q.sigma, _ = strconv.ParseFloat(number, 64)
		q.hasSigma = true
		break
	}
	if math.IsInf(q.value, 0) || math.IsInf(q.sigma, 0) {
		return q, "not a finite number"
	}
	name := strings.TrimSpace(rest)
	if name == "" {
		return q, "text without a unit (a bare number goes without quotes)"
	}
	u, known := findUnit(name)
	if !known {
		return q, "unknown unit " + strconv.Quote(quoteFound(name))
	}
	q.unit = u
	return q, ""
}

// notFinite reports whether the text begins with nan, inf or infinity.
func notFinite(text string) bool {
	word, _, _ := strings.Cut(strings.ToLower(strings.TrimLeft(text, "+-")), " ")
	return word == "nan" || word == "inf" || word == "infinity"
}

// splitNumber cuts a decimal number off the front; it takes an exponent only
// where digits follow, so that "1eV" is one electronvolt.
func splitNumber(text string) (number, rest string) {
	i := 0
	if i < len(text) && (text[i] == '+' || text[i] == '-') {
		i++
	}
	digits := 0
	for ; i < len(text) && isDigit(text[i]); i++ {
		digits++
	}
	if i < len(text) && text[i] == '.' {
		for i++; i < len(text) && isDigit(text[i]); i++ {
			digits++
		}
	}
	if digits == 0 {
		return "", text
	}
	if i < len(text) && (text[i] == 'e' || text[i] == 'E') {
		j := i + 1
		if j < len(text) && (text[j] == '+' || text[j] == '-') {
			j++
		}
		if j < len(text) && isDigit(text[j]) {
			for i = j; i < len(text) && isDigit(text[i]); i++ {
			}
		}
	}
	return text[:i], text[i:]
}

// isDigit reports whether c is a decimal digit.
func isDigit(c byte) bool { return '0' <= c && c <= '9' }
