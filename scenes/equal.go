package scenes

import (
	"reflect"
	"slices"
)

// Equal reports whether both say the same, to the last bit of every number.
func (s Scene) Equal(other Scene) bool {
	f, g := s.Field, other.Field
	return s.Title == other.Title &&
		s.Object == other.Object &&
		s.Observer == other.Observer &&
		f.Projection == g.Projection &&
		f.AutoWidth == g.AutoWidth &&
		f.Width == g.Width &&
		f.Pixels == g.Pixels &&
		f.Center == g.Center &&
		slices.Equal(f.Frequency, g.Frequency) &&
		slices.EqualFunc(s.Emitters, other.Emitters, func(a, b Emitter) bool { return reflect.DeepEqual(a, b) }) &&
		s.Telescope == other.Telescope &&
		s.Measured == other.Measured &&
		slices.EqualFunc(s.Figures, other.Figures, func(a, b Figure) bool { return reflect.DeepEqual(a, b) }) &&
		s.Time == other.Time &&
		s.Trace == other.Trace
}

// clone returns a copy that shares no slice.
func (s Scene) clone() Scene {
	s.Emitters = slices.Clone(s.Emitters)
	for i := range s.Emitters {
		e := &s.Emitters[i]
		e.Caps, e.Index, e.Breaks = slices.Clone(e.Caps), slices.Clone(e.Index), slices.Clone(e.Breaks)
	}
	s.Field.Frequency = slices.Clone(s.Field.Frequency)
	s.Figures = slices.Clone(s.Figures)
	s.Idle = slices.Clone(s.Idle)
	return s
}
