package state

import (
	"errors"
	"strings"

	"annulet/scenes"
)

// Slide moves a slider; it reports whether the scene changed.
func (s *State) Slide(c *Control, position float64) bool {
	return s.put(c, c.Axis.At(position))
}

// Step moves a control by n stops, from the value that the scene has.
func (s *State) Step(c *Control, n int) bool {
	return s.put(c, c.Axis.Step(c.read(s.doc.Scene()).Value, n))
}

// put gives a control the value of a stop.
func (s *State) put(c *Control, at Stop) bool {
	if c.Wrong == "" && c.read(s.doc.Scene()) == at {
		return false
	}
	c.show(at)
	return s.set(c, at.Text)
}

// Type notes what an entry holds while it is being typed. What was wrong is
// no longer known to be.
func (s *State) Type(c *Control, text string) {
	if text != c.Text {
		c.Text, c.Wrong = text, ""
	}
}

// Submit takes what an entry holds into the scene. If it cannot be taken,
// c.Wrong says why, the text stays and the scene keeps its value.
func (s *State) Submit(c *Control, text string) bool {
	s.Type(c, text)
	if c.Wrong != "" {
		return false // nothing new since it was refused
	}
	if at := c.read(s.doc.Scene()); text == at.Text {
		return false // as it was shown; its rounding is not an edit
	}
	return s.set(c, meant(text))
}

// Restore drops what was typed and shows the scene's value again.
func (s *State) Restore(c *Control) {
	c.Wrong = ""
	c.show(c.read(s.doc.Scene()))
}

func (s *State) set(c *Control, value string) bool {
	before := string(s.doc.Text())
	if err := s.doc.Set(address(c.Key, s.doc.Scene()), value); err != nil {
		c.Wrong = brief(err)
		return false
	}
	c.Wrong = ""
	s.changed()
	return string(s.doc.Text()) != before
}

// Choose takes one of a choice's options.
func (s *State) Choose(c *Choice, option int) bool {
	if option == c.Chosen {
		return false
	}
	if err := s.doc.Set(address(c.Key, s.doc.Scene()), c.Options[option].text); err != nil {
		s.Notice = err.Error()
		return false
	}
	s.changed()
	return true
}

// Resize says how many screen pixels the window has for the picture.
func (s *State) Resize(columns, rows int) bool {
	s.spaceColumns, s.spaceRows = columns, rows
	if !s.fit() {
		return false
	}
	s.serial++
	return true
}

// fit gives the picture square pixels and the shape of the scene's field, as
// large as the space allows; it reports whether that is another size.
func (s *State) fit() bool {
	if s.spaceColumns <= 0 || s.spaceRows <= 0 {
		return false
	}
	const leastSide, mostSide = 16, 8192
	field := s.doc.Scene().Field.Pixels
	columns := min(s.spaceColumns, s.spaceRows*field[0]/field[1])
	rows := columns * field[1] / field[0]
	columns, rows = clamp(columns, leastSide, mostSide), clamp(rows, leastSide, mostSide)
	if columns == s.columns && rows == s.rows {
		return false
	}
	s.columns, s.rows = columns, rows
	return true
}

// Picture returns the picture's pixels; zeros before the window has a size.
func (s *State) Picture() (columns, rows int) { return s.columns, s.rows }

func clamp(x, least, most int) int { return max(least, min(x, most)) }

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
