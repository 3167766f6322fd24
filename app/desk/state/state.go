package state

import (
	"path/filepath"
	"slices"
	"strings"
	"time"

	"annulet/scenes"
)

// State is everything the window shows except the picture's pixels.
type State struct {
	Controls  []*Control
	Structure int    // changes with the list of Controls and their headings
	Look      Look   // how the scene is looked at
	Notice    string // an error to show above the picture; "" for none
	Calm      bool   // the notice is no error
	TextWrong string // what is wrong with the text being typed; "" when it is the scene's
	Remark    string // what an edit has changed besides; "" for nothing

	doc   *scenes.Document
	scene scenes.Scene // of doc
	name  string       // "@first-light", or the path of a file
	saved string       // the document's text when it was opened or saved

	past    []moment // what can be undone, the present last
	future  []moment // what can be redone, the next last
	gesture string   // what further changes of the last moment may be part of
	acted   time.Time
	now     func() time.Time

	serial                  int
	spaceColumns, spaceRows int // screen pixels for the picture; 0 before the window has a size
	columns, rows           int // of the picture
}

// New returns the state of a window that has just opened a scene. Name is
// "@first-light", or the path of a file.
func New(doc *scenes.Document, name string) *State {
	s := &State{now: time.Now, Look: newLook()}
	s.Open(doc, name)
	return s
}

// Open replaces the scene.
func (s *State) Open(doc *scenes.Document, name string) {
	s.doc, s.name, s.saved = doc, name, string(doc.Text())
	s.Notice, s.Remark, s.TextWrong = "", "", ""
	s.Look = s.Look.forScene()
	s.Controls, s.past, s.future, s.gesture = nil, nil, nil, ""
	s.changed()
	s.note("open", "")
}

// Recover replaces the scene by one that was being edited when the program
// ended: its file and the text that the file held are those from before.
func (s *State) Recover(doc *scenes.Document, name, saved string) {
	s.Open(doc, name)
	s.saved = saved
}

// SavedText returns the text that the file held when it was opened or saved.
func (s *State) SavedText() string { return s.saved }

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

// Label returns what messages call the scene: "@first-light" or a file name.
func (s *State) Label() string { return filepath.Base(s.name) }

// Suggested returns a file name to offer for saving, with that extension.
func (s *State) Suggested(extension string) string {
	base := strings.TrimPrefix(filepath.Base(s.name), "@")
	return strings.TrimSuffix(base, filepath.Ext(base)) + extension
}

// changed brings everything that follows from the scene up to date. Texts
// that are wrong stay, or what was typed would be lost.
func (s *State) changed() {
	s.serial++
	s.TextWrong, s.Calm = "", false
	s.scene = s.doc.Scene()
	s.fit()
	controls := s.controls()
	if !slices.EqualFunc(controls, s.Controls, func(a, b *Control) bool { return a == b }) {
		s.Structure++
	}
	s.Controls = controls
	for _, c := range s.Controls {
		c.update(s)
	}
	s.Look.suit(s.scene)
}
