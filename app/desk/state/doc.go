// Package state is what the window knows: the scene being edited, what each
// control shows, what is wrong with what was typed, the tone, and the words of
// the strip and of the readings. It imports no window toolkit, so every
// decision of the desk is tested with no display.
//
// A State is not safe for concurrent use: it belongs to the window's thread.
// Lengths are in M, angles in degrees, as in package scenes.
package state
