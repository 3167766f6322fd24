package verbs

import (
	"context"
	"io"
	"path/filepath"
	"strings"

	"annulet/app/output"
)

// checkTable refuses a name that no table can be written to.
func checkTable(path string) error {
	switch strings.ToLower(filepath.Ext(path)) {
	case ".csv", ".ecsv":
		return checkWritable(path)
	}
	return refuse("-o %s: extension %q; a table goes to .csv or .ecsv", path, filepath.Ext(path))
}

// writeTable writes a table with its scene, as CSV or ECSV.
func writeTable(ctx context.Context, path string, t output.Table, p output.Provenance) error {
	return writeFile(ctx, path, func(w io.Writer) error {
		if strings.EqualFold(filepath.Ext(path), ".ecsv") {
			return t.WriteECSV(w, p)
		}
		return t.WriteCSV(w, p)
	})
}
