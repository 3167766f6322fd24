package files

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
)

const (
	oldText = "the old file"
	newText = "the new file"
	mode    = fs.FileMode(0o644)
)

func fillNew(w io.Writer) error {
	_, err := io.WriteString(w, newText)
	return err
}

// holds fails unless the folder has exactly these files with these contents.
func holds(t *testing.T, folder string, want map[string]string) {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		text, ok := want[e.Name()]
		if !ok {
			t.Errorf("%s is left in the folder", e.Name())
			continue
		}
		got, err := os.ReadFile(filepath.Join(folder, e.Name()))
		if err != nil || string(got) != text {
			t.Errorf("%s holds %.40q (%v), want %.40q", e.Name(), got, err, text)
		}
	}
	if len(entries) < len(want) {
		t.Errorf("%d files in the folder, want %d", len(entries), len(want))
	}
}

// withOld returns a folder and the path of an old file in it.
func withOld(t *testing.T) (folder, path string) {
	t.Helper()
	folder = t.TempDir()
	path = filepath.Join(folder, "image.png")
	if err := os.WriteFile(path, []byte(oldText), mode); err != nil {
		t.Fatal(err)
	}
	return folder, path
}

func TestWriteNew(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "new.csv")
	const private = 0o600
	if err := Write(t.Context(), path, private, fillNew); err != nil {
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"new.csv": newText})
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != private {
		t.Errorf("mode %v (%v), want %v", info.Mode(), err, fs.FileMode(private))
	}
}

func TestWriteReplacesAndKeepsMode(t *testing.T) {
	folder, path := withOld(t)
	const shared = 0o666 // beyond the usual umask
	if err := os.Chmod(path, shared); err != nil {
		t.Fatal(err)
	}
	if err := Write(t.Context(), path, mode, fillNew); err != nil {
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"image.png": newText})
	if info, err := os.Stat(path); err != nil || info.Mode().Perm() != shared {
		t.Errorf("mode %v (%v), want %v", info.Mode(), err, fs.FileMode(shared))
	}
}

func TestWriteFollowsLinks(t *testing.T) {
	folder, path := withOld(t)
	link := filepath.Join(t.TempDir(), "link.png")
	if err := os.Symlink(path, link); err != nil {
		t.Skip("no symbolic links here: ", err)
	}
	if err := Write(t.Context(), link, mode, fillNew); err != nil {
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"image.png": newText})
	if _, err := os.Readlink(link); err != nil {
		t.Errorf("the link is gone: %v", err)
	}
	if err := os.Remove(path); err != nil {
		t.Fatal(err)
	}
	if err := Write(t.Context(), link, mode, fillNew); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a link to nowhere: %v", err)
	}
}

// TestWriteSeesOldOrNew reads the file from within fill, when everything but
// the last bytes has been written.
func TestWriteSeesOldOrNew(t *testing.T) {
	folder, path := withOld(t)
	err := Write(t.Context(), path, mode, func(w io.Writer) error {
		if _, err := w.Write(make([]byte, 2*bufferBytes)); err != nil {
			return err
		}
		got, err := os.ReadFile(path)
		if string(got) != oldText {
			t.Errorf("half-way the file holds %.20q (%v)", got, err)
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"image.png": strings.Repeat("\x00", 2*bufferBytes)})
}

func TestFailuresLeaveTheOldFile(t *testing.T) {
	own := errors.New("fill's own")
	some := func(w io.Writer) { _, _ = w.Write(make([]byte, 2*bufferBytes)) }
	for name, c := range map[string]struct {
		want error
		fill func(w io.Writer, cancel func()) error
	}{
		"error":             {own, func(w io.Writer, _ func()) error { some(w); return own }},
		"cancelled":         {context.Canceled, func(w io.Writer, cancel func()) error { some(w); cancel(); _, err := w.Write([]byte{1}); return err }},
		"cancel overlooked": {context.Canceled, func(w io.Writer, cancel func()) error { some(w); cancel(); return nil }},
	} {
		folder, path := withOld(t)
		ctx, cancel := context.WithCancel(t.Context())
		err := Write(ctx, path, mode, func(w io.Writer) error { return c.fill(w, cancel) })
		if !errors.Is(err, c.want) || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: %v, want %v and the path", name, err, c.want)
		}
		holds(t, folder, map[string]string{"image.png": oldText})
		cancel()
	}
}

func TestCancelledBefore(t *testing.T) {
	folder, path := withOld(t)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	err := Write(ctx, path, mode, func(io.Writer) error { t.Error("fill runs"); return nil })
	if !errors.Is(err, context.Canceled) {
		t.Errorf("%v, want context.Canceled", err)
	}
	holds(t, folder, map[string]string{"image.png": oldText})
}

func TestPanicLeavesTheOldFile(t *testing.T) {
	folder, path := withOld(t)
	func() {
		defer func() {
			if recover() == nil {
				t.Error("the panic is swallowed")
			}
		}()
		_ = Write(t.Context(), path, mode, func(w io.Writer) error { panic("our bug") })
	}()
	holds(t, folder, map[string]string{"image.png": oldText})
	if n := len(unfinished.files); n != 0 {
		t.Errorf("%d temporary files still registered", n)
	}
}

func TestRefusals(t *testing.T) {
	folder, path := withOld(t)
	for name, c := range map[string]struct {
		path string
		want error
	}{
		"missing folder":  {filepath.Join(folder, "no", "a.png"), ErrNoFolder},
		"file as folder":  {filepath.Join(path, "a.png"), ErrNoFolder},
		"target a folder": {folder, ErrIsFolder},
		"trailing slash":  {filepath.Join(folder, "sub") + "/", ErrIsFolder},
	} {
		if err := CheckWritable(c.path); !errors.Is(err, c.want) || !strings.Contains(err.Error(), c.path) {
			t.Errorf("%s: CheckWritable: %v, want %v", name, err, c.want)
		}
		if err := Write(t.Context(), c.path, mode, fillNew); !errors.Is(err, c.want) {
			t.Errorf("%s: Write: %v, want %v", name, err, c.want)
		}
	}
	if err := CheckWritable(""); err == nil {
		t.Error("an empty name passes")
	}
	holds(t, folder, map[string]string{"image.png": oldText})
}

func TestCheckWritableLeavesNothing(t *testing.T) {
	folder, path := withOld(t)
	before, err := os.Stat(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range []string{path, filepath.Join(folder, "new.png"), os.DevNull} {
		if err := CheckWritable(p); err != nil {
			t.Errorf("CheckWritable(%s): %v", p, err)
		}
	}
	holds(t, folder, map[string]string{"image.png": oldText})
	after, err := os.Stat(path)
	if err != nil || !after.ModTime().Equal(before.ModTime()) || !os.SameFile(before, after) {
		t.Errorf("the old file changed: %v", err)
	}
}

func TestDevicesAreWrittenTo(t *testing.T) {
	before, err := os.Stat(os.DevNull)
	if err != nil || before.Mode().IsRegular() {
		t.Skip("no null device here")
	}
	if err := Write(t.Context(), os.DevNull, mode, fillNew); err != nil {
		t.Fatal(err)
	}
	if after, err := os.Stat(os.DevNull); err != nil || !os.SameFile(before, after) {
		t.Errorf("the null device was replaced: %v", err)
	}
}

func TestConcurrentWrites(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "a.csv")
	const writers = 16
	text := func(k int) string { return strings.Repeat(fmt.Sprintf("%02d,", k), bufferBytes) }
	var wg sync.WaitGroup
	for k := range writers {
		wg.Go(func() {
			err := Write(t.Context(), path, mode, func(w io.Writer) error {
				_, err := io.WriteString(w, text(k))
				return err
			})
			if err != nil {
				t.Error(err)
			}
		})
	}
	wg.Wait()
	got, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var winner int
	if _, err := fmt.Sscanf(string(got[:2]), "%d", &winner); err != nil || string(got) != text(winner) {
		t.Errorf("the file is a mixture (%v)", err)
	}
	holds(t, folder, map[string]string{"a.csv": text(winner)})
}

func TestAbandon(t *testing.T) {
	t.Cleanup(func() { unfinished.abandoned = false })
	folder, path := withOld(t)
	err := Write(t.Context(), path, mode, func(w io.Writer) error {
		if _, err := w.Write(make([]byte, 2*bufferBytes)); err != nil {
			return err
		}
		if err := Abandon(); err != nil {
			t.Error(err)
		}
		holds(t, folder, map[string]string{"image.png": oldText}) // at once, not when fill returns
		return nil
	})
	if !errors.Is(err, ErrAbandoned) {
		t.Errorf("Write after Abandon: %v", err)
	}
	if err := Write(t.Context(), path, mode, fillNew); !errors.Is(err, ErrAbandoned) {
		t.Errorf("a later Write: %v", err)
	}
	holds(t, folder, map[string]string{"image.png": oldText})
}

func ExampleWrite() {
	folder, err := os.MkdirTemp("", "example")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer os.RemoveAll(folder)
	path := filepath.Join(folder, "rings.csv")
	const readable = 0o644
	err = Write(context.Background(), path, readable, func(w io.Writer) error {
		_, err := fmt.Fprintln(w, "order,width")
		return err
	})
	text, _ := os.ReadFile(path)
	fmt.Printf("%v %q\n", err, text)
	// Output: <nil> "order,width\n"
}

// Where files without a name can get none, they have one from the start.
func TestNamedFromTheStart(t *testing.T) {
	folder, path := withOld(t)
	r := register{named: true}
	if err := r.tryCreate(path); err != nil {
		t.Fatal(err)
	}
	file, err := r.create(path, mode)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := os.Stat(file.Name()); err != nil || r.files[file] {
		t.Errorf("%s has no name (%v)", file.Name(), err)
	}
	if _, err := file.WriteString(newText); err != nil {
		t.Fatal(err)
	}
	if err := r.finish(file, path); err != nil {
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"image.png": newText})
}
