package sweep

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

func TestParseAxis(t *testing.T) {
	for _, c := range []struct{ text, key, values string }{
		{"observer.inclination=10:40:10deg", "observer.inclination", "10 deg|20 deg|30 deg|40 deg"},
		{"observer.inclination=10deg:35 deg:10deg", "observer.inclination", "10 deg|20 deg|30 deg"},
		{"emitter.index=0:0.5:0.1", "emitter.index", "0|0.1|0.2|0.3|0.4|0.5"},
		{"emitter.index=3:1:-1", "emitter.index", "3|2|1"},
		{"observer.radius=1e1:3e1:1e1 M", "observer.radius", "10 M|20 M|30 M"},
		{"emitter.inner=isco, horizon,7 M", "emitter.inner", "isco|horizon|7 M"},
		{"field.pixels=[64, 64],[128,128]", "field.pixels", "[64, 64]|[128,128]"},
		{`title="a,b",c`, "title", `"a,b"|c`},
		{"trace.max_order=2", "trace.max_order", "2"},
	} {
		axis, err := ParseAxis(c.text)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		if got := strings.Join(axis.Values, "|"); axis.Key != c.key || got != c.values {
			t.Errorf("%s: %s = %s, want %s = %s", c.text, axis.Key, got, c.key, c.values)
		}
	}
	for _, text := range []string{
		"", "x", "x=", "=1", "x=1:2:0", "x=1:2:-1", "x=2:1:1", "x=1deg:2 M:1", "x=1,,2", "x=1,1",
		"x=a:b:c", "x=0:1e99999999:1", "x=0:1e300:1e-300", "x=0:1:1e-9", "x=1/3:2:1", "x=nan:1:1", "x=0x1:2:1",
	} {
		if axis, err := ParseAxis(text); !errors.Is(err, ErrVary) {
			t.Errorf("%q gives %v, %v", text, axis, err)
		}
	}
}

func TestOuter(t *testing.T) {
	cases, err := Outer([]Axis{{"observer.inclination", []string{"10 deg", "20 deg"}}, {"emitter.2.index", []string{"2", "3"}}, {"emitter.1.index", []string{"-1.5"}}})
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, c := range cases {
		names = append(names, c.Name)
	}
	want := []string{
		"0000_inclination=10deg_emitter.2.index=2_emitter.1.index=-1.5",
		"0001_inclination=10deg_emitter.2.index=3_emitter.1.index=-1.5",
		"0002_inclination=20deg_emitter.2.index=2_emitter.1.index=-1.5",
		"0003_inclination=20deg_emitter.2.index=3_emitter.1.index=-1.5",
	}
	if !slices.Equal(names, want) {
		t.Errorf("names %v", names)
	}
	if _, err := Outer([]Axis{{"a", []string{"1"}}, {"a", []string{"2"}}}); !errors.Is(err, ErrVary) {
		t.Errorf("a key twice: %v", err)
	}
	long := Named([][]Setting{{{"emitter.table", strings.Repeat("../ä/", 60)}}})[0].Name
	if len(long) > maxName || strings.ContainsAny(long, "/ä") {
		t.Errorf("a long name: %s", long)
	}
}
