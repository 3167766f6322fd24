package output

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"annulet/app/files"
)

// WriteFITS writes the table as a binary table, and the scene as an extension
// like those of images. Numbers are 64-bit; what does not exist is NaN, a
// whole number a NULL of the smallest. Texts are as wide as the widest. In
// names of columns a _ stands for what is neither letter nor digit, as section
// 7.3.1 of the standard recommends.
func (t Table) WriteFITS(w io.WriterAt, p Provenance) error {
	unit := files.HDU{Name: "TABLE", Bytes: []byte{}}
	for k, c := range t.Columns {
		field := files.FITSField{Name: plainName(c.Name), Form: "D", Size: 8, Text: c.Text}
		switch c.Kind {
		case Int:
			field.Form = "K"
			unit.Cards = append(unit.Cards, files.Card{Key: "TNULL" + strconv.Itoa(k+1), Value: math.MinInt64})
		case Text:
			field.Size = 1
			for _, row := range t.Rows {
				if text, ok := row[k].(string); ok {
					field.Size = max(field.Size, len(files.ASCII(text)))
				}
			}
			field.Form = strconv.Itoa(field.Size) + "A"
		}
		switch c.Unit { // words that are not units of the standard are told in the comment
		case "M", "M2", "relative":
			field.Text = c.Unit
			if c.Text != "" {
				field.Text += ": " + c.Text
			}
		default:
			field.Unit = c.Unit
		}
		unit.Fields = append(unit.Fields, field)
	}
	for n, row := range t.Rows {
		if len(row) != len(t.Columns) {
			return fmt.Errorf("row %d has %d cells for %d columns", n, len(row), len(t.Columns))
		}
		for k, cell := range row {
			if _, err := t.Columns[k].Kind.print(cell); err != nil { // the types
				return fmt.Errorf("row %d, column %s: %w", n, t.Columns[k].Name, err)
			}
			switch t.Columns[k].Kind {
			case Text:
				text, _ := cell.(string) // nil is empty
				text = files.ASCII(text)
				unit.Bytes = append(unit.Bytes, text...)
				unit.Bytes = append(unit.Bytes, make([]byte, unit.Fields[k].Size-len(text))...) // NUL ends a text
			case Int:
				v, there := cell.(int)
				if !there {
					v = math.MinInt64
				}
				unit.Bytes = binary.BigEndian.AppendUint64(unit.Bytes, uint64(v))
			default:
				v, there := cell.(float64)
				if !there {
					v = math.NaN()
				}
				unit.Bytes = binary.BigEndian.AppendUint64(unit.Bytes, math.Float64bits(v))
			}
		}
	}
	f, err := files.NewFITS(w, files.HDU{Cards: numericsCards(p)}, unit, files.HDU{Name: sceneUnit, Column: "TEXT", Bytes: []byte(p.Scene)})
	if err != nil {
		return err
	}
	return f.Close()
}

func plainName(name string) string {
	return strings.Map(func(c rune) rune {
		if 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || '0' <= c && c <= '9' {
			return c
		}
		return '_'
	}, name)
}
