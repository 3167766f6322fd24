package state

import "testing"

func TestDiffering(t *testing.T) {
	const a = "schema = 1\n[observer]\ninclination = \"40 deg\"\n[[emitter]]\nkind = \"disk\"\nindex = 2\n"
	const b = "schema = 1\n[observer]\ninclination = \"60 deg\" # tilted\n[[emitter]]\nkind = \"disk\"\nouter = \"12 M\"\n"
	for _, c := range []struct{ text, other, want string }{
		{a, b, "inclination 40 deg, outer 20 M, index 2"},
		{b, a, "inclination 60 deg, outer 12 M, index 3"},
		{a, a, ""},
	} {
		if got := Differing([]byte(c.text), []byte(c.other)); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}
