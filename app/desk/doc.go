// Package desk is Annulet's window: the image, the controls beside it, and
// the readings of the pixel under the pointer.
//
// It is split in three. Package state knows what the window shows and decides
// everything; the view turns that into widgets and decides nothing; the
// commands turn clicks into work, which package imaging does off the window's
// thread. Functions of this package run on the window's thread unless they
// say otherwise; results of work come back through one funnel.
package desk
