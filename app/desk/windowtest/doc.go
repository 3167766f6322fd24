// Package windowtest holds the test of the real window: the built program
// under a display of its own, with real clicks and keys. It imports nothing
// that needs a C compiler, so that where one is missing the test can say so.
//
// The test waits for lines of the program's log and never sleeps. It compares
// no pixels with stored ones and asserts no times, but logs those it sees.
//
//	ANNULET_WINDOW=required   what is missing is a failure, not NOT RUN
//	ANNULET_SHOTS=folder      keep the screenshots there
package windowtest
