package scenes

import (
	"bytes"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"
)

// Assignment sets one key, as `--set observer.inclination=75deg` does.
type Assignment struct {
	Path  string // "observer.inclination", "emitter.outer" for the first emitter, "emitter.2.outer" for the second
	Value string // TOML of the key's type, or else the bare text: 75, 75deg, "75 deg", horizon
	Unset bool   // instead take the key out of the text, with the comment on its line
}

// Set changes one key and keeps every comment and all other bytes; a key or
// table that is not yet there is added. One emitter more than there are may
// be named, which adds it. When the result would not be a right scene the
// document stays as it was and the error is of type *Error.
func (d *Document) Set(path, value string) error {
	return d.SetAll(Assignment{Path: path, Value: value})
}

// Unset takes a key out of the text, so that its default holds.
func (d *Document) Unset(path string) error { return d.SetAll(Assignment{Path: path, Unset: true}) }

// SetAll makes several changes as one: only their result need be a right
// scene.
func (d *Document) SetAll(assignments ...Assignment) error {
	text := d.text
	setBy := map[string]string{} // key's path -> path as given
	var paths []string
	for _, a := range assignments {
		target, edited, err := edit(text, a)
		if err != nil {
			err.Setting, err.Key = a.Path, a.Path
			return err
		}
		text = edited
		setBy[target.String()] = a.Path
		paths = append(paths, a.Path)
	}
	scene, err := parseScene(d.name, text)
	if err == nil && len(text) > maxBytes {
		err = tooLarge(d.name, int64(len(text)))
	}
	if err != nil {
		given, own := setBy[err.Key]
		if !own {
			given = strings.Join(paths, ", ")
		} else {
			err.Key = given
		}
		err.Setting, err.File, err.Line, err.Column, err.Excerpt = given, "", 0, 0, ""
		return err
	}
	d.text, d.scene, d.taken = text, scene, nil
	return nil
}

// edit returns the text with one key set, and which key that is.
func edit(text []byte, a Assignment) (address, []byte, *Error) {
	target, err := parsePath(a.Path)
	if err != nil {
		return target, nil, err
	}
	key, known := findKey(target.section, target.key)
	if !known {
		return target, nil, unknownPath(target)
	}
	if !utf8.ValidString(a.Value) {
		return target, nil, &Error{Problem: "not UTF-8", Found: strconv.Quote(a.Value)}
	}
	src, err := parseSource("", text)
	if err != nil {
		return target, nil, err
	}
	if n := src.count(target.section); target.index > n {
		return target, nil, &Error{Problem: "no such emitter; the scene has " + strconv.Itoa(n)}
	}
	if a.Unset {
		return target, src.removeKey(target), nil
	}
	return target, src.assign(target, tomlFor(key, a.Value)), nil
}

// parsePath takes a path apart.
func parsePath(path string) (address, *Error) {
	parts := strings.Split(path, ".")
	if len(parts) == 1 {
		return address{key: parts[0]}, nil
	}
	target := address{section: parts[0], key: parts[len(parts)-1]}
	s, known := findSection(target.section)
	if !known || s.name == "" {
		return target, &Error{Problem: "unknown table " + strconv.Quote(target.section), Nearest: nearestSection(target.section)}
	}
	if s.later {
		return target, &Error{Problem: notInVersion, Later: true}
	}
	switch {
	case len(parts) == 3 && s.many:
		n, err := strconv.Atoi(parts[1])
		if err != nil || n < 1 || n > maxEmitters {
			return target, &Error{Problem: "not the number of an emitter", Found: strconv.Quote(parts[1]),
				Allowed: "1 to " + strconv.Itoa(maxEmitters)}
		}
		target.index = n - 1
	case len(parts) != 2:
		return target, &Error{Problem: "not the path of a key", Allowed: "table.key, or emitter.2.key for the second emitter"}
	}
	return target, nil
}

// unknownPath names the key that is nearest to an unknown one, with its table.
func unknownPath(target address) *Error {
	nearest := nearestKey(target.section, target.key)
	if _, same := findKey(target.section, nearest); same {
		nearest = address{section: target.section, index: target.index, key: nearest}.String()
	}
	return &Error{Problem: "unknown key", Found: target.key, Nearest: nearest}
}

// tomlFor returns the value as TOML: itself when it is TOML that suits the
// key's type, else as a string.
func tomlFor(k Key, text string) string {
	trimmed := strings.TrimSpace(text)
	v, ok := parseValue(trimmed)
	if ok {
		_, wrong := read(k, v)
		if wrong == nil || wrong.later || v.kind != kindText && k.Type != Text && k.Type != Choice {
			return trimmed
		}
	}
	if ok && v.kind == kindText {
		return trimmed
	}
	if k.Type != Text {
		text = trimmed
	}
	return quote(text)
}

// quote writes text as a TOML basic string on one line.
func quote(text string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, r := range text {
		switch {
		case r == '"' || r == '\\':
			b.WriteByte('\\')
			b.WriteRune(r)
		case r == '\n':
			b.WriteString(`\n`)
		case r == '\t':
			b.WriteString(`\t`)
		case r < ' ' || r == 0x7f:
			const hex = "0123456789abcdef"
			b.WriteString(`\u00` + string(hex[r>>4]) + string(hex[r&15]))
		default:
			b.WriteRune(r)
		}
	}
	b.WriteByte('"')
	return b.String()
}

// assign returns the text with the key's value replaced, or the key added.
func (s *source) assign(target address, toml string) []byte {
	if at := slices.IndexFunc(s.entries, func(e entry) bool { return e.address == target }); at >= 0 {
		old := s.entries[at].value.span
		return splice(s.text, old.from, old.to, toml)
	}
	line := target.key + " = " + toml
	at := s.find(target.section, target.index)
	if at < 0 {
		header := "[" + target.section + "]"
		if known, _ := findSection(target.section); known.many {
			header = "[" + header + "]"
		}
		return s.appendTable(header, line)
	}
	switch t := s.tables[at]; t.form {
	case formInline:
		if rest := bytes.TrimLeft(s.text[t.inside:], " \t\r\n"); len(rest) > 0 && rest[0] != '}' {
			line += ", "
		}
		return splice(s.text, t.inside, t.inside, line)
	case formDotted:
		return s.insertLine(t.last, target.section+"."+line)
	default:
		return s.insertLine(t.last, line)
	}
}

// splice returns text with the bytes from..to replaced.
func splice(text []byte, from, to int, by string) []byte {
	return slices.Concat(text[:from], []byte(by), text[to:])
}

// insertLine adds a line under the one where the span ends, indented like the
// one where it begins.
func (s *source) insertLine(after span, line string) []byte {
	lineStart := bytes.LastIndexByte(s.text[:after.from], '\n') + 1
	indented := s.text[lineStart:]
	indent := string(indented[:len(indented)-len(bytes.TrimLeft(indented, " \t"))])
	newline := s.newline()
	lineEnd := bytes.IndexByte(s.text[after.to:], '\n')
	if lineEnd < 0 {
		return splice(s.text, len(s.text), len(s.text), newline+indent+line+newline)
	}
	at := after.to + lineEnd + 1
	return splice(s.text, at, at, indent+line+newline)
}

// appendTable adds a table with one key at the end.
func (s *source) appendTable(header, line string) []byte {
	newline := s.newline()
	var gap string
	if len(s.text) > 0 {
		gap = newline
		if s.text[len(s.text)-1] != '\n' {
			gap += newline
		}
	}
	return splice(s.text, len(s.text), len(s.text), gap+header+newline+line+newline)
}

// newline returns the line ending that the text begins with.
func (s *source) newline() string {
	if at := bytes.IndexByte(s.text, '\n'); at > 0 && s.text[at-1] == '\r' {
		return "\r\n"
	}
	return "\n"
}
