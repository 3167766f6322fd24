package scenes

import (
	"bytes"
	"slices"
	"strconv"
	"strings"
)

// Written returns the value that the text gives a key, text without its
// quotes and everything else as TOML; false when the key is left to its
// default.
func (d *Document) Written(path string) (value string, given bool) {
	target, err := parsePath(path)
	if err != nil {
		return "", false
	}
	src := d.source()
	for _, e := range src.entries {
		if e.address == target {
			if e.value.kind == kindText {
				return e.value.text, true
			}
			return string(src.text[e.value.span.from:e.value.span.to]), true
		}
	}
	return "", false
}

// SetText replaces the whole text. One that is not a right scene is refused
// with an error of type *Error and changes nothing.
func (d *Document) SetText(text []byte) error {
	fresh, err := Parse(d.name, text)
	if err != nil {
		return err
	}
	*d = *fresh
	return nil
}

// removeKey returns the text without a key's line, the comment on it
// included; unchanged when the text does not give the key.
func (s *source) removeKey(target address) []byte {
	at := slices.IndexFunc(s.entries, func(e entry) bool { return e.address == target })
	if at < 0 {
		return s.text
	}
	e := s.entries[at]
	table := s.tables[max(0, s.find(target.section, target.index))]
	if table.form != formInline {
		return splice(s.text, s.lineStart(e.keySpan.from), s.lineEnd(e.value.span.to), "")
	}
	from, to := e.keySpan.from, e.value.span.to
	rest := s.text[to:]
	blank := len(rest) - len(bytes.TrimLeft(rest, " \t"))
	if blank < len(rest) && rest[blank] == ',' {
		to += blank + 1
		to += len(s.text[to:]) - len(bytes.TrimLeft(s.text[to:], " \t"))
	} else { // the last one: the comma before it goes
		before := bytes.TrimRight(s.text[:from], " \t")
		if len(before) > 0 && before[len(before)-1] == ',' {
			from = len(before) - 1
		}
	}
	return splice(s.text, from, to, "")
}

// lineStart returns where the line of an offset begins, and lineEnd where the
// next one does.
func (s *source) lineStart(at int) int { return bytes.LastIndexByte(s.text[:at], '\n') + 1 }

func (s *source) lineEnd(at int) int {
	end := bytes.IndexByte(s.text[at:], '\n')
	if end < 0 {
		return len(s.text)
	}
	return at + end + 1
}

// AddEmitter adds an emitter of a kind behind the others.
func (d *Document) AddEmitter(kind string) error {
	n := strconv.Itoa(len(d.scene.Emitters) + 1)
	return d.Set("emitter."+n+".kind", kind)
}

// RemoveEmitter removes an emitter, counted from 0, with the comments above
// and in it.
func (d *Document) RemoveEmitter(index int) error {
	return d.moveEmitters(index, func(blocks [][]byte) [][]byte { return slices.Delete(blocks, index, index+1) })
}

// DuplicateEmitter puts a copy of an emitter behind it.
func (d *Document) DuplicateEmitter(index int) error {
	return d.moveEmitters(index, func(blocks [][]byte) [][]byte { return slices.Insert(blocks, index, blocks[index]) })
}

// SwapEmitters exchanges an emitter with the next one.
func (d *Document) SwapEmitters(index int) error {
	return d.moveEmitters(index+1, func(blocks [][]byte) [][]byte {
		blocks[index], blocks[index+1] = blocks[index+1], blocks[index]
		return blocks
	})
}

// moveEmitters takes the blocks of the emitters out of the text, arranges
// them and puts them back where the first one stood.
func (d *Document) moveEmitters(index int, arrange func([][]byte) [][]byte) error {
	src := d.source()
	if n := src.count("emitter"); index < 0 || index >= n {
		return &Error{File: d.name, Key: "emitter", Problem: "no such emitter; the scene has " + strconv.Itoa(n)}
	}
	var blocks [][]byte
	var rest []byte
	first := -1 // where in rest the emitters go
	for k, t := range src.tables {
		if t.section == "emitter" && t.form != formHeaded {
			return &Error{File: d.name, Key: "emitter", Problem: "emitters in braces are arranged in the text only",
				Allowed: "[[emitter]] headers"}
		}
		if t.form != formHeaded {
			continue
		}
		from, to := src.blockStart(k), len(src.text)
		for next := k + 1; next < len(src.tables); next++ {
			if src.tables[next].form == formHeaded {
				to = src.blockStart(next)
				break
			}
		}
		block := src.text[from:to]
		if t.section != "emitter" {
			rest = append(rest, block...)
			continue
		}
		if first < 0 {
			first = len(rest)
		}
		blocks = append(blocks, ended(block, src.newline()))
	}
	text := splice(rest, first, first, string(bytes.Join(arrange(blocks), nil)))
	fresh, err := parseScene(d.name, text)
	if err != nil {
		return err
	}
	d.text, d.scene, d.taken = text, fresh, nil
	return nil
}

// ended returns a block that ends with its line and an empty one, so that
// another may follow.
func ended(block []byte, newline string) []byte {
	return append(bytes.TrimRight(block, " \t\r\n"), newline+newline...)
}

// blockStart returns where a headed table begins: its header, with the
// comment lines right above it. The top level begins the text.
func (s *source) blockStart(table int) int {
	if table == 0 {
		return 0
	}
	from := s.lineStart(s.tables[table].nameSpan.from)
	for from > 0 {
		above := s.lineStart(from - 1)
		if !strings.HasPrefix(strings.TrimSpace(string(s.text[above:from])), "#") {
			break
		}
		from = above
	}
	return from
}

// Number returns the number that a key has, its default when the text does
// not give it, in the unit named: M for lengths and times, else the base unit
// of the key's units (deg, K, Hz, …) or "". It is false for words and lists,
// and where there is no value.
func (d *Document) Number(path string) (x float64, unitName string, ok bool) {
	target, err := parsePath(path)
	if err != nil {
		return 0, "", false
	}
	key, known := findKey(target.section, target.key)
	if !known {
		return 0, "", false
	}
	text, given := d.Written(path)
	if !given {
		text = unquoted(key.Default)
	}
	v, isValue := parseValue(tomlFor(key, text))
	r, wrong := read(key, v)
	if !isValue || wrong != nil || key.Count > 0 || len(r.numbers) != 1 {
		return 0, "", false
	}
	q := r.numbers[0]
	if key.Unit == "" {
		return q.value, "", true
	}
	u := orDefault(q.unit, key.Unit)
	if q.unit.name == "" && target.section == "field" && d.scene.Field.angular() {
		u, _ = findUnit("deg")
	}
	if slices.Contains(key.Units, "M") && u.base != "deg" {
		x, missing := d.scene.lengthInM(q.value, u)
		return x, "M", missing == ""
	}
	return q.value * u.factor, u.base, true
}

// unquoted returns text without the quotes of a TOML basic string.
func unquoted(toml string) string {
	if v, ok := parseValue(toml); ok && v.kind == kindText {
		return v.text
	}
	return toml
}

// DefaultText returns the key's default as Set takes it, without quotes; ""
// if it may stay away without one.
func (k Key) DefaultText() string { return unquoted(k.Default) }
