package state

import "time"

// moment is one state that can be returned to.
type moment struct {
	text string
	look Look
	what string // what led here: "Inclination"
}

// pauseEndsGesture is how long the hand may rest within one gesture. Taste.
const pauseEndsGesture = time.Second

// mostMoments bounds the history. Taste: scenes are short.
const mostMoments = 1000

// note remembers the state as it is now. Changes of one gesture, that follow
// one another within a second, are one step of the history.
func (s *State) note(what, gesture string) {
	now := s.now()
	goesOn := gesture != "" && gesture == s.gesture && now.Sub(s.acted) < pauseEndsGesture
	s.gesture, s.acted = gesture, now
	m := moment{string(s.doc.Text()), s.Look.clone(), what}
	s.future = nil
	if goesOn {
		s.past[len(s.past)-1] = m
		return
	}
	s.past = append(s.past, m)
	if len(s.past) > mostMoments {
		s.past = s.past[1:]
	}
}

// Looked notes a change of Look; see note for gestures. Anew says that the
// picture must be traced again.
func (s *State) Looked(what, gesture string, anew bool) {
	s.Look.suit(s.scene)
	if anew {
		s.serial++
	}
	s.note(what, gesture)
}

// Undo returns to the state before the last change; it reports whether there
// was one.
func (s *State) Undo() bool {
	if len(s.past) < 2 {
		return false
	}
	last := len(s.past) - 1
	s.future = append(s.future, s.past[last])
	s.past = s.past[:last]
	s.goTo(s.past[last-1])
	return true
}

// Redo undoes an Undo.
func (s *State) Redo() bool {
	if len(s.future) == 0 {
		return false
	}
	last := len(s.future) - 1
	s.past = append(s.past, s.future[last])
	s.goTo(s.future[last])
	s.future = s.future[:last]
	return true
}

// UndoName and RedoName say what they would take back and do again, "" for
// nothing.
func (s *State) UndoName() string {
	if len(s.past) < 2 {
		return ""
	}
	return s.past[len(s.past)-1].what
}

// RedoName: see UndoName.
func (s *State) RedoName() string {
	if len(s.future) == 0 {
		return ""
	}
	return s.future[len(s.future)-1].what
}

func (s *State) goTo(m moment) {
	if err := s.doc.SetText([]byte(m.text)); err != nil {
		s.Notice = err.Error() // an image of the scene may have gone
		return
	}
	s.Look, s.gesture, s.Notice, s.Remark = m.look.clone(), "", "", ""
	for _, c := range s.Controls {
		c.Wrong = ""
	}
	s.changed()
}
