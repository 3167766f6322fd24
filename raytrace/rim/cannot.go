package rim

import (
	"errors"
	"fmt"
)

// ErrCannot marks what has no answer for this scene or image; the message
// says why.
var ErrCannot = errors.New("cannot be measured")

// cannot returns an error that wraps ErrCannot.
func cannot(format string, args ...any) error {
	return fmt.Errorf("%w because %s", ErrCannot, fmt.Sprintf(format, args...))
}
