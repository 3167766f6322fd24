package scenes

import (
	"embed"
	"slices"
	"strings"
)

//go:embed builtin/*.toml
var builtInFiles embed.FS

// builtInNames in the order of `scene list`; the first is the default scene.
var builtInNames = []string{"@first-light", "@broad-line", "@late-twin", "@hot-disk", "@two-caps", "@slow-room", "@last-look", "@behind-glass"}

// Info names a built-in scene.
type Info struct {
	Name  string // with its @, as Load takes it
	Title string
}

// BuiltIn returns the built-in scenes; the first one is the default.
func BuiltIn() []Info {
	var all []Info
	for _, name := range builtInNames {
		d, err := loadBuiltIn(name)
		if err != nil {
			panic("scenes: " + err.Error())
		}
		all = append(all, Info{name, d.scene.Title})
	}
	return all
}

// loadBuiltIn returns the built-in scene of that name.
func loadBuiltIn(name string) (*Document, error) {
	if !slices.Contains(builtInNames, name) {
		return nil, &Error{File: name, Problem: "no such built-in scene", Allowed: strings.Join(builtInNames, ", ")}
	}
	text, err := builtInFiles.ReadFile("builtin/" + strings.TrimPrefix(name, "@") + ".toml")
	if err != nil {
		return nil, unreadable(name, err)
	}
	return Parse(name, text)
}
