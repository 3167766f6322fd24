// Package output turns plates into files that go into a paper or a pipeline
// as they are: FITS, NPZ, TIFF, PNG; and finds the scene in any of them again.
//
// Every file carries the whole text of its scene, the version of the program
// and its numerics. No file holds a clock time: the same scene and build give
// the same bytes.
package output
