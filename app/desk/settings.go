package desk

import (
	"fmt"
	"runtime"
	"slices"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/keep"
)

// askSettings shows what is chosen once for all windows; each choice holds at
// once, the scale from the next start.
func (c *commands) askSettings() {
	if c.asking() {
		return
	}
	s := &c.home.settings
	form := container.New(tightColumn{})
	var first *word
	add := func(name string, labels []string, chosen int, choose func(k int), remark string) {
		var row *segments
		row = newSegments(labels, func(k int) {
			choose(k)
			row.set(k)
			c.home.save()
			afterPaint(func() { c.log.line("setting name=%q value=%q", name, labels[k]) })
		})
		row.set(chosen)
		if first == nil {
			first = row.words[max(0, chosen)]
		}
		note := widget.NewLabel(remark)
		note.SizeName = "caption"
		note.Importance = widget.LowImportance
		form.Add(container.NewBorder(nil, nil, column(nameWidth, plain(name)), note, row.row))
	}
	add("Theme", keep.Themes, slices.Index(keep.Themes, s.Theme), func(k int) {
		s.Theme = keep.Themes[k]
		c.repaint()
	}, "")
	var scales []string
	for _, x := range keep.Scales {
		scales = append(scales, fmt.Sprint(x))
	}
	scales[0] = "the desktop's"
	add("Scale", scales, slices.Index(keep.Scales, s.Scale), func(k int) { s.Scale = keep.Scales[k] }, "from the next start")
	add("Lengths in", keep.Lengths, slices.Index(keep.Lengths, s.Length), func(k int) {
		s.Length = keep.Lengths[k]
		c.showTable()
	}, "in tables; both are GM/c²")
	cores := runtime.NumCPU()
	var counts []int
	var labels []string
	for n := 1; n < cores; n *= 2 {
		counts, labels = append(counts, n), append(labels, fmt.Sprint(n))
	}
	counts, labels = append(counts, 0), append(labels, fmt.Sprintf("all %d", cores))
	add("Workers", labels, max(0, slices.Index(counts, s.Workers)), func(k int) {
		s.Workers = counts[k]
		setWorkers(s.Workers)
	}, "cores that trace")
	d := dialog.NewCustom("Settings", "Close", form, c.window)
	c.ask(d)
	d.Resize(fyne.NewSize(560, 0))
	c.window.Canvas().Focus(first)
}

// repaint shows everything in the theme of the settings.
func (c *commands) repaint() {
	c.home.palette().use()
	c.app.Settings().SetTheme(look{})
	folded := c.view.panel.folded
	c.view = newView(c.window, c.state, c)
	c.view.panel.folded = folded
	c.view.panel.structure = -1
	c.sync()
	if c.frame != nil {
		c.showFrame(*c.frame)
	}
	c.showGraphNow()
}
