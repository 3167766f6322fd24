package sweep

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"

	"annulet/app/files"
)

// State is how far a case is.
type State string

// The states of a case. Running is never written: claims tell it.
const (
	Waiting State = "waiting"
	Running State = "running"
	Done    State = "done"
	Failed  State = "failed"
)

// Record is what became of a case.
type Record struct {
	Case    string        `json:"case"`
	Of      string        `json:"of"` // digest of what the case's bytes depend on: scene, products, version
	State   State         `json:"state"`
	Reason  string        `json:"reason,omitempty"` // why it failed
	Files   []FileSummary `json:"files,omitempty"`
	Columns []Column      `json:"columns,omitempty"` // its row of the merged table
}

// FileSummary tells whether a file is whole.
type FileSummary struct {
	Path   string `json:"path"` // within the sweep's folder, with slashes
	Bytes  int64  `json:"bytes"`
	SHA256 string `json:"sha256"`
}

// Column is one entry of a case's row in the merged table.
type Column struct {
	Name  string   `json:"name"`
	Unit  string   `json:"unit,omitempty"`
	Value *float64 `json:"value"` // null where there is none
}

const (
	recordsFolder = "records"
	maxRecord     = 1 << 20
)

func recordPath(dir, name string) string { return filepath.Join(dir, recordsFolder, name+".json") }

// digest tells apart cases that would not write the same bytes.
func digest(parts ...string) string {
	sum := sha256.New()
	for _, p := range parts {
		_ = json.NewEncoder(sum).Encode(p) // a hash never fails; JSON keeps the parts apart
	}
	return hex.EncodeToString(sum.Sum(nil))
}

// readRecord returns the record of a case, and whether it is one of this very
// case with all its files whole. A record that cannot be read counts as none.
func readRecord(dir, name, of string) (r Record, valid bool) {
	r, valid = glanceRecord(dir, name, of)
	if !valid || r.State != Done {
		return r, valid
	}
	for _, f := range r.Files {
		if !f.whole(dir) {
			return Record{}, false
		}
	}
	return r, true
}

// glanceRecord is readRecord without a look at the files.
func glanceRecord(dir, name, of string) (r Record, valid bool) {
	text, err := readFile(recordPath(dir, name), maxRecord)
	if err != nil || json.Unmarshal(text, &r) != nil || r.Case != name || r.Of != of || r.State != Done && r.State != Failed {
		return Record{}, false
	}
	return r, true
}

func (f FileSummary) whole(dir string) bool {
	local := filepath.FromSlash(f.Path)
	if !filepath.IsLocal(local) || strings.HasPrefix(f.Path, ".") {
		return false
	}
	now, err := summarise(dir, f.Path)
	return err == nil && now == f
}

// summarise reads a file of the sweep whole.
func summarise(dir, path string) (FileSummary, error) {
	f, err := os.Open(filepath.Join(dir, filepath.FromSlash(path)))
	if err != nil {
		return FileSummary{}, err
	}
	defer f.Close()
	sum := sha256.New()
	n, err := io.Copy(sum, f)
	return FileSummary{path, n, hex.EncodeToString(sum.Sum(nil))}, err
}

func (r Record) write(ctx context.Context, dir string) error {
	text, err := json.MarshalIndent(r, "", " ")
	if err != nil {
		return err
	}
	return files.Write(ctx, recordPath(dir, r.Case), 0o666, func(w io.Writer) error {
		_, err := io.Copy(w, bytes.NewReader(append(text, '\n')))
		return err
	})
}
