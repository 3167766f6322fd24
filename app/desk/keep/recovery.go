package keep

import (
	"encoding/json"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"time"
)

// Work is a scene being edited.
type Work struct {
	Name  string `json:"name"`  // "@first-light", or the path of a file
	Saved string `json:"saved"` // text of the file when it was opened or saved
	Text  string `json:"text"`  // as edited
}

// Recovery keeps one window's unsaved work while it runs. Its methods may be
// called from any goroutine but not at the same time.
type Recovery struct {
	folder string
	id     string
	lock   *os.File // held as long as the process lives
}

// RecoveryFolder returns where unsaved work is kept: XDG_STATE_HOME, or
// ~/.local/state (XDG Base Directory Specification 0.8), and the
// configuration folder where there is none.
func RecoveryFolder() (string, error) {
	if state := os.Getenv("XDG_STATE_HOME"); filepath.IsAbs(state) {
		return filepath.Join(state, "annulet"), nil
	}
	if runtime.GOOS == "windows" || runtime.GOOS == "darwin" {
		folder, err := os.UserConfigDir()
		return filepath.Join(folder, "annulet", "state"), err
	}
	home, err := os.UserHomeDir()
	return filepath.Join(home, ".local", "state", "annulet"), err
}

// OpenRecovery begins to keep a window's work in a folder.
func OpenRecovery(folder string) (*Recovery, error) {
	if err := os.MkdirAll(folder, folderMode); err != nil {
		return nil, err
	}
	r := &Recovery{folder: folder, id: "desk-" + strconv.Itoa(os.Getpid()) + "-" + strconv.FormatInt(time.Now().UnixNano(), 36)}
	f, err := os.OpenFile(r.path(r.id, ".lock"), os.O_CREATE|os.O_RDWR, fileMode)
	if err != nil {
		return nil, err
	}
	if !tryLock(f) {
		f.Close()
		return nil, os.ErrExist
	}
	r.lock = f
	return r, nil
}

func (r *Recovery) path(id, extension string) string { return filepath.Join(r.folder, id+extension) }

// Put keeps the work as it is now.
func (r *Recovery) Put(w Work) error { return writeJSON(r.path(r.id, ".json"), w) }

// Clear forgets the window's work: it is saved, or was given up.
func (r *Recovery) Clear() error {
	err := os.Remove(r.path(r.id, ".json"))
	if os.IsNotExist(err) {
		return nil
	}
	return err
}

// Close ends keeping.
func (r *Recovery) Close() error {
	err := r.Clear()
	r.lock.Close()
	os.Remove(r.path(r.id, ".lock"))
	return err
}

// Take returns the latest work of a window that has ended without closing,
// and drops it from the folder; false if there is none. Only one window gets
// it.
func (r *Recovery) Take() (Work, bool) {
	all, _ := filepath.Glob(filepath.Join(r.folder, "desk-*.json"))
	latest, when := "", time.Time{}
	for _, path := range all {
		id := strings.TrimSuffix(filepath.Base(path), ".json")
		info, err := os.Stat(path)
		if id == r.id || err != nil || !r.ended(id) {
			continue
		}
		if latest == "" || info.ModTime().After(when) {
			latest, when = id, info.ModTime()
		}
	}
	if latest == "" {
		return Work{}, false
	}
	text, err := os.ReadFile(r.path(latest, ".json"))
	var w Work
	if err == nil {
		err = json.Unmarshal(text, &w)
	}
	os.Remove(r.path(latest, ".json"))
	os.Remove(r.path(latest, ".lock"))
	return w, err == nil && w.Text != w.Saved
}

// ended says whether the window of that work has ended.
func (r *Recovery) ended(id string) bool {
	f, err := os.OpenFile(r.path(id, ".lock"), os.O_RDWR, fileMode)
	if err != nil {
		return os.IsNotExist(err)
	}
	defer f.Close()
	return canTell && tryLock(f)
}
