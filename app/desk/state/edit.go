package state

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"annulet/scenes"
)

// Slide moves a slider; it reports whether the scene changed.
func (s *State) Slide(c *Control, position float64) bool {
	return s.put(c, c.Axis.At(position))
}

// Step moves a control by n stops, from the value that the scene has.
func (s *State) Step(c *Control, n int) bool {
	if len(c.Axis) == 0 {
		return false
	}
	return s.put(c, c.Axis.Step(c.stop(s).Value, n))
}

// put gives a control the value of a stop.
func (s *State) put(c *Control, at Stop) bool {
	if c.Wrong == "" && c.stop(s) == at {
		return false
	}
	c.Text, c.Position = at.Text, c.Axis.Position(at.Value)
	return s.assign(c, c.Key, scenes.Assignment{Path: c.Key, Value: at.Text})
}

// Type notes what an entry holds while it is being typed. What was wrong is
// no longer known to be.
func (s *State) Type(c *Control, text string) {
	if text != c.Text {
		c.Text, c.Wrong = text, ""
	}
}

// Submit takes what an entry holds into the scene; an emptied one returns a
// key to its default. If it cannot be taken, c.Wrong says why, the text stays
// and the scene keeps its value.
func (s *State) Submit(c *Control, text string) bool {
	s.Type(c, text)
	if c.Wrong != "" {
		return false // nothing new since it was refused
	}
	written, given := s.doc.Written(c.Key)
	switch {
	case given && text == shown(written, c.key), !given && text == shown(c.Default(), c.key):
		return false // as it was shown
	case strings.TrimSpace(text) == "" && c.key.Type != scenes.Text:
		return s.Reset(c)
	}
	return s.assign(c, "", scenes.Assignment{Path: c.Key, Value: meant(text)})
}

// Restore drops what was typed and shows the scene's value again.
func (s *State) Restore(c *Control) {
	c.Wrong = ""
	c.update(s)
}

// Reset returns a key to its default.
func (s *State) Reset(c *Control) bool {
	return s.assign(c, "", scenes.Assignment{Path: c.Key, Unset: true})
}

// assign changes keys of the scene on behalf of a control; gesture is what
// later changes may be part of.
func (s *State) assign(c *Control, gesture string, changes ...scenes.Assignment) bool {
	before := string(s.doc.Text())
	if err := s.doc.SetAll(changes...); err != nil {
		c.Wrong = brief(err)
		return false
	}
	c.Wrong, s.Remark = "", ""
	if string(s.doc.Text()) == before {
		c.update(s)
		return false
	}
	s.changed()
	s.note(c.Name, gesture)
	return true
}

// Choose takes one of a choice's options, or turns it over where there may
// be many. Keys that the option makes impossible go with it; Remark says
// which.
func (s *State) Choose(c *Control, option int) bool {
	value := c.Options[option].text
	if c.Many {
		var words []string
		for k, o := range c.Options {
			if o.Chosen != (k == option) {
				words = append(words, strconv.Quote(o.text))
			}
		}
		value = "[" + strings.Join(words, ", ") + "]"
	} else if c.Options[option].Chosen {
		return false
	}
	changes := append([]scenes.Assignment{{Path: c.Key, Value: value}}, s.consequences(c, value)...)
	if !s.assign(c, "", changes...) {
		return false
	}
	if len(changes) > 1 {
		var also []string
		for _, a := range changes[1:] {
			if a.Unset {
				also = append(also, a.Path+" to its default")
			} else {
				also = append(also, a.Path+" to "+a.Value)
			}
		}
		s.Remark = "Also set: " + strings.Join(also, ", ") + "."
	}
	return true
}

// Arrangement is something done to the list of emitters.
type Arrangement int

// The arrangements.
const (
	Remove Arrangement = iota
	Duplicate
	Up
	Down
)

// Arrange does something to the nth emitter.
func (s *State) Arrange(n int, what Arrangement) bool {
	do := map[Arrangement]func() error{
		Remove:    func() error { return s.doc.RemoveEmitter(n) },
		Duplicate: func() error { return s.doc.DuplicateEmitter(n) },
		Up:        func() error { return s.doc.SwapEmitters(n - 1) },
		Down:      func() error { return s.doc.SwapEmitters(n) },
	}[what]
	return s.edit(fmt.Sprintf("arrange emitter %d", n+1), do)
}

// AddEmitter adds an emitter of a kind.
func (s *State) AddEmitter(kind string) bool {
	return s.edit("add emitter", func() error { return s.doc.AddEmitter(kind) })
}

// Emitters returns how many there are.
func (s *State) Emitters() int { return len(s.scene.Emitters) }

// EmitterKinds returns the kinds of emitter that there can be.
func EmitterKinds() []string {
	keys := scenes.Keys()
	at := slices.IndexFunc(keys, func(k scenes.Key) bool { return k.Path() == "emitter.kind" })
	return keys[at].Choices
}

// SetText replaces the scene's text while it is being typed; TextWrong then
// says what is wrong with it, and the scene is as it was. It reports whether
// the scene changed.
func (s *State) SetText(text string) bool {
	s.TextWrong = ""
	if text == string(s.doc.Text()) {
		return false
	}
	if err := s.doc.SetText([]byte(text)); err != nil {
		s.TextWrong = err.Error()
		return false
	}
	for _, c := range s.Controls {
		c.Wrong = ""
	}
	s.changed()
	s.note("text", "text")
	return true
}

// edit changes the document and tells in Notice what stands against it.
func (s *State) edit(what string, do func() error) bool {
	if err := do(); err != nil {
		s.Notice = err.Error()
		return false
	}
	s.Notice, s.Remark = "", ""
	s.changed()
	s.note(what, "")
	return true
}

// meant turns what hands type into what the scene file takes.
func meant(text string) string {
	text = strings.TrimSpace(text)
	switch strings.ToLower(text) {
	case "inf", "∞", "infinite":
		return "infinity"
	}
	return strings.TrimSuffix(text, "°") + map[bool]string{true: " deg"}[strings.HasSuffix(text, "°")]
}

// brief returns the part of an error that fits under an entry: what is wrong
// and what would be right, without the place in a file that the user is not
// looking at.
func brief(err error) string {
	var e *scenes.Error
	if !errors.As(err, &e) {
		line, _, _ := strings.Cut(err.Error(), "\n")
		return line
	}
	text := e.Problem
	if e.Allowed != "" {
		text += "; allowed: " + e.Allowed
	}
	return text
}
