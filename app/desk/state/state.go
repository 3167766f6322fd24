package state

import (
	"path/filepath"
	"strings"

	"annulet/app/tone"
	"annulet/scenes"
)

// Document is a scene file being edited; *scenes.Document is one. A failed
// Set changes nothing.
type Document interface {
	Set(key, value string) error
	Text() []byte
	Scene() scenes.Scene
	Dir() string
}

// State is everything the window shows except the picture's pixels.
type State struct {
	Controls []*Control
	Choices  []*Choice
	Tone     tone.Curve
	Notice   string // an error to show above the picture; "" for none

	doc   Document
	name  string // "@first-light", or the path of a file
	saved string // the document's text when it was opened or saved

	serial                  int
	spaceColumns, spaceRows int // screen pixels for the picture; 0 before the window has a size
	columns, rows           int // of the picture
}

// New returns the state of a window that has just opened a scene. Name is
// "@first-light", or the path of a file.
func New(doc Document, name string) *State {
	s := &State{Controls: newControls(), Choices: newChoices(), Tone: tone.SquareRoot}
	s.Open(doc, name)
	return s
}

// Open replaces the scene.
func (s *State) Open(doc Document, name string) {
	s.doc, s.name, s.saved = doc, name, string(doc.Text())
	s.Notice = ""
	for _, c := range s.Controls {
		c.Wrong = ""
	}
	s.changed()
}

// Saved notes that the scene is now in the file of that path.
func (s *State) Saved(path string) {
	s.name, s.saved = path, string(s.doc.Text())
	s.Notice = ""
}

// Scene returns the scene as edited.
func (s *State) Scene() scenes.Scene { return s.doc.Scene() }

// Folder returns the folder that relative paths in the scene count from.
func (s *State) Folder() string { return s.doc.Dir() }

// Text returns the scene file as edited, comments kept.
func (s *State) Text() []byte { return s.doc.Text() }

// Serial changes whenever the picture must be traced again.
func (s *State) Serial() int { return s.serial }

// Modified says whether the scene differs from what was opened or saved.
func (s *State) Modified() bool { return string(s.doc.Text()) != s.saved }

// Name returns what the log calls the scene: "@first-light" or a path.
func (s *State) Name() string { return s.name }

// Path returns the file that holds the scene, or "" if none does yet.
func (s *State) Path() string {
	if strings.HasPrefix(s.name, "@") {
		return ""
	}
	return s.name
}

// Title returns the title of the window.
func (s *State) Title() string {
	mark := ""
	if s.Modified() {
		mark = " (changed)"
	}
	return filepath.Base(s.name) + mark + " — Annulet"
}

// Suggested returns a file name to offer for saving, with that extension.
func (s *State) Suggested(extension string) string {
	base := strings.TrimPrefix(filepath.Base(s.name), "@")
	return strings.TrimSuffix(base, filepath.Ext(base)) + extension
}

// changed brings everything that follows from the scene up to date. Texts
// that are wrong stay, or what was typed would be lost.
func (s *State) changed() {
	s.serial++
	s.fit()
	scene := s.doc.Scene()
	for _, c := range s.Controls {
		c.Axis, c.Range = c.axis(scene)
		if c.Wrong == "" {
			c.show(c.read(scene))
		}
	}
	for _, c := range s.Choices {
		c.Chosen = c.read(scene)
	}
}

func (c *Control) show(at Stop) {
	c.Position, c.Text = c.Axis.Position(at.Value), at.Text
}

// Label returns what messages call the scene: "@first-light" or a file name.
func (s *State) Label() string { return filepath.Base(s.name) }
