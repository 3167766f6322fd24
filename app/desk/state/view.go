package state

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
	field := s.scene.Field.Pixels
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
