package state

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"annulet/scenes"
)

// Control is one key of the scene: an entry, with a slider where its numbers
// have a scale, or a choice.
type Control struct {
	Key   string // as the document takes it: "emitter.2.outer"
	Group string // heading it stands under
	Name  string // the trade's word for it
	Range string // what may be typed
	Help  string // what it means, one line
	Given bool   // the scene says it; else it is a default

	Options []Option // a choice; nil for an entry
	Many    bool     // any number of the options may be chosen

	Axis     Axis    // of the slider; nil for none
	Position float64 // of the slider, 0 to Axis.Last()
	Text     string  // in the entry, possibly being typed
	Wrong    string  // what is wrong with Text; "" when nothing is known to be

	key  scenes.Key
	axis func(*State) Axis // nil for none
}

// Option is one value of a choice.
type Option struct {
	Label  string
	Chosen bool
	text   string // in the scene file
}

// Default returns the text that the key has when the scene does not say it.
func (c *Control) Default() string { return c.key.DefaultText() }

// IsChoice says whether the control is a row of options.
func (c *Control) IsChoice() bool { return c.Options != nil }

// hidden are the keys without a control: the version of the file.
var hidden = []string{"schema"}

// controls returns the controls of the scene as it is, in the order of the
// key table; those that are there already are kept.
func (s *State) controls() []*Control {
	var all []*Control
	scene := s.doc.Scene()
	old := map[string]*Control{}
	for _, c := range s.Controls {
		old[c.Key] = c
	}
	for _, section := range sections() {
		instances := 1
		if section == emitterSection {
			instances = len(scene.Emitters)
		}
		for n := range instances {
			for _, k := range scenes.Keys() {
				if k.Section != section || !s.shows(k, scene, n) {
					continue
				}
				c := newControl(k, n)
				if kept := old[c.Key]; kept != nil {
					c = kept
				}
				c.Group = groupOf(section, n, scene)
				all = append(all, c)
			}
		}
	}
	return all
}

const emitterSection = "emitter"

// sections returns the tables of the scene file, in the order of its
// reference.
func sections() []string {
	var all []string
	for _, k := range scenes.Keys() {
		if k.Section != "figure" && !slices.Contains(all, k.Section) { // figures are written in the text
			all = append(all, k.Section)
		}
	}
	return all
}

// shows says whether a key has a meaning for the scene as it is.
func (s *State) shows(k scenes.Key, scene scenes.Scene, n int) bool {
	if k.Later || slices.Contains(hidden, k.Path()) {
		return false
	}
	kind := scene.Object.Kind
	switch k.Section {
	case emitterSection:
		e := scene.Emitters[n]
		kind = e.Kind
		if len(k.Profiles) > 0 && !slices.Contains(k.Profiles, e.Profile) || len(k.Lights) > 0 && !slices.Contains(k.Lights, e.Light) {
			return false
		}
	case "object":
		accretes := func(e scenes.Emitter) bool { return e.Profile == "novikov-thorne" }
		if k.Name == "charge" && slices.ContainsFunc(scene.Emitters, accretes) {
			return false // theory knows that disk around an uncharged hole only
		}
	case "field":
		if scene.Field.Projection == allSky && (k.Name == "width" || k.Name == "center") {
			return false // it is every direction
		}
		return true
	}
	return len(k.Kinds) == 0 || slices.Contains(k.Kinds, kind)
}

// newControl returns the control of a key, in the nth table of its section.
func newControl(k scenes.Key, n int) *Control {
	c := &Control{Key: pathOf(k, n), Name: nameOf(k), Help: k.Text, Range: k.Allowed(), key: k, axis: axisOf(k)}
	switch {
	case k.Type == scenes.Choice, k.Type == scenes.ChoiceList:
		c.Many = k.Type == scenes.ChoiceList
		for _, word := range k.Choices {
			c.Options = append(c.Options, Option{Label: word, text: word})
		}
	}
	return c
}

// pathOf returns a key's path in the nth table of its section.
func pathOf(k scenes.Key, n int) string {
	if k.Section == emitterSection && n > 0 {
		return fmt.Sprintf("%s.%d.%s", k.Section, n+1, k.Name)
	}
	return k.Path()
}

// EmitterOf returns which emitter, from 0, a control belongs to.
func EmitterOf(c *Control) (n int, ok bool) {
	rest, ok := strings.CutPrefix(c.Key, emitterSection+".")
	if !ok {
		return 0, false
	}
	number, _, found := strings.Cut(rest, ".")
	if !found {
		return 0, true
	}
	k, err := strconv.Atoi(number)
	return k - 1, err == nil
}

// groupOf returns the heading of a section's nth table.
func groupOf(section string, n int, scene scenes.Scene) string {
	switch section {
	case "":
		return "Scene"
	case emitterSection:
		return fmt.Sprintf("Emitter %d: %s", n+1, scene.Emitters[n].Kind)
	case "trace":
		return "Numerics"
	}
	return strings.ToUpper(section[:1]) + section[1:]
}

// names are those that the key's own word does not say well enough.
var names = map[string]string{
	"object.theta_g":          "GM/(c²D)",
	"field.center":            "Centre",
	"emitter.inner":           "Inner radius",
	"emitter.outer":           "Outer radius",
	"emitter.sense":           "Gas turns",
	"emitter.index":           "Emissivity index",
	"emitter.optical_depth":   "Depth",
	"measured.ring_diameter":  "Ring diameter",
	"trace.max_order":         "Highest order",
	"emitter.light":           "Light",
	"emitter.emission_angle":  "Limb",
	"emitter.seed":            "Seed of stars",
	"emitter.accretion_rate":  "Accretion rate",
	"observer.position_angle": "Position angle",
}

// nameOf returns the trade's word for a key.
func nameOf(k scenes.Key) string {
	if name, ok := names[k.Path()]; ok {
		return name
	}
	word := strings.ReplaceAll(k.Name, "_", " ")
	return strings.ToUpper(word[:1]) + word[1:]
}

// Control returns the control of a key, nil if the scene shows none.
func (s *State) Control(key string) *Control {
	at := slices.IndexFunc(s.Controls, func(c *Control) bool { return c.Key == key })
	if at < 0 {
		return nil
	}
	return s.Controls[at]
}

// update shows the scene's value, unless a text that cannot be taken stands
// there.
func (c *Control) update(s *State) {
	text, given := s.doc.Written(c.Key)
	if !given {
		text = c.Default()
	}
	c.Given = given
	if c.axis != nil {
		c.Axis = c.axis(s)
	}
	if c.IsChoice() {
		for k, o := range c.Options {
			c.Options[k].Chosen = o.text == text
			if c.Many {
				c.Options[k].Chosen = strings.Contains(text, strconv.Quote(o.text))
			}
		}
		return
	}
	if c.Wrong == "" {
		c.Text = shown(text, c.key)
		c.Position = c.Axis.Position(c.stop(s).Value)
	}
}

// stop returns the scene's value on the axis; what has no number there lies
// at its end.
func (c *Control) stop(s *State) Stop {
	text, given := s.doc.Written(c.Key)
	if !given {
		text = c.Default()
	}
	for _, at := range c.Axis {
		if at.Text == text {
			return at
		}
	}
	x, _, _ := s.doc.Number(c.Key)
	return Stop{x, shown(text, c.key)}
}

// shown writes a value as an entry has it: on one line, a bare number with
// the unit it is in.
func shown(text string, k scenes.Key) string {
	text = strings.Join(strings.Fields(text), " ")
	if k.Unit == "" || k.Section == "field" {
		return text
	}
	if x, err := strconv.ParseFloat(text, 64); err != nil || math.IsInf(x, 0) {
		return text
	}
	return text + " " + k.Unit
}
