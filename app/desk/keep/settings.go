package keep

import (
	"context"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"slices"

	"annulet/app/files"
)

// Settings is what the user has chosen once for all windows.
type Settings struct {
	Theme   string   `json:"theme"`   // "dark" or "light"
	Scale   float64  `json:"scale"`   // screen pixels in a logical one; 0 for the desktop's
	Length  string   `json:"length"`  // "M" or "rg", in tables
	Workers int      `json:"workers"` // goroutines that trace; 0 for one a core
	Recent  []string `json:"recent"`  // files, the last first
}

// Choices of Settings.
var (
	Themes  = []string{"dark", "light"}
	Lengths = []string{"M", "rg"}
	Scales  = []float64{0, 1, 1.25, 1.5, 2}
)

// mostRecent is how many files are remembered. Taste.
const mostRecent = 8

const (
	fileMode   = 0o600
	folderMode = 0o700
)

// Used puts a file first among the recent ones.
func (s *Settings) Used(path string) {
	s.Recent = slices.DeleteFunc(s.Recent, func(p string) bool { return p == path })
	s.Recent = slices.Insert(s.Recent, 0, path)
	s.Recent = s.Recent[:min(len(s.Recent), mostRecent)]
}

// SettingsFile returns the path of the settings.
func SettingsFile() (string, error) {
	folder, err := os.UserConfigDir()
	if err != nil {
		return "", err
	}
	return filepath.Join(folder, "annulet", "desk.json"), nil
}

// Load reads settings; what is missing or makes no sense is the default.
func Load(path string) Settings {
	var s Settings
	if text, err := os.ReadFile(path); err == nil {
		if json.Unmarshal(text, &s) != nil {
			s = Settings{}
		}
	}
	if !slices.Contains(Themes, s.Theme) {
		s.Theme = Themes[0]
	}
	if !slices.Contains(Lengths, s.Length) {
		s.Length = Lengths[0]
	}
	if !slices.Contains(Scales, s.Scale) {
		s.Scale = 0
	}
	s.Workers = max(0, s.Workers)
	s.Recent = s.Recent[:min(len(s.Recent), mostRecent)]
	return s
}

// Save writes settings.
func Save(path string, s Settings) error {
	if err := os.MkdirAll(filepath.Dir(path), folderMode); err != nil {
		return err
	}
	return writeJSON(path, s)
}

func writeJSON(path string, v any) error {
	return files.Write(context.Background(), path, fileMode, func(w io.Writer) error {
		e := json.NewEncoder(w)
		e.SetIndent("", "  ")
		return e.Encode(v)
	})
}
