package desk

import (
	"context"
	"io"
	"os"
	"runtime"
	"strconv"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/app"

	"annulet/app/desk/state"
	"annulet/assets"
	"annulet/scenes"
)

// LogVariable is the environment variable that, set to 1, makes the window
// tell on stderr what has become visible, one line each.
const LogVariable = "ANNULET_LOG"

// scaleVariable is the toolkit's environment variable for the scale.
const scaleVariable = "FYNE_SCALE"

// firstSize is the window's on a screen of 1280 × 800.
var firstSize = fyne.NewSize(1240, 740)

// Run opens the window on a scene and returns when it has been closed. Name
// is "@first-light", or the path of a file. It must run on the main
// goroutine; HasDisplay says whether it can.
func Run(doc *scenes.Document, name string, stderr io.Writer) {
	// The workers keep every core busy. One processor more lets Go's
	// scheduler run the window's thread at once; the system shares the
	// cores fairly among threads.
	runtime.GOMAXPROCS(max(runtime.GOMAXPROCS(0), workers()+1))
	l := &log{}
	if os.Getenv(LogVariable) == "1" {
		l.to = stderr
	}
	h := newHome(l)
	if scale := h.settings.Scale; scale > 0 && os.Getenv(scaleVariable) == "" {
		os.Setenv(scaleVariable, strconv.FormatFloat(scale, 'g', -1, 64))
	}
	h.palette().use()
	a := app.NewWithID("annulet")
	a.Settings().SetTheme(look{})
	a.SetIcon(fyne.NewStaticResource("annulet.png", assets.IconPNG))
	w := a.NewWindow("Annulet")
	w.SetPadded(false)
	ctx, stop := context.WithCancel(context.Background())
	defer stop()

	c := newCommands(a, w, state.New(doc, name), h, l)
	w.SetMainMenu(c.menu())
	c.recover()
	w.SetOnDropped(c.dropped)
	w.Canvas().SetOnTypedKey(func(e *fyne.KeyEvent) {
		if e.Name == fyne.KeyEscape {
			c.escape()
		}
	})
	w.SetCloseIntercept(c.quit)
	w.Resize(firstSize)
	a.Lifecycle().SetOnStarted(func() {
		if l.on() {
			afterPaint(func() {
				c.view.logPlaces(l)
				l.line("window shown")
			})
		}
	})
	c.start(ctx)
	w.ShowAndRun()
	c.keepNow()
	h.close()
}
