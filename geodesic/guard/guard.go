// Package guard keeps a defect in one piece of work from ending the program:
// a panic of a worker's goroutine, which nothing else could catch, becomes an
// error of the work.
package guard

import (
	"fmt"
	"path/filepath"
	"runtime"
	"strings"
)

// Panic is a panic that became an error. It marks a defect of the program.
type Panic struct {
	Value any    // what panic was called with
	Where string // function, file and line
}

// Error says the same on every run.
func (p *Panic) Error() string {
	return fmt.Sprintf("the program failed in %s: %v", p.Where, p.Value)
}

// Unwrap returns the error that panic was called with, if it was one.
func (p *Panic) Unwrap() error {
	err, _ := p.Value.(error)
	return err
}

// Work returns work with a panic turned into a *Panic; one that has become an
// error before passes through.
func Work(work func() error) func() error {
	return func() (err error) {
		defer func() {
			switch v := recover().(type) {
			case nil:
			case *Panic:
				err = v
			default:
				err = &Panic{v, where()}
			}
		}()
		return work()
	}
}

// where finds the innermost function of this module that panicked, from
// within a deferred function.
func where() string {
	const deepest = 64
	callers := make([]uintptr, deepest)
	frames := runtime.CallersFrames(callers[:runtime.Callers(1, callers)])
	panicked := false
	for {
		f, more := frames.Next()
		switch {
		case f.Function == "runtime.gopanic" || f.Function == "runtime.sigpanic":
			panicked = true
		case panicked && !strings.HasPrefix(f.Function, "runtime."):
			return fmt.Sprintf("%s (%s:%d)", f.Function, filepath.Base(f.File), f.Line)
		}
		if !more {
			return "a place unknown"
		}
	}
}
