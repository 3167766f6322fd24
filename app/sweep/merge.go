package sweep

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"time"

	"annulet/app/files"
	"annulet/app/output"
	"annulet/scenes"
)

// Merge writes what a sweep has come to so far: the manifest with the states
// of all cases, and the merged table. When every case is finished and nobody
// is at work it also takes away the claims and what killed processes left. It
// returns what it found, as Survey does.
func Merge(ctx context.Context, dir string, m *Manifest) ([]Record, Count, error) {
	c := openClaims(dir)
	defer c.close()
	for { // one process at a time: each takes away what it thinks is litter
		mine, err := c.take(mergeClaim)
		if err != nil {
			return nil, nil, err
		}
		if mine != nil {
			break
		}
		select {
		case <-ctx.Done():
			return nil, nil, ctx.Err()
		case <-time.After(pollEvery):
		}
	}
	records, count := Survey(dir, m, false)
	merged := *m
	merged.Cases = make([]Listing, len(m.Cases))
	for k, r := range records {
		if r.State == Running { // by the time anyone reads it, it may not be
			r.State = Waiting
		}
		merged.Cases[k] = Listing{m.Cases[k].Case, r.State, r.Reason, r.Files}
	}
	err := merged.writeTable(ctx, dir, records)
	if err == nil {
		err = merged.write(ctx, dir)
	}
	if err == nil && count[Waiting]+count[Running] == 0 {
		err = sweepUp(dir)
	}
	return records, count, err
}

// mergeClaim is no case's name: these begin with a digit.
const mergeClaim = "merge"

// writeTable writes a row for every case: its name, what varies, its state,
// and its columns; the union of all cases' columns in the order in which
// they first come.
func (m *Manifest) writeTable(ctx context.Context, dir string, records []Record) error {
	var keys []string
	seen := map[string]bool{}
	for _, c := range m.Cases {
		for _, s := range c.Set {
			if !seen[s.Key] {
				seen[s.Key] = true
				keys = append(keys, s.Key)
			}
		}
	}
	var columns []Column
	at := map[string]int{}
	for _, r := range records {
		for _, c := range r.Columns {
			if _, known := at[c.Name]; !known {
				at[c.Name] = len(columns)
				columns = append(columns, c)
			}
		}
	}
	t := output.Table{Columns: []output.Column{{Name: "case", Kind: output.Text}}}
	for _, key := range keys {
		t.Columns = append(t.Columns, output.Column{Name: key, Kind: output.Text, Text: "as in the scene file"})
	}
	t.Columns = append(t.Columns, output.Column{Name: "state", Kind: output.Text})
	for _, c := range columns {
		t.Columns = append(t.Columns, output.Column{Name: c.Name, Unit: c.Unit})
	}
	for k, r := range records {
		row := make([]any, len(t.Columns))
		row[0], row[1+len(keys)] = m.Cases[k].Name, string(m.Cases[k].State)
		for _, s := range m.Cases[k].Set {
			row[1+slices.Index(keys, s.Key)] = s.Value
		}
		for _, c := range r.Columns {
			if c.Value != nil {
				row[2+len(keys)+at[c.Name]] = *c.Value
			}
		}
		t.Rows = append(t.Rows, row)
	}
	d, err := scenes.Parse(m.Name, []byte(m.Scene))
	if err != nil {
		return err
	}
	p := output.NewProvenance(d, m.Version, nil)
	for name, write := range map[string]func(io.Writer, output.Provenance) error{"table.csv": t.WriteCSV, "table.ecsv": t.WriteECSV} {
		if err := files.Write(ctx, filepath.Join(dir, name), 0o666, func(w io.Writer) error { return write(w, p) }); err != nil {
			return err
		}
	}
	return files.WriteAt(ctx, filepath.Join(dir, "table.fits"), 0o666, func(w io.WriterAt) error { return t.WriteFITS(w, p) })
}

// sweepUp removes the temporary files that killed processes left and, last,
// the claims.
func sweepUp(dir string) error {
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() || !files.IsTemporary(e.Name()) {
			return err
		}
		if err := os.Remove(path); err != nil && !errors.Is(err, fs.ErrNotExist) {
			return fmt.Errorf("what a killed process left: %w", err)
		}
		return nil
	})
	return errors.Join(err, os.RemoveAll(filepath.Join(dir, claimsFolder)))
}
