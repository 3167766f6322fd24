package windowtest

import (
	"bufio"
	"fmt"
	"image"
	"image/png"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// notRun reports that the window was not tested and why.
func notRun(t *testing.T, missing string) {
	t.Helper()
	report := "NOT RUN: window test: " + missing
	if os.Getenv("ANNULET_WINDOW") == "required" {
		t.Fatal(report)
	}
	t.Skip(report)
}

// need reports the programs that are missing.
func need(t *testing.T, programs ...string) {
	t.Helper()
	var missing []string
	for _, p := range programs {
		if _, err := exec.LookPath(p); err != nil {
			missing = append(missing, p)
		}
	}
	if missing != nil {
		notRun(t, "missing "+strings.Join(missing, ", "))
	}
}

// build returns the path of the program, just built.
func build(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "annulet")
	cmd := exec.Command("go", "build", "-tags", "migrated_fynedo", "-o", path, "annulet/app/annulet")
	cmd.Env = append(os.Environ(), "CGO_ENABLED=1")
	out, err := cmd.CombinedOutput()
	if err == nil {
		return path
	}
	for _, sign := range []string{"fatal error:", "pkg-config", "cannot find -l", "C compiler"} {
		if strings.Contains(string(out), sign) {
			notRun(t, fmt.Sprintf("the window cannot be built here:\n%s", out))
		}
	}
	t.Fatalf("go build: %v\n%s", err, out)
	return ""
}

// screen is a display of the test's own with a window manager.
type screen struct {
	t       *testing.T
	display string
	home    string // folder of the programs' settings
	shots   string // folder
}

func newScreen(t *testing.T) *screen {
	t.Helper()
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	// -noreset: a server whose only client hangs up refuses others for a moment,
	// and the desk knocks before it comes in
	x := exec.Command("Xvfb", "-displayfd", "3", "-screen", "0", "1280x800x24", "-nolisten", "tcp", "-noreset")
	x.ExtraFiles = []*os.File{w}
	startUntilEnd(t, x)
	w.Close()
	number, err := bufio.NewReader(r).ReadString('\n')
	if err != nil {
		t.Fatalf("Xvfb names no display: %v", err)
	}
	s := &screen{t: t, display: ":" + strings.TrimSpace(number), home: t.TempDir(), shots: os.Getenv("ANNULET_SHOTS")}
	if err := os.Mkdir(filepath.Join(s.home, ".cache"), 0o700); err != nil { // the toolkit makes only what is in it
		t.Fatal(err)
	}
	if s.shots == "" {
		s.shots = t.TempDir()
	}
	openbox := exec.Command("openbox")
	openbox.Env = s.env()
	startUntilEnd(t, openbox)
	return s
}

// startUntilEnd starts a program that is stopped when the test ends.
func startUntilEnd(t *testing.T, cmd *exec.Cmd) {
	t.Helper()
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		cmd.Process.Kill()
		cmd.Wait()
	})
}

// env is the environment of programs on the screen.
func (s *screen) env() []string {
	var env []string
	for _, e := range os.Environ() {
		name, _, _ := strings.Cut(e, "=")
		switch name {
		case "DISPLAY", "WAYLAND_DISPLAY", "FYNE_SCALE", "FYNE_THEME", "LANG", "LC_ALL", "HOME", "XDG_CONFIG_HOME", "XDG_STATE_HOME", "ANNULET_LOG":
		default:
			env = append(env, e)
		}
	}
	return append(env, "DISPLAY="+s.display, "FYNE_SCALE=1", "LANG=en_US.UTF-8", "HOME="+s.home, "ANNULET_LOG=1")
}

// run starts the program on the screen and returns its log.
func (s *screen) run(program string, args ...string) *logbook {
	s.t.Helper()
	cmd := exec.Command(program, args...)
	cmd.Env = s.env()
	stderr, w, err := os.Pipe()
	if err != nil {
		s.t.Fatal(err)
	}
	cmd.Stderr = w
	startUntilEnd(s.t, cmd)
	w.Close()
	log := newLogbook(stderr)
	log.process = cmd.Process
	return log
}

// do runs xdotool.
func (s *screen) do(args ...string) string {
	s.t.Helper()
	cmd := exec.Command("xdotool", args...)
	cmd.Env = s.env()
	out, err := cmd.CombinedOutput()
	if err != nil {
		s.t.Fatalf("xdotool %s: %v\n%s", strings.Join(args, " "), err, out)
	}
	return strings.TrimSpace(string(out))
}

// shot takes a picture of the whole screen.
func (s *screen) shot(name string) image.Image {
	s.t.Helper()
	path := filepath.Join(s.shots, name+".png")
	cmd := exec.Command("import", "-window", "root", path)
	cmd.Env = s.env()
	if out, err := cmd.CombinedOutput(); err != nil {
		s.t.Fatalf("import: %v\n%s", err, out)
	}
	file, err := os.Open(path)
	if err != nil {
		s.t.Fatal(err)
	}
	defer file.Close()
	m, err := png.Decode(file)
	if err != nil {
		s.t.Fatal(err)
	}
	return m
}

// changed returns the share of pixels within r that differ.
func changed(a, b image.Image, r image.Rectangle) float64 {
	n := 0
	for y := r.Min.Y; y < r.Max.Y; y++ {
		for x := r.Min.X; x < r.Max.X; x++ {
			if a.At(x, y) != b.At(x, y) {
				n++
			}
		}
	}
	return float64(n) / float64(r.Dx()*r.Dy())
}
