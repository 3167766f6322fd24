package desk

import (
	"errors"
	"os"
	"path/filepath"
	"testing"

	"annulet/app/output"
	"annulet/scenes"
)

// A file that Annulet wrote opens as the scene inside it: never as a file of
// its own, which saving would overwrite; another file is refused.
func TestLoadFromTable(t *testing.T) {
	built, err := scenes.Load(scenes.BuiltIn()[0].Name)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	path := filepath.Join(dir, "rows.csv")
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	table := output.Table{Columns: []output.Column{{Name: "r", Unit: "M"}}, Rows: [][]any{{6.0}}}
	if err := errors.Join(table.WriteCSV(f, output.NewProvenance(built, "0.0", nil)), f.Close()); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{path, inFile + path} { // dropped; gone back to
		doc, called, err := Load(name)
		if err != nil || string(doc.Text()) != string(built.Text()) || doc.Dir() != dir || called != inFile+path {
			t.Errorf("%s: called %q, %v", name, called, err)
		}
	}
	alien := filepath.Join(dir, "alien.png")
	if err := os.WriteFile(alien, []byte("GIF89a"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Load(alien); !errors.Is(err, output.ErrKind) {
		t.Errorf("%v", err)
	}
}
