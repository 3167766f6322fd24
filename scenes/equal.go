package scenes

import "slices"

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
		slices.Equal(s.Emitters, other.Emitters) &&
		s.Telescope == other.Telescope &&
		s.Measured == other.Measured &&
		s.Trace == other.Trace
}

// clone returns a copy that shares no slice.
func (s Scene) clone() Scene {
	s.Emitters = slices.Clone(s.Emitters)
	s.Field.Frequency = slices.Clone(s.Field.Frequency)
	return s
}

// Notes returns what is legal but worth telling, in full sentences.
func (s Scene) Notes() []string {
	if len(s.Emitters) == 0 {
		return []string{"The scene has no emitter: its image is empty."}
	}
	return nil
}
