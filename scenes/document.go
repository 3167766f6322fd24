package scenes

import (
	"bytes"
	"path/filepath"
	"slices"
	"unicode/utf8"
)

// Document is a scene file: its text and the scene it says. Its text is
// always a right one. A Document is not safe for concurrent use.
type Document struct {
	name  string
	mark  []byte // byte order mark, or empty
	text  []byte // without the mark
	scene Scene
	taken *source // text taken apart, when somebody has asked
}

// byteOrderMark may stand before UTF-8; some editors write it.
var byteOrderMark = []byte("\uFEFF")

// maxBytes bounds a scene file. Taste: a long one has some ten kilobytes.
const maxBytes = 1 << 20

// Parse checks a scene file's text; name stands for the file in errors, which
// are of type *Error. The text is copied.
func Parse(name string, text []byte) (*Document, error) {
	if len(text) > maxBytes {
		return nil, tooLarge(name, int64(len(text)))
	}
	rest, found := bytes.CutPrefix(text, byteOrderMark)
	d := &Document{name: name, text: bytes.Clone(rest)}
	if found {
		d.mark = byteOrderMark
	}
	scene, err := parseScene(name, d.text)
	if err != nil {
		return nil, err
	}
	d.scene = scene
	return d, nil
}

// Name returns the name given to Parse or Load.
func (d *Document) Name() string { return d.name }

// Dir returns the directory that relative paths in the scene count from: that
// of its file, and "." for a built-in scene.
func (d *Document) Dir() string { return filepath.Dir(d.name) }

// Scene returns the scene; changing it does not change the document.
func (d *Document) Scene() Scene { return d.scene.clone() }

// Text returns a copy of the text, to the byte as read and edited.
func (d *Document) Text() []byte { return slices.Concat(d.mark, d.text) }

// source returns the text taken apart.
func (d *Document) source() *source {
	if d.taken == nil {
		src, err := parseSource(d.name, d.text)
		if err != nil {
			panic("scenes: a document's text is not right: " + err.Error())
		}
		d.taken = src
	}
	return d.taken
}

// parseScene checks the text and builds its scene.
func parseScene(name string, text []byte) (Scene, *Error) {
	if err := checkBytes(name, text); err != nil {
		return Scene{}, err
	}
	src, err := parseSource(name, text)
	if err != nil {
		return Scene{}, err
	}
	if err := checkSchema(src); err != nil {
		return Scene{}, err
	}
	readings, err := check(src)
	if err != nil {
		return Scene{}, err
	}
	return build(src, readings)
}

// checkBytes refuses what is not text: NUL and invalid UTF-8.
func checkBytes(name string, text []byte) *Error {
	at, problem := bytes.IndexByte(text, 0), "not text, it holds a NUL byte"
	if bad := firstInvalid(text); bad >= 0 && (at < 0 || bad < at) {
		at, problem = bad, "not UTF-8"
	}
	if at < 0 {
		return nil
	}
	e := &Error{File: name, Problem: problem, Allowed: "a scene file is TOML in UTF-8"}
	e.locate(text, at)
	return e
}

// firstInvalid returns the offset of the first byte that is not UTF-8, or -1.
func firstInvalid(text []byte) int {
	for i := 0; i < len(text); {
		r, size := utf8.DecodeRune(text[i:])
		if r == utf8.RuneError && size == 1 {
			return i
		}
		i += size
	}
	return -1
}

// schema is the version of the scene file that this package reads.
const schema = 1

// checkSchema comes before all other checks: of another version's file
// nothing else can be said.
func checkSchema(src *source) *Error {
	at := slices.IndexFunc(src.entries, func(e entry) bool { return e.address == address{key: "schema"} })
	if at < 0 {
		return &Error{File: src.name, Key: "schema", Problem: "missing", Allowed: "schema = 1 at the top of the file"}
	}
	v := src.entries[at].value
	if v.kind == kindInteger && v.number == schema {
		return nil
	}
	e := &Error{File: src.name, Key: "schema", Problem: "not a version that this program reads",
		Found: src.excerptOf(v.span), Allowed: "schema = 1"}
	e.locate(src.text, v.span.from)
	return e
}
