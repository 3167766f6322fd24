// Package sweep makes many scenes of one: the cases. It keeps them in one
// folder so that any number of processes, on any number of hosts that share
// the folder, can work on them, be killed at any moment and go on.
//
// The folder holds
//
//	manifest.json    the scene, the version, what varies, the cases
//	claims/          who is at work on a case: see claim.go
//	records/         what became of a case, with checksums: see record.go
//	PRODUCT/         the files of the cases
//
// A case is done when its record says so and its files are whole. What a case
// writes depends on its scene and the version alone, so that a sweep that was
// killed ends with the same bytes as one that was not. Nothing here reads a
// clock's time of day.
package sweep
