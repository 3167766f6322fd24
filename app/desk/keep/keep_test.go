package keep

import (
	"os"
	"os/exec"
	"path/filepath"
	"testing"
)

func TestSettings(t *testing.T) {
	path := filepath.Join(t.TempDir(), "annulet", "desk.json")
	s := Load(path)
	if s.Theme != "dark" || s.Length != "M" || s.Scale != 0 {
		t.Errorf("defaults are %+v", s)
	}
	for _, f := range []string{"a", "b", "a", "c"} {
		s.Used(f)
	}
	s.Theme, s.Scale = "light", 1.5
	if err := Save(path, s); err != nil {
		t.Fatal(err)
	}
	again := Load(path)
	if again.Theme != "light" || again.Scale != 1.5 || len(again.Recent) != 3 || again.Recent[0] != "c" || again.Recent[1] != "a" {
		t.Errorf("comes back as %+v", again)
	}
	for range 20 {
		s.Used(t.TempDir())
	}
	if len(s.Recent) != mostRecent {
		t.Errorf("%d files are remembered", len(s.Recent))
	}
	for _, text := range []string{"{", `{"theme": 3}`, `{"theme": "pink", "scale": -1, "workers": -3}`} {
		if err := os.WriteFile(path, []byte(text), fileMode); err != nil {
			t.Fatal(err)
		}
		if got := Load(path); got.Theme != "dark" || got.Scale != 0 || got.Workers != 0 {
			t.Errorf("%s is read as %+v", text, got)
		}
	}
}

func open(t *testing.T, folder string) *Recovery {
	t.Helper()
	r, err := OpenRecovery(folder)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// A child process keeps work and is killed; the next window takes it, and
// only that one.
func TestWorkOfAKilledProcessComesBack(t *testing.T) {
	const variable = "ANNULET_KEEP_TEST"
	if folder := os.Getenv(variable); folder != "" {
		r := open(t, folder)
		if err := r.Put(Work{Name: "x.toml", Saved: "old", Text: "new"}); err != nil {
			t.Fatal(err)
		}
		p, err := os.FindProcess(os.Getpid())
		if err != nil {
			t.Fatal(err)
		}
		p.Kill()
		select {}
	}
	folder := t.TempDir()
	child := exec.Command(os.Args[0], "-test.run=TestWorkOfAKilledProcessComesBack")
	child.Env = append(os.Environ(), variable+"="+folder)
	if err := child.Run(); err == nil {
		t.Fatal("the child was not killed")
	}
	r := open(t, folder)
	defer r.Close()
	if w, ok := r.Take(); !ok || w != (Work{"x.toml", "old", "new"}) {
		t.Errorf("took %+v, %v", w, ok)
	}
	if w, ok := r.Take(); ok {
		t.Errorf("took %+v twice", w)
	}
}

func TestWorkOfARunningWindowStays(t *testing.T) {
	folder := t.TempDir()
	first, second := open(t, folder), open(t, folder)
	if err := first.Put(Work{Text: "new"}); err != nil {
		t.Fatal(err)
	}
	if w, ok := second.Take(); ok {
		t.Errorf("took %+v from a window that runs", w)
	}
	if err := first.Close(); err != nil {
		t.Fatal(err)
	}
	if w, ok := second.Take(); ok {
		t.Errorf("took %+v from a window that was closed", w)
	}
	second.Close()
	if left, _ := filepath.Glob(filepath.Join(folder, "*")); len(left) != 0 {
		t.Errorf("left behind: %v", left)
	}
}
