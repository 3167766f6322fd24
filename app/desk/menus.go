package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"annulet/app/desk/state"
	"annulet/app/tone"
	"annulet/scenes"
)

// menu lists what the window can do. Every shortcut hangs on an item here:
// the toolkit passes others on only while no entry has the focus.
func (c *commands) menu() *fyne.MainMenu {
	quit := item("Quit", c.quit, control(fyne.KeyQ))
	quit.IsQuit = true
	file := fyne.NewMenu("File",
		item("Open scene…", c.open, control(fyne.KeyO)),
		item("Save scene", c.save, control(fyne.KeyS)),
		item("Save scene as…", c.saveAs, controlShift(fyne.KeyS)),
		item("Go back to saved", c.revert, nil),
		fyne.NewMenuItemSeparator(),
		item("Save image…", c.saveImage, control(fyne.KeyE)),
		fyne.NewMenuItemSeparator(),
		quit,
	)
	builtIn := fyne.NewMenu("Scenes")
	for _, info := range scenes.BuiltIn() {
		builtIn.Items = append(builtIn.Items, item(info.Name+"   "+info.Title, func() { c.openKept(info.Name) }, nil))
	}
	tones := fyne.NewMenu("Tone")
	keys := []fyne.KeyName{fyne.Key1, fyne.Key2, fyne.Key3}
	for k, name := range state.Tones() {
		tones.Items = append(tones.Items, item(name, func() { c.setTone(tone.Curve(k)) }, control(keys[k])))
	}
	return fyne.NewMainMenu(file, builtIn, tones)
}

// quit closes the window after asking whether changes may be lost.
func (c *commands) quit() { c.keepChanges("Quit", c.app.Quit) }

func item(label string, action func(), shortcut fyne.Shortcut) *fyne.MenuItem {
	m := fyne.NewMenuItem(label, action)
	m.Shortcut = shortcut
	return m
}

func control(key fyne.KeyName) fyne.Shortcut {
	return &desktop.CustomShortcut{KeyName: key, Modifier: fyne.KeyModifierShortcutDefault}
}

func controlShift(key fyne.KeyName) fyne.Shortcut {
	return &desktop.CustomShortcut{KeyName: key, Modifier: fyne.KeyModifierShortcutDefault | fyne.KeyModifierShift}
}
