package guard

import (
	"errors"
	"io"
	"strings"
	"testing"
)

func TestWork(t *testing.T) {
	var empty []int
	for _, c := range []struct {
		what string
		work func() error
		want string
	}{
		{"an index", func() error { empty[3]++; return nil }, "guard.TestWork"},
		{"a text", func() error { panic("no light") }, "no light"},
		{"a nil pointer", func() error { var p *Panic; p.Where = ""; return nil }, "nil pointer"},
		{"one within", func() error {
			if err := Work(func() error { panic("no light") })(); err != nil {
				panic(err)
			}
			return nil
		}, "(guard_test.go:2"},
	} {
		err := Work(c.work)()
		var p *Panic
		if !errors.As(err, &p) || !strings.Contains(err.Error(), c.want) || strings.Count(err.Error(), "the program") != 1 {
			t.Errorf("%s: %v, want %q", c.what, err, c.want)
		}
		if again := Work(c.work)(); again.Error() != err.Error() {
			t.Errorf("%s: %v, then %v", c.what, err, again)
		}
	}
	if err := Work(func() error { return io.EOF })(); err != io.EOF {
		t.Errorf("an error became %v", err)
	}
	if err := Work(func() error { panic(io.EOF) })(); !errors.Is(err, io.EOF) {
		t.Errorf("a panic with an error became %v", err)
	}
}
