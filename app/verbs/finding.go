package verbs

import (
	"bytes"
	"encoding/json"
	"io"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/app/sweep"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// finding is what a measuring verb has found.
type finding struct {
	table output.Table
	// fields are those of the JSON document before the units; without any
	// the rows of the table are its "rows".
	fields []field
}

// field is one of a JSON document, in its order.
type field struct {
	name  string
	value any
}

// measuring is what the flags of every measuring verb say.
type measuring struct {
	set, out []string
	json     bool
	workers  int

	// of a case of a sweep, whose product the table is; nil for a verb
	job     *sweep.Job
	product string
}

const tableFormats = ".csv, .ecsv, .json"

// addMeasuring adds the flags that measuring verbs share.
func addMeasuring(cmd *cobra.Command, m *measuring) {
	f := cmd.Flags()
	addSet(f, &m.set)
	f.StringArrayVarP(&m.out, "output", "o", nil, "`FILE` to write: "+tableFormats+"; repeatable")
	f.BoolVar(&m.json, "json", false, "print one JSON document on stdout")
	f.IntVar(&m.workers, "workers", 0, "threads; 0 means one a processor")
}

// measured is a scene made ready to be measured.
type measured struct {
	document *scenes.Document
	scene    scenes.Scene
	view     *raytrace.View
	options  measure.Options
}

// open loads the scene and refuses what cannot be done, before any work.
func (m measuring) open(s streams, scenePath string) (*measured, error) {
	if err := checkWorkers(m.workers); err != nil {
		return nil, err
	}
	err := checkFiles(m.out, scenePath, func(path string) error {
		if !slices.Contains(strings.Split(tableFormats, ", "), strings.ToLower(filepath.Ext(path))) {
			return refuse("-o %s: extension %q is not that of a table; allowed: %s", path, filepath.Ext(path), tableFormats)
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	var d *scenes.Document
	if m.job != nil {
		d = m.job.Document
	} else if d, err = s.loadScene(scenePath, m.set); err != nil {
		return nil, err
	}
	scene := d.Scene()
	for _, n := range scene.Notes() {
		s.note("%s", n)
	}
	view, err := raytrace.NewViewIn(scene, d.Dir())
	if err != nil {
		return nil, usage{err}
	}
	return &measured{d, scene, view, measure.Options{Workers: m.workers, Report: reporter(s)}}, nil
}

// reporter prints how far a measurement is, a line every few seconds.
func reporter(s streams) func(done, all int) {
	next := time.Now().Add(lineEvery)
	return func(done, all int) {
		if now := time.Now(); done < all && now.After(next) {
			next = now.Add(lineEvery)
			s.note("measuring: %d %%", 100*done/all)
		}
	}
}

// deliver writes the files, then prints.
func (m measuring) deliver(cmd *cobra.Command, s streams, of *measured, f finding) error {
	p := output.NewProvenance(of.document, Version, nil)
	if m.job != nil {
		return m.job.Write(cmd.Context(), m.product, ".ecsv", func(w io.Writer) error { return f.table.WriteECSV(w, p) })
	}
	document := func(w io.Writer) error { return writeJSON(w, f.document(p)) }
	for _, path := range m.out {
		var err error
		if strings.EqualFold(filepath.Ext(path), ".json") {
			err = writeFile(cmd.Context(), path, document)
		} else {
			err = writeTable(cmd.Context(), path, f.table, p)
		}
		if err != nil {
			return err
		}
	}
	if m.json {
		return document(s.out)
	}
	if err := f.table.WriteRows(s.out); err != nil {
		return err
	}
	s.note("%s", output.NotIncludedLine(p.NotIncluded))
	return nil
}

// document is the JSON of a finding, its keys in order.
func (f finding) document(p output.Provenance) ordered {
	fields := f.fields
	if fields == nil {
		fields = []field{{"rows", rowsOf(f.table)}}
	}
	units := ordered{}
	for _, c := range f.table.Columns {
		unit := c.Unit
		if unit == "" && c.Kind != output.Text {
			unit = "1"
		}
		if unit != "" {
			units = append(units, field{c.Name, unit})
		}
	}
	all := ordered{{output.SceneKey, p.Scene}} // first, where scene recover looks
	if !slices.ContainsFunc(fields, func(f field) bool { return f.name == "units" }) {
		all = append(all, field{"units", units})
	}
	all = append(all, fields...)
	return append(all, field{"numerics", p}, field{"not_included", p.NotIncluded})
}

// rowsOf turns a table into JSON objects.
func rowsOf(t output.Table) []ordered {
	rows := make([]ordered, len(t.Rows))
	for n, cells := range t.Rows {
		for k, c := range t.Columns {
			cell := cells[k]
			if x, ok := cell.(float64); ok {
				cell = number(x)
			}
			rows[n] = append(rows[n], field{c.Name, cell})
		}
	}
	return rows
}

// ordered is a JSON object whose keys keep their order.
type ordered []field

// MarshalJSON implements json.Marshaler.
func (o ordered) MarshalJSON() ([]byte, error) {
	var text bytes.Buffer
	text.WriteByte('{')
	for k, f := range o {
		if k > 0 {
			text.WriteByte(',')
		}
		name, err := json.Marshal(f.name)
		if err != nil {
			return nil, err
		}
		value := new(bytes.Buffer)
		encoder := json.NewEncoder(value)
		encoder.SetEscapeHTML(false)
		if err := encoder.Encode(f.value); err != nil {
			return nil, err
		}
		text.Write(name)
		text.WriteByte(':')
		text.Write(bytes.TrimSpace(value.Bytes()))
	}
	text.WriteByte('}')
	return text.Bytes(), nil
}

// scaleOf says what M is, where the scene tells; null where not.
func scaleOf(s scenes.Scene) ordered {
	orNull := func(x float64, ok bool) any {
		if !ok {
			return nil
		}
		return number(x)
	}
	uas, angular := s.ThetaG()
	metres, long := s.MetresPerM()
	seconds, timed := s.SecondsPerM()
	return ordered{
		{"theta_g_uas", orNull(uas, angular)}, {"M_in_km", orNull(metres/1000, long)}, {"M_in_s", orNull(seconds, timed)},
	}
}
