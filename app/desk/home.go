package desk

import (
	"errors"
	"slices"
	"time"

	"annulet/app/desk/keep"
	"annulet/scenes"
)

// home is what is kept between sessions. Where there is no folder for it the
// window works all the same.
type home struct {
	settings keep.Settings
	file     string         // of the settings; "" for nowhere
	recovery *keep.Recovery // nil for nowhere
	log      *log
}

func newHome(l *log) *home {
	h := &home{log: l}
	var err error
	if h.file, err = keep.SettingsFile(); err != nil {
		l.line("no settings error=%q", err)
	}
	h.settings = keep.Load(h.file)
	folder, err := keep.RecoveryFolder()
	if err == nil {
		h.recovery, err = keep.OpenRecovery(folder)
	}
	if err != nil {
		l.line("no recovery error=%q", err)
	}
	return h
}

func (h *home) palette() palette {
	if h.settings.Theme == "light" {
		return light
	}
	return dark
}

// save writes the settings.
func (h *home) save() {
	if h.file == "" {
		return
	}
	if err := keep.Save(h.file, h.settings); err != nil {
		h.log.line("settings not saved error=%q", err)
	}
}

func (h *home) close() {
	if h.recovery != nil {
		h.recovery.Close()
	}
}

// keepEvery is how often unsaved work is kept at most. Taste.
const keepEvery = time.Second

// keepSoon keeps the work as it will be a moment from now.
func (c *commands) keepSoon() {
	if c.keeping || c.home.recovery == nil {
		return
	}
	c.keeping = true
	time.AfterFunc(keepEvery, func() { c.inbox.put(func(n *news) { n.keep = true }) })
}

// keepNow keeps the work, or forgets it when there is nothing to lose.
func (c *commands) keepNow() {
	c.keeping = false
	text := string(c.state.Text())
	r := c.home.recovery
	if r == nil || text == c.kept {
		return
	}
	var err error
	if c.state.Modified() {
		err = r.Put(keep.Work{Name: c.state.Name(), Saved: c.state.SavedText(), Text: text})
	} else {
		err = r.Clear()
	}
	if err != nil {
		c.log.line("not kept error=%q", err)
		return
	}
	c.kept = text
	c.log.line("kept modified=%v", c.state.Modified())
}

// recover brings back what a window that was killed had not saved: at once if
// it was this scene, and otherwise for the asking.
func (c *commands) recover() {
	if c.home.recovery == nil {
		return
	}
	work, ok := c.home.recovery.Take()
	if !ok {
		return
	}
	if work.Name == c.state.Name() {
		c.recoverWork(work)
		return
	}
	c.lost = &work
	c.state.Notice = "A session that ended had not saved its changes to " + work.Name + ". File ▸ Recover unsaved work brings them back."
	c.state.Calm = true
	c.sync()
}

// recoverLost is the menu's.
func (c *commands) recoverLost() {
	if c.lost == nil {
		c.tell(errors.New("there is no unsaved work of a session that ended"))
		return
	}
	c.keepChanges("Recover unsaved work", func() {
		work := *c.lost
		c.lost = nil
		c.recoverWork(work)
	})
}

func (c *commands) recoverWork(work keep.Work) {
	doc, err := scenes.Parse(work.Name, []byte(work.Saved))
	if err != nil {
		doc, err = scenes.Parse(work.Name, []byte(work.Text))
	}
	if err != nil {
		c.tell(err)
		return
	}
	c.state.Recover(doc, work.Name, work.Saved)
	c.state.SetText(work.Text)
	c.state.Notice = "Brought back the changes to " + work.Name + " of a session that ended without saving. Undo returns to the saved scene."
	c.state.Calm = true
	c.log.line("recovered scene=%q", work.Name)
	c.forget()
	c.sync()
}

// used remembers a file among the recent ones.
func (c *commands) used(path string) {
	if slices.Contains(c.home.settings.Recent, path) && c.home.settings.Recent[0] == path {
		return
	}
	c.home.settings.Used(path)
	c.home.save()
	c.window.SetMainMenu(c.menu())
}
