package scenes

// This file alone knows the TOML library; its unstable parser, which gives
// the positions, carries no promise of a stable interface.

import (
	"errors"
	"math"
	"slices"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// kind is the TOML type of a value.
type kind uint8

const (
	kindText kind = iota
	kindInteger
	kindFloat
	kindBool
	kindDate
	kindList
	kindTable
)

// String names the kind as messages do.
func (k kind) String() string {
	return [...]string{"text", "a whole number", "a number", "true or false", "a date or time", "a list", "a table"}[k]
}

// span is a range of bytes of the text, the end not included.
type span struct{ from, to int }

// value is one TOML value and where it stands.
type value struct {
	kind   kind
	span   span
	text   string  // kindText, decoded
	number float64 // kindInteger, kindFloat
	items  []value // kindList
	fields []field // kindTable
}

// field is one key of an inline table.
type field struct {
	key     string
	keySpan span
	value   value
}

// address names one key of the scene: the section ("" for the top level),
// the index from 0 for sections that may come several times, the key.
type address struct {
	section string
	index   int
	key     string
}

// String returns the path as --set takes it.
func (a address) String() string {
	var parts []string
	if a.section != "" {
		parts = append(parts, a.section)
	}
	if a.index > 0 {
		parts = append(parts, strconv.Itoa(a.index+1))
	}
	if a.key != "" {
		parts = append(parts, a.key)
	}
	return strings.Join(parts, ".")
}

// entry is one key with its value.
type entry struct {
	address
	keySpan span
	value   value
}

// tableForm says how a table is written.
type tableForm uint8

const (
	formHeaded tableForm = iota // [object], and the top level
	formInline                  // object = { … }
	formDotted                  // object.kind = …
)

// table is one table of the text.
type table struct {
	section  string
	index    int
	many     bool // [[emitter]], or one of a list
	form     tableForm
	nameSpan span
	inside   int  // formInline: the offset behind the brace
	last     span // the last expression that belongs to it
}

// source is a text taken apart; it is right TOML, nothing more is checked.
type source struct {
	name    string
	text    []byte
	tables  []table // tables[0] is the top level
	entries []entry
	counts  map[string]int // tables of each section
}

// part is one part of a dotted key.
type part struct {
	name string
	span span
}

// parseSource takes the text apart or says where it is not TOML.
func parseSource(name string, text []byte) (*source, *Error) {
	var all map[string]any
	if err := toml.Unmarshal(text, &all); err != nil {
		return nil, syntaxError(name, text, err)
	}
	src := &source{name: name, text: text, tables: []table{{}}, counts: map[string]int{}}
	var parser unstable.Parser
	parser.Reset(text)
	current := 0 // the table that keys belong to; -1 inside a deeper one
	for parser.NextExpression() {
		node := parser.Expression()
		path := keyParts(node)
		switch node.Kind {
		case unstable.Table, unstable.ArrayTable:
			current = src.open(path, node.Kind == unstable.ArrayTable)
		case unstable.KeyValue:
			if current < 0 {
				continue
			}
			raw := node.Raw
			whole := span{int(raw.Offset), int(raw.Offset + raw.Length)}
			at := span{valueStart(text, path[len(path)-1].span.to), whole.to}
			src.place(current, path, nodeValue(node.Value(), at), whole)
		}
	}
	if err := parser.Error(); err != nil {
		return nil, &Error{File: name, Problem: "not TOML: " + err.Error()}
	}
	return src, nil
}

// parseValue returns the value that the text is, alone and entirely.
func parseValue(text string) (value, bool) {
	const before = "[t]\nx = " // within a table, where a list of tables is a value like others
	src, err := parseSource("", []byte(before+text))
	if err != nil || len(src.tables) != 2 || len(src.entries) != 1 {
		return value{}, false
	}
	v := src.entries[0].value
	return v, v.span == span{len(before), len(before) + len(text)}
}

// syntaxError gives the library's error our form and keeps its position.
func syntaxError(name string, text []byte, err error) *Error {
	e := &Error{File: name, Problem: "not TOML: " + quoteFound(strings.TrimPrefix(err.Error(), "toml: "))}
	var decode *toml.DecodeError
	if !errors.As(err, &decode) {
		return e
	}
	line, column := decode.Position()
	e.Key = strings.Join(decode.Key(), ".")
	offset := 0
	for ; line > 1; line-- {
		offset += slices.Index(text[offset:], '\n') + 1
	}
	e.locate(text, offset+column-1)
	return e
}

// keyParts returns the parts of the expression's key.
func keyParts(node *unstable.Node) []part {
	var parts []part
	for it := node.Key(); it.Next(); {
		raw := it.Node().Raw
		parts = append(parts, part{string(it.Node().Data), span{int(raw.Offset), int(raw.Offset + raw.Length)}})
	}
	return parts
}

// valueStart returns where the value begins, given where its key ends.
func valueStart(text []byte, from int) int {
	for text[from] == ' ' || text[from] == '\t' || text[from] == '=' {
		from++
	}
	return from
}

// nodeValue converts a value. The parser gives lists no range and tables only
// their brace: at is the range to use for them.
func nodeValue(node *unstable.Node, at span) value {
	if raw := node.Raw; raw.Length > 0 && node.Kind != unstable.InlineTable {
		at = span{int(raw.Offset), int(raw.Offset + raw.Length)}
	}
	v := value{span: at}
	switch node.Kind {
	case unstable.String:
		v.kind, v.text = kindText, string(node.Data)
	case unstable.Integer:
		n, _ := strconv.ParseInt(string(node.Data), 0, 64) // the library has checked it
		v.kind, v.number = kindInteger, float64(n)
	case unstable.Float:
		v.kind, v.number = kindFloat, tomlFloat(string(node.Data))
	case unstable.Bool:
		v.kind = kindBool
	case unstable.Array:
		v.kind = kindList
		for it := node.Children(); it.Next(); {
			v.items = append(v.items, nodeValue(it.Node(), at))
		}
	case unstable.InlineTable:
		v.kind = kindTable
		v.span.from = int(node.Raw.Offset)
		for it := node.Children(); it.Next(); {
			if it.Node().Kind == unstable.KeyValue {
				v.fields = append(v.fields, nested(keyParts(it.Node()), nodeValue(it.Node().Value(), at)))
			}
		}
	default:
		v.kind = kindDate
	}
	return v
}

// tomlFloat reads a float that the library has checked.
func tomlFloat(text string) float64 {
	if strings.HasSuffix(text, "nan") {
		return math.NaN()
	}
	x, _ := strconv.ParseFloat(strings.ReplaceAll(text, "_", ""), 64)
	return x
}

// nested writes a dotted key as tables within one another.
func nested(path []part, v value) field {
	if len(path) > 1 {
		v = value{kind: kindTable, span: v.span, fields: []field{nested(path[1:], v)}}
	}
	return field{path[0].name, path[0].span, v}
}

// count returns how many tables of the section there are.
func (s *source) count(section string) int { return s.counts[section] }

// add notes a table, the next of its section, and returns its position.
func (s *source) add(t table) int {
	t.index = s.counts[t.section]
	s.counts[t.section]++
	s.tables = append(s.tables, t)
	return len(s.tables) - 1
}

// find returns the position in tables of a section's table, or -1.
func (s *source) find(section string, index int) int {
	return slices.IndexFunc(s.tables, func(t table) bool { return t.section == section && t.index == index })
}

// open notes a header and returns the table that the next keys belong to. A
// header deeper than a section is kept as a key whose value is a table.
func (s *source) open(path []part, many bool) int {
	whole := span{path[0].span.from, path[len(path)-1].span.to}
	if len(path) > 1 {
		index := max(0, s.count(path[0].name)-1)
		s.entries = append(s.entries, entry{
			address{path[0].name, index, path[1].name}, path[1].span, value{kind: kindTable, span: whole}})
		return -1
	}
	return s.add(table{section: path[0].name, many: many, nameSpan: path[0].span, last: whole})
}

// place notes a key and its value in the table.
func (s *source) place(current int, path []part, v value, whole span) {
	if owner := &s.tables[current]; current > 0 || len(path) == 1 {
		owner.last = whole
	}
	switch first := path[0]; {
	case current > 0:
		f := nested(path, v)
		s.entries = append(s.entries, entry{
			address{s.tables[current].section, s.tables[current].index, f.key}, f.keySpan, f.value})
	case len(path) > 1:
		at := s.find(first.name, 0)
		if at < 0 {
			at = s.add(table{section: first.name, form: formDotted, nameSpan: first.span})
		}
		s.tables[at].last = whole
		f := nested(path[1:], v)
		s.entries = append(s.entries, entry{address{first.name, 0, f.key}, f.keySpan, f.value})
	case v.kind == kindTable:
		s.inline(first, v, false, whole)
	case v.kind == kindList && len(v.items) > 0 && v.items[0].kind == kindTable:
		for _, item := range v.items {
			s.inline(first, item, true, whole)
		}
	default:
		s.entries = append(s.entries, entry{address{"", 0, first.name}, first.span, v})
	}
}

// inline notes a table in braces and its keys. An item of a list that is no
// table stays a value of the top level, where the checks refuse it.
func (s *source) inline(name part, v value, many bool, whole span) {
	if v.kind != kindTable {
		s.entries = append(s.entries, entry{address{"", 0, name.name}, v.span, v})
		return
	}
	at := s.add(table{section: name.name, many: many, form: formInline, nameSpan: name.span, inside: v.span.from + 1, last: whole})
	for _, f := range v.fields {
		s.entries = append(s.entries, entry{address{name.name, s.tables[at].index, f.key}, f.keySpan, f.value})
	}
}
