package tone

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) { // <= is false for NaN, so NaN fails
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

func TestParseCurve(t *testing.T) {
	for _, word := range CurveWords() {
		c, err := ParseCurve(word)
		if err != nil || c.String() != word {
			t.Errorf("ParseCurve(%q) = %v, %v", word, c, err)
		}
	}
	_, err := ParseCurve("log")
	if !errors.Is(err, ErrWord) {
		t.Fatalf("ParseCurve(log): %v, want ErrWord", err)
	}
	for _, word := range CurveWords() {
		if !strings.Contains(err.Error(), word) {
			t.Errorf("%q does not name %s", err, word)
		}
	}
}

func TestSetLimits(t *testing.T) {
	for _, c := range []struct {
		text string
		want Tone
	}{
		{"0:2.5", Tone{Low: 0, High: 2.5}},
		{"-1e-3 : 5", Tone{Low: -1e-3, High: 5}},
		{"1%:99.8%", Tone{LowPercent: 1, HighPercent: 99.8}},
		{"0 %:50 %", Tone{HighPercent: 50}},
	} {
		got := Tone{Low: 3, High: 4}
		if err := got.SetLimits(c.text); err != nil || got != c.want {
			t.Errorf("SetLimits(%q) = %+v, %v, want %+v", c.text, got, err, c.want)
		}
	}
}

func TestSetLimitsRefuses(t *testing.T) {
	for _, c := range []struct {
		text string
		want error
	}{
		{"", ErrWord},
		{"5", ErrWord},
		{"a:b", ErrWord},
		{"1:99%", ErrWord},
		{"1:2:3", ErrWord},
		{"2:1", ErrLimits},
		{"1:1", ErrLimits},
		{"NaN:1", ErrLimits},
		{"0:Inf", ErrLimits},
		{"-1%:50%", ErrLimits},
		{"5%:101%", ErrLimits},
	} {
		before := Tone{Low: 3, High: 4}
		got := before
		if err := got.SetLimits(c.text); !errors.Is(err, c.want) {
			t.Errorf("SetLimits(%q): %v, want %v", c.text, err, c.want)
		}
		if got != before {
			t.Errorf("SetLimits(%q) failed and changed the tone", c.text)
		}
	}
}

func TestCheckRefuses(t *testing.T) {
	for _, tone := range []Tone{
		{Curve: 7},
		{Low: 2, High: 1},
		{Low: math.NaN(), High: 1},
		{High: math.Inf(1)},
		{LowPercent: 60, HighPercent: 40},
		{Curve: Logarithmic, Low: -2, High: -1},
		{Curve: Logarithmic, Centre: 1},
		{Centre: math.NaN()},
		{Decades: -1},
		{Decades: math.NaN()},
	} {
		if err := tone.Check(); !errors.Is(err, ErrLimits) && !errors.Is(err, ErrWord) {
			t.Errorf("Check of %+v: %v, want a refusal", tone, err)
		}
	}
	if err := (Tone{}).Check(); err != nil {
		t.Errorf("the zero Tone: %v", err)
	}
}

func ExampleTone_SetLimits() {
	var t Tone
	fmt.Println(t.SetLimits("1%:99.8%"), t.LowPercent, t.HighPercent)
	// Output: <nil> 1 99.8
}
