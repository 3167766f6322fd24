package measure

import (
	"fmt"

	"annulet/raytrace/rim"
)

// ErrCannot marks what has no answer for this scene or image; the message
// says why.
var ErrCannot = rim.ErrCannot

// cannot returns an error that wraps ErrCannot.
func cannot(format string, args ...any) error {
	return fmt.Errorf("%w because %s", ErrCannot, fmt.Sprintf(format, args...))
}
