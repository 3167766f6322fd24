package scenes

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// reading is the value of one key, its type, unit and words checked; numbers
// still in the unit as written and not yet held against the range.
type reading struct {
	key     Key
	address address
	given   bool   // in the text, not a default
	at      span   // the value; in the text only when given
	part    string // "cap 2, size" for a key of an inline table; else ""
	word    string
	words   []string
	numbers []quantity
	tables  []map[string]reading // TableList: by key; without those left out
}

// limited returns the reading with another range, and what is said outside it.
func (r reading) limited(limit Range, why string) reading {
	r.key.Range, r.key.Why = limit, why
	return r
}

// fault is what is wrong with a value, before anybody knows its file.
type fault struct {
	at      span
	problem string
	allowed string
	nearest string // for an unknown key
	later   bool
}

// check holds every table and key of the source against the table of keys.
// Of several errors it returns the first in the text.
func check(src *source) (map[address]reading, *Error) {
	var first *Error
	var offset int // of first
	fail := func(at span, err *Error) {
		if first == nil || at.from < offset {
			first, offset = err, at.from
		}
	}
	bad := map[string]bool{} // sections refused as a whole
	for _, t := range src.tables[1:] {
		if err := checkTable(t); err != nil {
			bad[t.section] = true
			fail(t.nameSpan, err)
		}
	}
	readings := map[address]reading{}
	for _, e := range src.entries {
		if bad[e.section] {
			continue
		}
		if _, isSection := findSection(e.key); e.section == "" && e.key != "" && isSection {
			if e.value.kind != kindList || len(e.value.items) > 0 {
				fail(e.value.span, &Error{Key: e.key, Problem: "wrong type, " + e.value.kind.String(),
					Found: src.excerptOf(e.value.span), Allowed: "a table"})
			}
			continue
		}
		k, known := findKey(e.section, e.key)
		if !known {
			err := &Error{Key: e.address.String(), Problem: "unknown key", Found: src.excerptOf(e.keySpan),
				Nearest: nearestKey(e.section, e.key)}
			if other := nearestSection(e.key); e.value.kind == kindTable && e.section == "" {
				err.Nearest = other
			}
			fail(e.keySpan, err)
			continue
		}
		if k.Later {
			fail(e.keySpan, &Error{Key: e.address.String(), Problem: notInVersion, Later: true})
			continue
		}
		r, wrong := read(k, e.value)
		if wrong != nil {
			fail(wrong.at, &Error{Key: e.address.String(), Problem: wrong.problem, Found: src.excerptOf(wrong.at),
				Allowed: wrong.allowed, Nearest: wrong.nearest, Later: wrong.later})
			continue
		}
		r.address, r.given = e.address, true
		readings[e.address] = r
	}
	if first != nil {
		first.File = src.name
		first.locate(src.text, offset)
		return nil, first
	}
	return readings, nil
}

// excerptOf quotes the text of a span.
func (s *source) excerptOf(at span) string { return quoteFound(string(s.text[at.from:at.to])) }

// checkTable says what is wrong with a table, nil when nothing is.
func checkTable(t table) *Error {
	s, known := findSection(t.section)
	path := address{section: t.section, index: t.index}.String()
	switch k, isKey := findKey("", t.section); {
	case isKey:
		return &Error{Key: t.section, Problem: "wrong type, a table", Allowed: k.Allowed()}
	case !known || s.name == "":
		return &Error{Key: t.section, Problem: "unknown table", Nearest: nearestSection(t.section)}
	case s.later:
		return &Error{Key: t.section, Problem: notInVersion, Later: true}
	case s.many && !t.many:
		return &Error{Key: t.section, Problem: "this table may come several times", Allowed: "[[" + s.name + "]] with double brackets"}
	case !s.many && t.many:
		return &Error{Key: t.section, Problem: "this table may come only once", Allowed: "[" + s.name + "] with single brackets"}
	case t.index >= maxEmitters:
		return &Error{Key: path, Problem: "too many " + s.name + "s", Allowed: s.text}
	}
	return nil
}

// read checks one value against its key, all but the range.
func read(k Key, v value) (reading, *fault) {
	r := reading{key: k, at: v.span}
	wrongType := &fault{at: v.span, problem: "wrong type, " + v.kind.String(), allowed: k.Allowed()}
	switch k.Type {
	case Text:
		if v.kind != kindText {
			return r, wrongType
		}
		r.word = v.text
	case Choice:
		if k.OrNumber && (v.kind == kindInteger || v.kind == kindFloat) {
			return r, r.readNumber(v)
		}
		if v.kind != kindText {
			return r, wrongType
		}
		r.word = v.text
		return r, readChoice(k, v)
	case ChoiceList, TextList:
		if v.kind != kindList {
			return r, wrongType
		}
		for _, item := range v.items {
			if item.kind != kindText {
				return r, &fault{at: item.span, problem: "wrong type, " + item.kind.String(), allowed: k.Allowed()}
			}
			if f := readChoice(k, item); f != nil && k.Type == ChoiceList {
				return r, f
			}
			r.words = append(r.words, item.text)
		}
	case Quantity:
		if v.kind == kindText && slices.Contains(k.Words, v.text) {
			r.word = v.text
			return r, nil
		}
		return r, r.readNumber(v)
	case Number, Integer:
		return r, r.readNumber(v)
	case NumberList, IntegerList, QuantityList:
		items := v.items
		if k.Count == 0 && v.kind != kindList {
			items = []value{v}
		}
		switch n := len(items); {
		case n == 0 && v.kind != kindList:
			return r, wrongType
		case k.Count > 0 && n != k.Count, n == 0, n > maxItems:
			return r, &fault{at: v.span, problem: fmt.Sprintf("a list of %d items", n), allowed: k.Allowed()}
		}
		for _, item := range items {
			if f := r.readNumber(item); f != nil {
				return r, f
			}
		}
	case TableList:
		return r, r.readTables(v)
	}
	return r, nil
}

// readChoice checks one word of a choice.
func readChoice(k Key, v value) *fault {
	switch {
	case slices.Contains(k.Choices, v.text):
		return nil
	case slices.Contains(k.LaterChoices, v.text):
		return &fault{at: v.span, problem: notInVersion, allowed: k.Allowed(), later: true}
	}
	return &fault{at: v.span, problem: "unknown choice", allowed: k.Allowed()}
}

// readNumber appends one number, whole number or quantity.
func (r *reading) readNumber(v value) *fault {
	k := r.key
	wrong := func(problem string) *fault { return &fault{at: v.span, problem: problem, allowed: k.Allowed()} }
	isQuantity := k.Type == Quantity || k.Type == QuantityList
	isInteger := k.Type == Integer || k.Type == IntegerList
	switch {
	case v.kind == kindText && isQuantity:
		q, problem := scanQuantity(v.text)
		switch {
		case problem != "":
			return wrong(problem)
		case !slices.Contains(k.Units, q.unit.name):
			return wrong("the unit " + q.unit.name + " does not fit here")
		case q.hasSigma && !k.Error:
			return wrong("an error is not allowed here")
		}
		q.span = v.span
		r.numbers = append(r.numbers, q)
	case v.kind == kindInteger, v.kind == kindFloat && !isInteger:
		if math.IsNaN(v.number) || math.IsInf(v.number, 0) {
			return wrong("not a finite number")
		}
		r.numbers = append(r.numbers, quantity{value: v.number, span: v.span})
	default:
		return wrong("wrong type, " + v.kind.String())
	}
	return nil
}

// Allowed describes in words what the key accepts in this version.
func (k Key) Allowed() string {
	var options []string
	switch k.Type {
	case Text:
		options = append(options, "text")
	case Choice:
		options = append(options, k.Choices...)
		if k.OrNumber {
			options = append(options, "a number, "+k.Range.In(""))
		}
	case ChoiceList:
		options = append(options, "a list of "+strings.Join(k.Choices, ", "))
	case TextList:
		options = append(options, "a list of texts")
	case TableList:
		options = append(options, "a list of {"+strings.Join(k.fieldNames(), ", ")+"}")
	default:
		options = append(options, quoted(k.Words)...)
		options = append(options, k.allowedNumber())
	}
	return strings.Join(options, " or ")
}

// allowedNumber describes the numbers that the key accepts.
func (k Key) allowedNumber() string {
	what := map[Type]string{Number: "a number", Integer: "a whole number", Quantity: "a quantity"}[k.Type]
	switch {
	case k.Type == IntegerList:
		what = "a list of " + formatNumber(float64(k.Count)) + " whole numbers"
	case k.Type == NumberList:
		what = "a number or a list of up to " + formatNumber(maxItems)
	case k.Type == QuantityList && k.Count == 0:
		what = "a quantity or a list of up to " + formatNumber(maxItems)
	case k.Type == QuantityList:
		what = "a list of " + formatNumber(float64(k.Count)) + " quantities"
	}
	limit := k.Range.In(k.Unit)
	if k.Type == IntegerList {
		limit = "each " + limit
	}
	if limit != "" {
		what += ", " + limit
	}
	if len(k.Units) > 0 {
		what += " (units " + strings.Join(k.Units, " ") + "; a bare number is in " + k.Unit + ")"
	}
	return what
}

// quoted puts each word in quotes.
func quoted(words []string) []string {
	var out []string
	for _, w := range words {
		out = append(out, `"`+w+`"`)
	}
	return out
}
