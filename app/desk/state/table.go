package state

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"
)

// Table is a list of quantities under headings, as the window shows it and as
// it is copied.
type Table struct {
	Sections []Section
	Remark   string // what the numbers assume, in sentences
}

// Section is one heading's quantities.
type Section struct {
	Title string
	Rows  []Row
}

// Row is one quantity.
type Row struct {
	Name  string
	Value string // with the digits that its bound supports
	Unit  string
	Exact float64 // for CSV; NaN where Value alone says it
}

// add appends a row to the last section.
func (t *Table) add(name, value, unit string, exact float64) {
	last := &t.Sections[len(t.Sections)-1]
	last.Rows = append(last.Rows, Row{name, strings.Replace(value, "-", "−", 1), unit, exact})
}

// say appends a row of words.
func (t *Table) say(name, words string) {
	last := &t.Sections[len(t.Sections)-1]
	last.Rows = append(last.Rows, Row{name, words, "", math.NaN()})
}

func (t *Table) section(title string) { t.Sections = append(t.Sections, Section{Title: title}) }

// In returns the table with lengths in M written with another word for it,
// as rg.
func (t Table) In(length string) Table {
	if length == "M" {
		return t
	}
	sections := make([]Section, len(t.Sections))
	for k, s := range t.Sections {
		rows := slices.Clone(s.Rows)
		for j := range rows {
			if rows[j].Unit == "M" {
				rows[j].Unit = length
			}
		}
		sections[k] = Section{s.Title, rows}
	}
	t.Sections = sections
	return t
}

// Text writes the table in columns of one width, for a monospaced face.
func (t Table) Text() string {
	names, values := 0, 0
	for _, s := range t.Sections {
		for _, r := range s.Rows {
			names = max(names, utf8.RuneCountInString(r.Name))
			values = max(values, utf8.RuneCountInString(r.Value))
		}
	}
	var b strings.Builder
	for k, s := range t.Sections {
		if k > 0 {
			b.WriteByte('\n')
		}
		if s.Title != "" {
			b.WriteString(s.Title + "\n")
		}
		for _, r := range s.Rows {
			line := fmt.Sprintf("%s%s %s%s %s", r.Name, pad(names, r.Name), pad(values, r.Value), r.Value, r.Unit)
			b.WriteString(strings.TrimRight(line, " ") + "\n")
		}
	}
	return b.String()
}

func pad(width int, text string) string {
	return strings.Repeat(" ", max(0, width-utf8.RuneCountInString(text)))
}

// CSV writes the table with its numbers in full.
func (t Table) CSV() string {
	var b strings.Builder
	b.WriteString("section,quantity,value,unit\n")
	for _, s := range t.Sections {
		for _, r := range s.Rows {
			value := r.Value
			if !math.IsNaN(r.Exact) {
				value = strconv.FormatFloat(r.Exact, 'g', -1, 64)
				if math.IsInf(r.Exact, 1) {
					value = "infinity"
				}
			}
			fmt.Fprintf(&b, "%s,%s,%s,%s\n", quoted(s.Title), quoted(r.Name), quoted(value), quoted(r.Unit))
		}
	}
	return b.String()
}

// quoted writes a field of CSV (RFC 4180).
func quoted(text string) string {
	if !strings.ContainsAny(text, ",\"\n") {
		return text
	}
	return `"` + strings.ReplaceAll(text, `"`, `""`) + `"`
}

// Append adds another table, the first of its sections under a title.
func (t *Table) Append(title string, other Table) {
	for k, s := range other.Sections {
		if k == 0 {
			s.Title = title
		} else if title != "Line of sight" {
			s.Title = title + ": " + strings.ToLower(s.Title[:1]) + s.Title[1:]
		}
		t.Sections = append(t.Sections, s)
	}
}
