// Package verbs is the command line: trace, probe, render, stations, sweep,
// bench, scene and the small ones, shared by the programs annulet and annulet-batch.
//
// A verb prints its result on stdout, and notes, warnings and progress on
// stderr. With --json stdout holds one JSON document and nothing else. Numbers
// are printed with the fewest digits that read back to the same float64;
// infinity is the string "infinity"; what does not exist is null, in CSV an
// empty field. Angles are in degrees except where a name says _rad. No output
// holds a clock time.
//
// Exit codes: 0 done, 1 could not, 2 bad usage or scene. A bad request gets
// one message and writes nothing.
package verbs
