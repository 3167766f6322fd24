package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"annulet/app/desk/state"
	"annulet/app/tone"
	"annulet/scenes"
)

// action is one thing that the window can do, by menu, by shortcut, or found
// by typing.
type action struct {
	menu, label string
	shortcut    fyne.Shortcut // nil for none
	do          func()
	checked     func() bool // nil for what is not turned on and off
	gap         bool        // a line before it in the menu
}

// menus in their order.
var menus = []string{"File", "Edit", "View", "Scenes", "Tone", "Window"}

// actions lists what the window can do. Every shortcut hangs on a menu's item:
// the toolkit passes others on only while no entry has the focus.
func (c *commands) actions() []action {
	look := func() *state.Look { return &c.state.Look }
	all := []action{
		{menu: "File", label: "Open scene…", do: c.open, shortcut: control(fyne.KeyO)},
		{menu: "File", label: "Save scene", do: c.save, shortcut: control(fyne.KeyS)},
		{menu: "File", label: "Save scene as…", do: c.saveAs, shortcut: controlShift(fyne.KeyS)},
		{menu: "File", label: "Go back to saved", do: c.revert},
		{menu: "File", label: "Recover unsaved work", do: c.recoverLost},
		{menu: "File", label: "Save image…", do: c.saveImage, shortcut: control(fyne.KeyE), gap: true},
		{menu: "File", label: "Save a figure of the image…", do: c.saveImageFigure},
		{menu: "File", label: "Save a figure of the graph…", do: c.saveGraphFigure},
		{menu: "File", label: "Save the graph's values as CSV…", do: c.saveGraphCSV},
		{menu: "File", label: "Save the graph as PNG…", do: c.saveGraphPNG},
		{menu: "Edit", label: "Undo", do: c.undo, shortcut: &fyne.ShortcutUndo{}},
		{menu: "Edit", label: "Redo", do: c.redo, shortcut: controlShift(fyne.KeyZ)},
		{menu: "Edit", label: "Copy the table as text", do: c.copyText, shortcut: controlShift(fyne.KeyC), gap: true},
		{menu: "Edit", label: "Copy the table as CSV", do: c.copyCSV},
	}
	for _, kind := range state.EmitterKinds() {
		all = append(all, action{menu: "Edit", label: "Add emitter: " + kind, do: func() { c.addEmitter(kind) }, gap: kind == "disk"})
	}
	for k, l := range state.LayerNames() {
		keys := []fyne.KeyName{fyne.Key1, fyne.Key2, fyne.Key3, fyne.Key4, fyne.Key5, fyne.Key6}
		all = append(all, action{menu: "View", label: "Show " + l.Name, shortcut: controlShift(keys[k]),
			do: func() { c.showLayer(l.Layer) }, checked: func() bool { return look().Layer == l.Layer }})
	}
	all = append(all,
		action{menu: "View", label: "Show all orders", do: func() { c.showOrder(state.AllOrders) }, shortcut: control(fyne.KeyBackTick), gap: true,
			checked: func() bool { return look().Order == state.AllOrders }},
		action{menu: "View", label: "Show the next order", do: c.nextOrder, shortcut: control(fyne.KeyN)},
	)
	for k, name := range state.OverlayNames() {
		all = append(all, action{menu: "View", label: "Overlay: " + name, gap: k == 0,
			do: func() { c.turnOverlay(k) }, checked: func() bool { return look().Overlays.List()[k] }})
	}
	all = append(all,
		action{menu: "View", label: "Own pixels", do: c.turnOwn, checked: func() bool { return look().Own }},
		action{menu: "View", label: "Zoom in", do: func() { c.command('+') }, shortcut: control(fyne.KeyEqual), gap: true},
		action{menu: "View", label: "Zoom out", do: func() { c.command('-') }, shortcut: control(fyne.KeyMinus)},
		action{menu: "View", label: "Fit the whole field", do: c.fit, shortcut: control(fyne.Key0)},
		action{menu: "View", label: "Mark the brightest pixel", do: c.markBrightest, shortcut: control(fyne.KeyB), gap: true},
		action{menu: "View", label: "Cut through the middle", do: c.cutAcross},
		action{menu: "View", label: "Circle of the critical curve", do: c.circleCritical},
		action{menu: "View", label: "Clear marker, cut and circle", do: c.clearMarks},
	)
	for _, info := range scenes.BuiltIn() {
		all = append(all, action{menu: "Scenes", label: info.Name + "   " + info.Title, do: func() { c.openKept(info.Name) }})
	}
	keys := []fyne.KeyName{fyne.Key1, fyne.Key2, fyne.Key3}
	for k, name := range state.Curves() {
		all = append(all, action{menu: "Tone", label: "Tone: " + name, shortcut: control(keys[k]),
			do: func() { c.setTone(tone.Curve(k)) }, checked: func() bool { return look().Tone().Curve == tone.Curve(k) }})
	}
	all = append(all, action{menu: "Tone", label: "Automatic limits", do: c.automaticLimits, gap: true,
		checked: func() bool { return !look().Tone().Fixed }})
	for k, name := range state.TabNames() {
		all = append(all, action{menu: "Window", label: "Table: " + name, do: func() { c.showTab(state.Tab(k)) },
			checked: func() bool { return look().Tab == state.Tab(k) }})
	}
	for k, name := range state.GraphNames() {
		all = append(all, action{menu: "Window", label: "Graph: " + name, do: func() { c.showGraph(state.Graph(k)) }, gap: k == 0,
			checked: func() bool { return look().Graph == state.Graph(k) }})
	}
	all = append(all,
		action{menu: "Window", label: "Hold the graph's curve", do: c.holdCurve, gap: true},
		action{menu: "Window", label: "Drop the curves held", do: c.dropCurves})
	for k, path := range c.home.settings.Recent {
		all = append(all, action{menu: "File", label: "Open " + path, do: func() { c.openKept(path) }, gap: k == 0})
	}
	return append(all,
		action{menu: "Window", label: "Show or hide the scene", do: func() { c.turnSide(false) }, shortcut: control(fyne.KeyL), gap: true},
		action{menu: "Window", label: "Show or hide the readings", do: func() { c.turnSide(true) }, shortcut: control(fyne.KeyR)},
		action{menu: "Window", label: "Go to the image", do: func() { c.window.Canvas().Focus(c.view.picture) }, shortcut: control(fyne.KeyI), gap: true},
		action{menu: "Window", label: "Find an action or a key…", do: c.find, shortcut: control(fyne.KeyK)},
		action{menu: "Window", label: "Settings…", do: c.askSettings, shortcut: control(fyne.KeyComma)},
	)
}

// menu returns the main menu.
func (c *commands) menu() *fyne.MainMenu {
	quit := item("Quit", c.quit, control(fyne.KeyQ))
	quit.IsQuit = true
	main := fyne.NewMainMenu()
	c.checks = nil
	all := c.actions()
	for _, name := range menus {
		m := fyne.NewMenu(name)
		for _, a := range all {
			if a.menu != name {
				continue
			}
			if a.gap {
				m.Items = append(m.Items, fyne.NewMenuItemSeparator())
			}
			i := item(a.label, a.do, a.shortcut)
			m.Items = append(m.Items, i)
			if a.checked != nil {
				c.checks = append(c.checks, func() bool {
					before := i.Checked
					i.Checked = a.checked()
					return i.Checked != before
				})
			}
		}
		if name == "File" {
			m.Items = append(m.Items, fyne.NewMenuItemSeparator(), quit)
		}
		main.Items = append(main.Items, m)
	}
	return main
}

// syncMenu brings the menu's check marks up to date.
func (c *commands) syncMenu() {
	changed := false
	for _, check := range c.checks {
		changed = check() || changed
	}
	if m := c.window.MainMenu(); changed && m != nil {
		m.Refresh()
	}
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
