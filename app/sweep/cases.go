package sweep

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// Setting is one key and its value in a case.
type Setting struct {
	Key   string `json:"key"`
	Value string `json:"value"`
}

// Case is one scene of a sweep.
type Case struct {
	Name string    `json:"name"` // sorts by number, names what varies; a file name without extension
	Set  []Setting `json:"set"`
}

// Outer returns the cases of all combinations of the axes' values, the last
// axis fastest.
func Outer(axes []Axis) ([]Case, error) {
	total := 1
	for k, a := range axes {
		for _, b := range axes[:k] {
			if a.Key == b.Key {
				return nil, fmt.Errorf("%s varies twice: %w", a.Key, ErrVary)
			}
		}
		if len(a.Values) == 0 || total > maxValues/len(a.Values) {
			return nil, fmt.Errorf("more than %d cases, or none: %w", maxValues, ErrVary)
		}
		total *= len(a.Values)
	}
	sets := make([][]Setting, total)
	for n := range sets {
		rest := n
		set := make([]Setting, len(axes))
		for k := len(axes) - 1; k >= 0; k-- {
			values := axes[k].Values
			set[k] = Setting{axes[k].Key, values[rest%len(values)]}
			rest /= len(values)
		}
		sets[n] = set
	}
	return Named(sets), nil
}

// Named gives every list of settings the name of its case.
func Named(sets [][]Setting) []Case {
	width := max(4, len(fmt.Sprint(len(sets)-1)))
	cases := make([]Case, len(sets))
	for n, set := range sets {
		cases[n] = Case{nameOf(n, width, set), set}
	}
	return cases
}

// maxName keeps names below what file systems take, with room for
// extensions. Most take 255 bytes.
const maxName = 120

// nameOf is the number and what varies: 0012_inclination=40deg_index=3.
func nameOf(n, width int, set []Setting) string {
	name := fmt.Sprintf("%0*d", width, n)
	for _, s := range set {
		short := s.Key[strings.LastIndexByte(s.Key, '.')+1:]
		for _, other := range set {
			if other.Key != s.Key && strings.HasSuffix("."+other.Key, "."+short) {
				short = s.Key
			}
		}
		name += "_" + plain(short) + "=" + plain(s.Value)
	}
	if len(name) <= maxName {
		return name
	}
	cut := maxName
	for !utf8.RuneStart(name[cut]) {
		cut--
	}
	return name[:cut]
}

// plain leaves out blanks and quotes and puts a dash for every other
// character that a shell or a file system may not like.
func plain(text string) string {
	return strings.Map(func(c rune) rune {
		switch {
		case 'a' <= c && c <= 'z', 'A' <= c && c <= 'Z', '0' <= c && c <= '9', strings.ContainsRune(".+-", c):
			return c
		case c == ' ' || c == '"' || c == '[' || c == ']':
			return -1
		}
		return '-'
	}, text)
}
