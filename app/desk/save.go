package desk

import (
	"context"
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/imaging"
	"annulet/app/files"
	"annulet/raytrace"
)

// newFileMode is what the umask starts from.
const newFileMode = 0o666

// sceneKeyword names the scene's text inside a PNG.
const sceneKeyword = "Annulet scene"

func (c *commands) save() {
	if path := c.state.Path(); path != "" {
		c.saveTo(path)
		return
	}
	c.saveAs()
}

func (c *commands) saveAs() {
	c.askPath("Save scene", c.state.Suggested(".toml"), c.saveTo)
}

func (c *commands) saveTo(path string) {
	err := files.Write(context.Background(), path, newFileMode, func(w io.Writer) error {
		_, err := w.Write(c.state.Text())
		return err
	})
	if err != nil {
		c.tell(err)
		return
	}
	c.state.Saved(path)
	c.kept = ""
	c.sync()
	c.used(path)
	c.log.line("saved scene=%q", path)
}

func (c *commands) saveImage() {
	c.askPath("Save image", c.state.Suggested(".png"), c.saveImageTo)
}

// saveImageTo traces the scene at its own pixels and writes it in the tone of
// the window, with the scene inside.
func (c *commands) saveImageTo(path string) {
	if err := files.CheckWritable(path); err != nil {
		c.tell(err)
		return
	}
	text := c.state.Text()
	o := c.order()
	pixels := o.Scene.Field.Pixels
	o.Shown, o.Own, o.Columns, o.Rows = imaging.Window{}, true, pixels[0], pixels[1]
	ctx, cancel := context.WithCancel(context.Background())
	bar := widget.NewProgressBarInfinite()
	waiting := dialog.NewCustom("Saving "+filepath.Base(path), "Stop", bar, c.window)
	waiting.SetOnClosed(cancel)
	waiting.Show()
	go func() {
		var plate *raytrace.Plate
		view, err := prepare(o)
		if err == nil {
			o := view.options(nil)
			o.Centres = false // what is kept has areas as pixels
			plate, err = view.Render(ctx, o)
		}
		if err == nil {
			err = files.Write(ctx, path, newFileMode, func(w io.Writer) error {
				return files.EncodePNG(w, o.Develop(plate).Image, []files.Text{{Keyword: sceneKeyword, Value: string(text)}})
			})
		}
		fyne.Do(func() { // once a save: no need of the funnel
			waiting.Hide()
			switch {
			case errors.Is(err, context.Canceled):
			case err != nil:
				c.tell(err)
			default:
				c.view.setPicked("saved " + filepath.Base(path))
				c.log.line("saved image=%q pixels=%dx%d", path, plate.Columns, plate.Rows)
			}
		})
	}()
}

// askPath asks for the file to write. The toolkit's own dialog would empty an
// existing file before anything is known to replace it.
func (c *commands) askPath(title, suggested string, save func(path string)) {
	if c.asking() {
		return
	}
	path := newPathEntry(c.escape)
	path.SetText(filepath.Join(workingFolder(), suggested))
	remark := widget.NewLabel("")
	remark.SizeName = theme.SizeNameCaptionText
	remark.Wrapping = fyne.TextWrapWord
	look := func(text string) { remark.SetText(remarkOn(text)) }
	path.OnChanged = look
	look(path.Text)
	form := container.NewVBox(path, remark)
	d := dialog.NewCustomConfirm(title, "Save", "Cancel", form, func(yes bool) {
		if yes {
			save(expand(path.Text))
		}
	}, c.window)
	path.OnSubmitted = func(string) { d.Confirm() }
	c.ask(d)
	d.Resize(fyne.NewSize(620, 0))
	c.window.Canvas().Focus(path)
}

// pathEntry takes a path; Escape gives up.
type pathEntry struct {
	widget.Entry
	onEscape func()
}

func newPathEntry(onEscape func()) *pathEntry {
	e := &pathEntry{onEscape: onEscape}
	e.ExtendBaseWidget(e)
	return e
}

func (e *pathEntry) TypedKey(key *fyne.KeyEvent) {
	if key.Name == fyne.KeyEscape {
		e.onEscape()
		return
	}
	e.Entry.TypedKey(key)
}

// remarkOn tells what writing to a path would do.
func remarkOn(path string) string {
	path = expand(path)
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return "This is a folder: add a file name."
	case err == nil:
		return "Replaces the file of that name."
	case errors.Is(err, fs.ErrNotExist):
		if _, err := os.Stat(filepath.Dir(path)); err != nil {
			return "The folder does not exist."
		}
		return "A new file."
	}
	return err.Error()
}

// base is a path's file name.
func base(path string) string { return filepath.Base(path) }

// expand makes a typed path absolute; ~/ is the home folder.
func expand(path string) string {
	path = strings.TrimSpace(path)
	if rest, ok := strings.CutPrefix(path, "~/"); ok {
		if home, err := os.UserHomeDir(); err == nil {
			path = filepath.Join(home, rest)
		}
	}
	if absolute, err := filepath.Abs(path); err == nil {
		return absolute
	}
	return path
}

func workingFolder() string {
	folder, err := os.Getwd()
	if err != nil {
		return "."
	}
	return folder
}
