package sweep

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// A termination signal stops the sweep at once: no half file and no claim is
// left, and the next run goes on.
func TestTerminated(t *testing.T) {
	want := undisturbed(t)
	dir := filepath.Join(t.TempDir(), "sweep")
	cmd := worker(dir, 20*time.Millisecond)
	cmd.Stderr = nil // it says that it was interrupted
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	for { // until it is in the middle of its third case
		if text, _ := os.ReadFile(dir + writesLog); strings.Count(string(text), "half ") >= 3 {
			break
		}
		time.Sleep(time.Millisecond)
	}
	if err := cmd.Process.Signal(syscall.SIGTERM); err != nil {
		t.Fatal(err)
	}
	if err := cmd.Wait(); err == nil {
		t.Error("it says that all was done")
	}
	for name := range contents(t, dir) {
		if strings.HasPrefix(filepath.Base(name), ".") || strings.HasPrefix(name, claimsFolder) {
			t.Errorf("left behind: %s", name)
		}
	}
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	same(t, contents(t, dir), want)
}

// A clock that runs backwards, or years ahead, on this host or on that of
// the files, changes nothing: no time of day is read. Every file gets a date
// that no clock of this run can have set; nothing is made again, and what was
// damaged is.
func TestClockRunsBackwards(t *testing.T) {
	want := undisturbed(t)
	dir := filepath.Join(t.TempDir(), "sweep")
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	m, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	for _, year := range []int{2190, 1971} {
		date := time.Date(year, 1, 1, 0, 0, 0, 0, time.UTC)
		err := filepath.WalkDir(dir, func(path string, _ fs.DirEntry, err error) error {
			return errors.Join(err, os.Chtimes(path, date, date))
		})
		if err != nil {
			t.Fatal(err)
		}
		if err := os.Remove(recordPath(dir, m.Cases[7].Name)); err != nil {
			t.Fatal(err)
		}
		// a dead claim of another host, dated likewise: told by its count
		stranger := identity{Host: "elsewhere", Machine: "another", Process: 1, Started: "1"}
		if err := os.MkdirAll(filepath.Join(dir, claimsFolder), 0o777); err != nil {
			t.Fatal(err)
		}
		claimed := filepath.Join(dir, claimsFolder, m.Cases[7].Name+".0")
		if err := os.WriteFile(claimed, []byte(beatLine(3)+stranger.String()+"\n"), 0o666); err != nil {
			t.Fatal(err)
		}
		if err := os.Chtimes(claimed, date, date); err != nil {
			t.Fatal(err)
		}
		before := linesOf(t, dir)
		c := viewClaims(dir)
		if !c.busy(m.Cases[7].Name) {
			t.Errorf("%d: a claim of another host is dead at first sight", year)
		}
		if err := os.WriteFile(claimed, []byte(beatLine(4)+stranger.String()+"\n"), 0o666); err != nil {
			t.Fatal(err)
		}
		c.timeout = 0
		if !c.busy(m.Cases[7].Name) {
			t.Errorf("%d: a claim that has counted is dead", year)
		}
		if c.busy(m.Cases[7].Name) {
			t.Errorf("%d: a claim whose count stood still lives", year)
		}
		if err := os.Remove(claimed); err != nil {
			t.Fatal(err)
		}
		if err := work(t.Context(), dir, 0); err != nil {
			t.Fatal(err)
		}
		if made := linesOf(t, dir) - before; made != 1 {
			t.Errorf("%d: %d cases made again, want 1", year, made)
		}
		same(t, contents(t, dir), want)
	}
}

// isReadOnly says whether the system refused because of a read-only disk.
func isReadOnly(err error) bool { return errors.Is(err, syscall.EROFS) }

// manifests are damaged ones.
var manifests = map[string]string{
	"empty":        "",
	"cut":          `{"annulet_sweep": 1, "version": "te`,
	"zeros":        "\x00\x00\x00\x00\x00\x00",
	"a list":       "[]",
	"null":         "null",
	"no cases":     `{"annulet_sweep": 1, "products": ["image"], "cases": []}`,
	"no products":  `{"annulet_sweep": 1, "products": [], "cases": [{"name": "0000"}]}`,
	"a name":       `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": "../../etc"}]}`,
	"a dot":        `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": ".."}]}`,
	"hidden":       `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": ".a"}]}`,
	"twice":        `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": "0000"}, {"name": "0000"}]}`,
	"NUL":          `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": "0\u0000"}]}`,
	"deep":         strings.Repeat("[", 20000),
	"a number":     `{"annulet_sweep": "1"}`,
	"two of them":  `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": "0000"}]}{}`,
	"merge's name": `{"annulet_sweep": 1, "products": ["image"], "cases": [{"name": "merge"}]}`,
}

// Every damaged manifest is told apart from none and from another sweep's,
// and written anew by the command that began the sweep.
func TestDamagedManifests(t *testing.T) {
	want := undisturbed(t)
	dir := filepath.Join(t.TempDir(), "sweep")
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	before := linesOf(t, dir)
	for what, text := range manifests {
		if err := os.WriteFile(filepath.Join(dir, manifestName), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		if _, err := Load(dir); !errors.Is(err, ErrDamaged) {
			t.Errorf("%s: %v, want ErrDamaged", what, err)
		}
		if err := work(t.Context(), dir, 0); err != nil {
			t.Errorf("%s: %v", what, err)
		}
		same(t, contents(t, dir), want)
	}
	if made := linesOf(t, dir) - before; made != 0 {
		t.Errorf("%d cases were made again", made)
	}
}

// FuzzManifest: any bytes are refused, or what they say stays below the
// folder and can be surveyed.
func FuzzManifest(f *testing.F) {
	for _, text := range manifests {
		f.Add([]byte(text))
	}
	f.Add([]byte(`{"annulet_sweep": 1, "scene": "schema = 1", "products": ["image"], "cases": [{"name": "0000_a=1", "set": [{"key": "emitter.index", "value": "2"}]}]}`))
	dir := f.TempDir()
	f.Fuzz(func(t *testing.T, text []byte) {
		m, err := decode("manifest.json", text)
		if err != nil {
			if err.Error() == "" {
				t.Error("an error without a text")
			}
			return
		}
		for _, c := range m.Cases {
			if filepath.Dir(recordPath(dir, c.Name)) != filepath.Join(dir, recordsFolder) {
				t.Errorf("a case named %q leaves the folder", c.Name)
			}
		}
		if len(m.Cases) < 100 {
			if _, count := Survey(dir, m, false); count[Waiting] != len(m.Cases) {
				t.Errorf("surveyed %v of %d cases", count, len(m.Cases))
			}
		}
	})
}

// FuzzVary: an axis is refused, or has values that are all different and
// come back when they are listed again.
func FuzzVary(f *testing.F) {
	for _, text := range []string{
		"observer.inclination=10:80:10deg", "emitter.index=1,2,3", "a=0:1:0.1", "a=1e3M:2e3M:1e2M", "a=3:1:-1", "a=1:2:0", "a=",
		"a=[1,2],[3]", `a="x,y",z`, "a=1:1e9:1", "a=1e-999:1e999:1", "a=1e9999:2e9999:1e9994", "a=1:2", "=1", "a=1/3:2:1", "a=0x1:3:1", "a=1_0:20:1", "field.pixels=[16, 16],[32, 8]",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		axis, err := ParseAxis(text)
		if err != nil {
			if !errors.Is(err, ErrVary) {
				t.Errorf("%v", err)
			}
			return
		}
		seen := map[string]bool{}
		for _, v := range axis.Values {
			if v == "" || seen[v] {
				t.Fatalf("%q: the value %q is empty or stands twice", text, v)
			}
			seen[v] = true
		}
		if axis.Key == "" || len(axis.Values) == 0 || len(axis.Values) > maxValues {
			t.Errorf("%q: key %q, %d values", text, axis.Key, len(axis.Values))
		}
		cases, err := Outer([]Axis{axis})
		if err != nil {
			t.Fatal(err)
		}
		for k, c := range cases[:min(len(cases), 50)] {
			if filepath.Base(c.Name) != c.Name || len(c.Name) > maxName || k > 0 && cases[k-1].Name >= c.Name {
				t.Errorf("%q: case %d is named %q", text, k, c.Name)
			}
		}
	})
}

// FuzzCases: a table is refused by ErrTable, or every row is a case.
func FuzzCases(f *testing.F) {
	for _, text := range []string{
		"observer.inclination,emitter.inner\n40deg,\n# no\n30deg,1 M\n", "a,a\n1,2\n", "a\n1,2\n", "", "a\n", "\xff\n1\n", "a,b\n\"x\ny\",2\n", "\ufeffa\n1\n", "a\n\"\n",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		sets, err := ReadCases("fuzz.csv", strings.NewReader(text))
		if err != nil {
			if !errors.Is(err, ErrTable) {
				t.Errorf("%v", err)
			}
			return
		}
		for k, c := range Named(sets)[:min(len(sets), 50)] {
			if filepath.Base(c.Name) != c.Name || len(c.Name) > maxName {
				t.Errorf("case %d is named %q", k, c.Name)
			}
			for _, s := range c.Set {
				if s.Key == "" || s.Value == "" {
					t.Errorf("case %d: %q", k, c.Set)
				}
			}
		}
	})
}
