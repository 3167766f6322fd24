package desk

import (
	"fyne.io/fyne/v2"
)

// arrangement lays out the window: the scene on the left, the image in the
// middle, readings and graph on the right, the strip below. In a window too
// narrow for both sides only the one asked for last is shown, and in a low one
// what the image can be used without goes.
type arrangement struct {
	view      *view
	scene     bool // wanted
	readings  bool
	preferred bool // of the two the readings, where there is room for one
}

const (
	leastMiddle = 296
	leastWidth  = panelWidth + leastMiddle
	leastHeight = 300
	lowHeight   = 440 // below it graph, help and histogram go
	lineWidth   = 1
)

func (a *arrangement) MinSize([]fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(leastWidth, leastHeight)
}

// Layout takes scene, line, middle, line, readings, strip.
func (a *arrangement) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	scene, left, middle, right, readings, strip := objects[0], objects[1], objects[2], objects[3], objects[4], objects[5]
	showScene, showReadings := a.scene, a.readings
	if showScene && showReadings && size.Width < panelWidth+sidebarWidth+leastMiddle {
		showScene, showReadings = !a.preferred, a.preferred
	}
	a.view.top.sides(showScene, showReadings)
	low := size.Height < lowHeight
	a.view.side.compact(low)
	a.view.panel.compact(low)
	setVisible(a.view.tones.content, !low)

	a.view.stripFlow.width = size.Width
	below := strip.MinSize().Height
	strip.Move(fyne.NewPos(0, size.Height-below))
	strip.Resize(fyne.NewSize(size.Width, below))
	height := size.Height - below
	from, to := float32(0), size.Width
	side := func(o, line fyne.CanvasObject, show bool, width float32, atLeft bool) {
		setVisible(o, show)
		setVisible(line, show)
		if !show {
			return
		}
		x, lineX := from, from+width
		if atLeft {
			from += width + lineWidth
		} else {
			to -= width + lineWidth
			x, lineX = to+lineWidth, to
		}
		o.Move(fyne.NewPos(x, 0))
		o.Resize(fyne.NewSize(width, height))
		line.Move(fyne.NewPos(lineX, 0))
		line.Resize(fyne.NewSize(lineWidth, height))
	}
	side(scene, left, showScene, panelWidth, true)
	side(readings, right, showReadings, sidebarWidth, false)
	middle.Move(fyne.NewPos(from, 0))
	middle.Resize(fyne.NewSize(to-from, height))
}

// middleColumn lays out what is above and below the image, and gives the image
// the rest. Objects: bar, notice, image, histogram.
type middleColumn struct{ view *view }

func (m middleColumn) MinSize([]fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(leastMiddle, 100)
}

func (m middleColumn) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	bar, notice, image, histogram := objects[0], objects[1], objects[2], objects[3]
	m.view.top.setWidth(size.Width)
	m.view.tones.setWidth(size.Width)
	top, bottom := float32(0), size.Height
	for _, o := range []fyne.CanvasObject{bar, notice} {
		if o.Visible() {
			o.Resize(fyne.NewSize(size.Width, o.MinSize().Height)) // a text wraps to its width
			h := o.MinSize().Height
			o.Move(fyne.NewPos(0, top))
			o.Resize(fyne.NewSize(size.Width, h))
			top += h
		}
	}
	if histogram.Visible() {
		h := histogram.MinSize().Height
		bottom -= h
		histogram.Move(fyne.NewPos(0, bottom))
		histogram.Resize(fyne.NewSize(size.Width, h))
	}
	image.Move(fyne.NewPos(0, top))
	image.Resize(fyne.NewSize(size.Width, max(0, bottom-top)))
}

// flowRow lays out objects side by side at their own sizes, in as many lines
// as its width needs.
type flowRow struct {
	width     float32
	gap       float32
	lastRight bool // the last object stands at the right end where all fit on one line
}

func (f *flowRow) MinSize(objects []fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(0, f.place(objects, f.width, false))
}

func (f *flowRow) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	f.place(objects, size.Width, true)
}

// place returns the height that the objects take.
func (f *flowRow) place(objects []fyne.CanvasObject, width float32, move bool) float32 {
	x, y, line, lines := float32(0), float32(0), float32(0), 1
	for k, o := range objects {
		if !o.Visible() {
			continue
		}
		size := o.MinSize()
		if x > 0 && x+size.Width > width {
			x, y, line = 0, y+line, 0
			lines++
		}
		at := x
		if k == len(objects)-1 && f.lastRight && lines == 1 {
			at = max(x, width-size.Width)
		}
		if move {
			o.Move(fyne.NewPos(at, y))
			o.Resize(size)
		}
		x = at + size.Width + f.gap
		line = max(line, size.Height)
	}
	return y + line
}
