package tone

import (
	"fmt"
	"strconv"
	"strings"
)

// limitsForm is what SetLimits accepts, for its errors.
const limitsForm = `allowed are LOW:HIGH in the unit of the layer, as in "0:2.5", or percentiles P1%:P2%, as in "1%:99.8%"`

// SetLimits reads a user's limits, "LOW:HIGH" in the layer's unit or
// "P1%:P2%", and sets them in place of those the Tone had. On error, which
// wraps ErrWord or ErrLimits and says what is allowed, t is left as it was.
func (t *Tone) SetLimits(text string) error {
	lowWord, highWord, ok := strings.Cut(text, ":")
	if !ok {
		return fmt.Errorf("limits %q: %w: %s", text, ErrWord, limitsForm)
	}
	low, lowPercent, err := limit(lowWord)
	if err != nil {
		return fmt.Errorf("limits %q: %w", text, err)
	}
	high, highPercent, err := limit(highWord)
	if err != nil {
		return fmt.Errorf("limits %q: %w", text, err)
	}
	if lowPercent != highPercent {
		return fmt.Errorf("limits %q: %w: one number and one percentile; %s", text, ErrWord, limitsForm)
	}
	if !(low < high) {
		return fmt.Errorf("limits %q: %w: the low one must lie below the high one", text, ErrLimits)
	}
	set := *t
	set.Low, set.High, set.LowPercent, set.HighPercent = 0, 0, 0, 0
	if lowPercent {
		set.LowPercent, set.HighPercent = low, high
	} else {
		set.Low, set.High = low, high
	}
	if err := set.Check(); err != nil {
		return fmt.Errorf("limits %q: %w", text, err)
	}
	*t = set
	return nil
}

// limit reads one number, with or without a percent sign.
func limit(word string) (value float64, percent bool, err error) {
	number := strings.TrimSpace(word)
	if number, percent = strings.CutSuffix(number, "%"); percent {
		number = strings.TrimSpace(number)
	}
	value, err = strconv.ParseFloat(number, 64)
	if err != nil {
		return 0, false, fmt.Errorf("%q is no number: %w: %s", word, ErrWord, limitsForm)
	}
	if !modest(value) {
		return 0, false, fmt.Errorf("%q is out of all bounds: %w: %s", word, ErrLimits, limitsForm)
	}
	return value, percent, nil
}
