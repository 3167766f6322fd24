package scenes

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Error is the one error type of this package: what is wrong with a scene,
// where, and what would be right. Match it with errors.As.
type Error struct {
	File    string // as given to Parse or Load
	Setting string // the path of the --set that caused it; then there is no position
	Line    int    // from 1; 0 when the text holds no such place
	Column  int    // in characters, from 1; 0 when Line is 0
	Key     string // "observer.radius", "emitter.2.outer", "object" for a table
	Problem string // what is wrong, in a few words
	Found   string // the offending value as written
	Allowed string // what would be right
	Nearest string // for an unknown key or table: the nearest known one
	Excerpt string // the line and, under it, a caret at Column
	Later   bool   // known to the scene file, but not carried out in this version
	Err     error  // the system's error when a file could not be read
}

// Error returns the whole message; with an excerpt it has three lines.
func (e *Error) Error() string {
	var b strings.Builder
	switch {
	case e.Setting != "":
		b.WriteString("--set " + quoteFound(e.Setting) + ": ")
	case e.Line > 0:
		fmt.Fprintf(&b, "%s:%d:%d: ", e.File, e.Line, e.Column)
	case e.File != "":
		b.WriteString(e.File + ": ")
	}
	if e.Key != "" && e.Key != e.Setting {
		b.WriteString(quoteFound(e.Key) + ": ")
	}
	b.WriteString(e.Problem)
	if e.Found != "" {
		b.WriteString("; found " + e.Found)
	}
	if e.Allowed != "" {
		b.WriteString("; allowed: " + e.Allowed)
	}
	if e.Nearest != "" {
		b.WriteString("; nearest known: " + e.Nearest)
	}
	if e.Excerpt != "" {
		b.WriteString("\n" + e.Excerpt)
	}
	return b.String()
}

// Unwrap returns the system's error, so that errors.Is(err, fs.ErrNotExist) works.
func (e *Error) Unwrap() error { return e.Err }

// notInVersion is the problem of everything that the scene file knows and
// this version does not carry out.
const notInVersion = "not in this version"

// locate fills in line, column and excerpt of the byte offset in text.
func (e *Error) locate(text []byte, offset int) {
	offset = min(offset, len(text))
	before := text[:offset]
	lineStart := strings.LastIndexByte(string(before), '\n') + 1
	e.Line = 1 + strings.Count(string(before), "\n")
	e.Column = 1 + utf8.RuneCount(text[lineStart:offset])
	line := string(text[lineStart:])
	if end := strings.IndexByte(line, '\n'); end >= 0 {
		line = line[:end]
	}
	e.Excerpt = excerpt(strings.TrimSuffix(line, "\r"), e.Column)
}

// excerptWidth is the number of characters shown of a long line. Taste.
const excerptWidth = 100

// excerpt returns the line, cut around the column when long, and a caret
// under the column. Control characters are shown as a middle dot, tabs as a
// blank, so that the caret stands right and a terminal is not commanded.
func excerpt(line string, column int) string {
	shown := []rune(line)
	if first := column - excerptWidth/2; len(shown) > excerptWidth && first > 0 {
		first = min(first, len(shown)-excerptWidth)
		shown = shown[first:]
		column -= first
	}
	shown = shown[:min(len(shown), excerptWidth)]
	for i, r := range shown {
		switch {
		case r == '\t':
			shown[i] = ' '
		case unicode.IsControl(r):
			shown[i] = '·'
		}
	}
	return "    " + string(shown) + "\n    " + strings.Repeat(" ", column-1) + "^"
}

// foundWidth is the number of characters quoted of a long value or key. Taste.
const foundWidth = 100

// quoteFound shows source text inside a message: short and without control
// characters.
func quoteFound(source string) string {
	shown := []rune(source)
	cut := len(shown) > foundWidth
	shown = shown[:min(len(shown), foundWidth)]
	for i, r := range shown {
		if unicode.IsControl(r) {
			shown[i] = ' '
		}
	}
	if cut {
		return string(shown) + "…"
	}
	return string(shown)
}
