package output

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
)

// Column is one of a table.
type Column struct {
	Name string
	// Unit as astropy reads it, "deg", "s", "uas"; "M" for lengths in
	// GM/c² and times in GM/c³, which astropy has no word for; "" for none.
	Unit string
	Kind Kind
	Text string // what it is, one line; may be empty
}

// Kind is the type of a column's cells.
type Kind int

// The kinds of cells: float64 (NaN for none, ±Inf written "infinity"), int
// and string.
const (
	Float Kind = iota
	Int
	Text
)

// Table is rows of cells: float64, int or string by the column's kind, nil
// for what does not exist.
type Table struct {
	Columns []Column
	Rows    [][]any
}

// WriteCSV writes the table with a head of comment lines: units, provenance
// and the scene.
func (t Table) WriteCSV(w io.Writer, p Provenance) error {
	var head strings.Builder
	for _, line := range p.Lines() {
		fmt.Fprintf(&head, "# %s\n", line)
	}
	fmt.Fprintf(&head, "# numerics: %s\n", p.JSON())
	for _, c := range t.Columns {
		if c.Unit != "" {
			fmt.Fprintf(&head, "# unit of %s: %s\n", c.Name, c.Unit)
		}
	}
	for line := range strings.Lines(p.Scene) {
		head.WriteString(scenePrefix + strings.TrimSuffix(line, "\n") + "\n")
	}
	if _, err := io.WriteString(w, head.String()); err != nil {
		return err
	}
	return t.WriteRows(w)
}

// WriteECSV writes Enhanced CSV 1.0, whose header astropy reads types, units
// and texts from: Taylor, astropy Proposal for Enhancement 6 (2014).
func (t Table) WriteECSV(w io.Writer, p Provenance) error {
	var head strings.Builder
	head.WriteString("# %ECSV 1.0\n# ---\n# delimiter: ','\n# datatype:\n")
	for _, c := range t.Columns {
		fmt.Fprintf(&head, "# - {name: %s, ", yaml(c.Name))
		text := c.Text
		switch {
		case c.Unit == "M":
			text = strings.TrimSpace(text + " [GM/c2 or GM/c3]")
		case c.Unit != "":
			fmt.Fprintf(&head, "unit: %s, ", yaml(c.Unit))
		}
		fmt.Fprintf(&head, "datatype: %s", [...]string{"float64", "int64", "string"}[c.Kind])
		if text != "" {
			fmt.Fprintf(&head, ", description: %s", yaml(text))
		}
		head.WriteString("}\n")
	}
	scene, err := json.Marshal(p.Scene)
	if err != nil {
		return err
	}
	fmt.Fprintf(&head, "# meta: !!omap\n# - numerics: %s\n%s%s\n# schema: astropy-2.0\n", yaml(p.JSON()), ecsvScene, scene)
	if _, err := io.WriteString(w, head.String()); err != nil {
		return err
	}
	return t.WriteRows(w)
}

// ecsvScene begins the line with the scene in the head of an ECSV file; a JSON
// string is a YAML string too.
const ecsvScene = "# - scene: "

// yaml quotes a text.
func yaml(text string) string { return "'" + strings.ReplaceAll(text, "'", "''") + "'" }

// WriteRows writes a header of the columns' names and the rows, no comments.
func (t Table) WriteRows(w io.Writer) error {
	out := csv.NewWriter(w)
	row := make([]string, len(t.Columns))
	for k, c := range t.Columns {
		row[k] = c.Name
	}
	if err := out.Write(row); err != nil {
		return err
	}
	for n, cells := range t.Rows {
		if len(cells) != len(t.Columns) {
			return fmt.Errorf("row %d has %d cells for %d columns", n, len(cells), len(t.Columns))
		}
		for k, cell := range cells {
			var err error
			if row[k], err = t.Columns[k].Kind.print(cell); err != nil {
				return fmt.Errorf("row %d, column %s: %w", n, t.Columns[k].Name, err)
			}
		}
		if err := out.Write(row); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}

func (k Kind) print(cell any) (string, error) {
	switch v := cell.(type) {
	case nil:
		return "", nil
	case float64:
		switch {
		case k != Float:
		case math.IsNaN(v):
			return "", nil
		case math.IsInf(v, 1):
			return "infinity", nil
		case math.IsInf(v, -1):
			return "-infinity", nil
		default:
			return strconv.FormatFloat(v, 'g', -1, 64), nil
		}
	case int:
		if k == Int {
			return strconv.Itoa(v), nil
		}
	case string:
		if k == Text {
			return v, nil
		}
	}
	return "", fmt.Errorf("a cell of type %T", cell)
}
