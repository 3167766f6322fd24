package scenes

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func TestLoad(t *testing.T) {
	path := filepath.Join(t.TempDir(), "my.toml")
	const text = "\uFEFFschema = 1\r\ntitle = \"x\"\r\n"
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	d, err := Load(path)
	if err != nil {
		t.Fatal(err)
	}
	if d.Dir() != filepath.Dir(path) {
		t.Errorf("directory %q", d.Dir())
	}
	if d.Name() != path || string(d.Text()) != text || d.Scene().Title != "x" {
		t.Errorf("name %q, text %q, title %q", d.Name(), d.Text(), d.Scene().Title)
	}
}

func TestLoadRefuses(t *testing.T) {
	dir := t.TempDir()
	large := filepath.Join(dir, "large.toml")
	if err := os.WriteFile(large, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Truncate(large, 1<<40); err != nil { // holes: nothing could read it whole
		t.Fatal(err)
	}
	missing := filepath.Join(dir, "missing.toml")
	for _, c := range []struct{ path, says string }{
		{dir, "is a directory"},
		{missing, "no such file"},
		{large, "1099511627776 bytes"},
		{"@first-lihgt", "no such built-in scene; allowed: @first-light"},
		{"@../first-light", "no such built-in scene"},
	} {
		_, err := Load(c.path)
		var e *Error
		if !errors.As(err, &e) || e.File != c.path || !strings.Contains(err.Error(), c.says) {
			t.Errorf("Load(%q): %v", c.path, err)
		}
	}
	if _, err := Load(missing); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("%v is not fs.ErrNotExist", err)
	}
	if _, err := Parse("large", make([]byte, maxBytes+1)); err == nil || !strings.Contains(err.Error(), "too large") {
		t.Errorf("Parse of a large text: %v", err)
	}
}

func TestBuiltIn(t *testing.T) {
	all := BuiltIn()
	if len(all) == 0 || all[0].Name != "@first-light" {
		t.Fatalf("built-in scenes %v", all)
	}
	files, err := builtInFiles.ReadDir("builtin")
	if err != nil || len(files) != len(all) {
		t.Errorf("%d files for %d scenes, error %v", len(files), len(all), err)
	}
	var names []string
	for _, info := range all {
		names = append(names, info.Name)
	}
	want := []string{"@first-light", "@broad-line", "@late-twin", "@hot-disk", "@two-caps", "@slow-room", "@last-look", "@behind-glass"}
	if !slices.Equal(names, want) {
		t.Errorf("built-in scenes %q, want %q", names, want)
	}
	for _, info := range all {
		d, err := Load(info.Name)
		if err != nil {
			t.Fatal(err)
		}
		if info.Title == "" || d.Name() != info.Name || d.Scene().Notes() != nil {
			t.Errorf("%+v has notes %q", info, d.Scene().Notes())
		}
	}
}

func TestFirstLight(t *testing.T) {
	d, err := Load("@first-light")
	if err != nil {
		t.Fatal(err)
	}
	s := d.Scene()
	want := parse(t, `schema = 1
title = "First light: a disk down to the horizon, seen nearly face-on"
object = {mass = 5e9, distance = 14000}
observer.inclination = 20
field.frequency = 230
emitter = [{inner = "horizon", outer = 30, light = "monochromatic"}]
telescope.beam = [20, 20, 0]
measured.ring_diameter = "40 +- 3 uas"
`).Scene()
	if !s.Equal(want) {
		t.Errorf("scene %+v, want %+v", s, want)
	}
}
