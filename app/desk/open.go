package desk

import (
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/storage"

	"annulet/app/output"
	"annulet/scenes"
)

// openNamed opens a scene file or a built-in scene. One that cannot be read
// leaves the old scene in place and tells why above the picture.
func (c *commands) openNamed(name string) {
	doc, name, err := Load(name)
	if err != nil {
		c.tell(err)
		return
	}
	c.state.Open(doc, name)
	c.forget()
	c.kept = ""
	c.sync()
	if path := c.state.Path(); path != "" {
		c.used(path)
	}
	c.log.line("opened scene=%q", name)
}

// inFile begins the name of a scene that was found inside a picture or table:
// like a built-in one it has no file of its own until it is saved.
const inFile = "@"

// Load reads a scene file, a built-in scene, or the scene inside any other
// file that Annulet wrote, and returns what to call it. Paths in a scene found
// inside a file count from that file's folder.
func Load(name string) (doc *scenes.Document, called string, err error) {
	if !output.Recoverable(name) {
		doc, err = scenes.Load(name)
		return doc, name, err
	}
	path := strings.TrimPrefix(name, inFile)
	text, err := output.Recover(path)
	if err != nil {
		return nil, "", err
	}
	doc, err = scenes.Parse(strings.TrimSuffix(path, filepath.Ext(path))+".toml", text)
	return doc, inFile + path, err
}

// tell shows an error above the picture.
func (c *commands) tell(err error) {
	c.state.Notice, c.state.Calm = err.Error(), false
	c.view.sync(c.state, c.tool)
	c.log.line("refused error=%q", err.Error())
}

// openKept is openNamed after asking whether changes may be lost.
func (c *commands) openKept(name string) {
	c.keepChanges("Open another scene", func() { c.openNamed(name) })
}

// keepChanges goes on at once if nothing would be lost, and asks otherwise.
func (c *commands) keepChanges(title string, goOn func()) {
	if c.asking() {
		return
	}
	if !c.state.Modified() {
		goOn()
		return
	}
	question := dialog.NewConfirm(title, "The changes to "+c.state.Label()+" are not saved.", func(lose bool) {
		if lose {
			goOn()
		}
	}, c.window)
	question.SetConfirmText("Lose the changes")
	question.SetDismissText("Keep editing")
	c.ask(question)
}

// ask shows a dialog. Escape closes it.
func (c *commands) ask(d dialog.Dialog) {
	c.asked = d
	d.Show()
}

// asking says whether a dialog is open; shortcuts reach the window through it.
func (c *commands) asking() bool { return c.window.Canvas().Overlays().Top() != nil }

// escape closes the dialog that is open.
func (c *commands) escape() {
	if c.asked != nil && c.asking() {
		c.asked.Dismiss()
	}
}

func (c *commands) open() {
	if c.asking() {
		return
	}
	d := dialog.NewFileOpen(func(file fyne.URIReadCloser, err error) {
		switch {
		case err != nil:
			c.tell(err)
		case file != nil:
			file.Close()
			c.openKept(file.URI().Path())
		}
	}, c.window)
	d.SetFilter(storage.NewExtensionFileFilter(append([]string{".toml"}, output.Extensions...)))
	if here, err := storage.ListerForURI(storage.NewFileURI(workingFolder())); err == nil {
		d.SetLocation(here)
	}
	d.SetTitleText("Open a scene")
	c.ask(d)
	d.Resize(c.window.Canvas().Size().Subtract(fyne.NewSize(120, 100))) // not before it is shown
}

// dropped opens the first of the files dropped on the window.
func (c *commands) dropped(_ fyne.Position, files []fyne.URI) {
	if len(files) == 0 {
		return
	}
	c.openKept(files[0].Path())
}

// revert goes back to the scene as it was opened or saved.
func (c *commands) revert() {
	c.keepChanges("Go back to the saved scene", func() { c.openNamed(c.state.Name()) })
}
