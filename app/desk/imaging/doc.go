// Package imaging makes the desk's pictures off the window's thread: the
// latest request wins, a coarse picture comes at once, a finer one when no
// newer request arrives, and stale work is cancelled.
//
// Tracing and toning are two loops. A change of tone only wakes the second,
// which develops the last plate again without tracing anything. Nothing here
// knows of a window toolkit.
package imaging
