package tone

import (
	"fmt"
	"strings"
)

// Curve says how the position in the colour map follows the value.
type Curve int

const (
	Linear      Curve = iota // the zero value
	SquareRoot               // of the part of the range that lies below the value
	Logarithmic              // equal ratios of values, equal steps
)

// curveWords are the words users write, in the order of the constants.
var curveWords = [...]string{Linear: "linear", SquareRoot: "square-root", Logarithmic: "logarithmic"}

// CurveWords returns the words ParseCurve accepts.
func CurveWords() []string { return curveWords[:len(curveWords):len(curveWords)] }

// String returns the user's word for the curve.
func (c Curve) String() string {
	if !c.known() {
		return fmt.Sprintf("Curve(%d)", int(c))
	}
	return curveWords[c]
}

func (c Curve) known() bool { return c >= 0 && int(c) < len(curveWords) }

// ParseCurve reads a user's word. The error, which wraps ErrWord, lists what
// is allowed.
func ParseCurve(word string) (Curve, error) {
	for c, w := range curveWords {
		if word == w {
			return Curve(c), nil
		}
	}
	return 0, fmt.Errorf("curve %q: %w: allowed are %s", word, ErrWord, strings.Join(curveWords[:], ", "))
}
