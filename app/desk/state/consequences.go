package state

import (
	"math"
	"slices"
	"strings"

	"annulet/scenes"
)

// Where things are put when a choice needs a place for them. Taste.
const (
	objectPlace   = "4 M"  // radius of a new star or shell
	orbitPlace    = "10 M" // radius of an observer who begins to move
	observerPlace = "30 M" // radius of one who begins to see angles
)

// consequences returns what must change together with a choice, so that one
// click leads from one right scene to another.
func (s *State) consequences(c *Control, value string) []scenes.Assignment {
	var all []scenes.Assignment
	unset := func(path string) {
		if _, given := s.doc.Written(path); given {
			all = append(all, scenes.Assignment{Path: path, Unset: true})
		}
	}
	set := func(path, value string) { all = append(all, scenes.Assignment{Path: path, Value: value}) }
	// foreign keys of the table that the new kind does not have
	foreign := func(section string, n int) {
		for _, k := range scenes.Keys() {
			if k.Section == section && len(k.Kinds) > 0 && !slices.Contains(k.Kinds, value) {
				unset(pathOf(k, n))
			}
		}
	}
	o := s.scene.Observer
	switch {
	case c.Key == "object.kind":
		foreign("object", 0)
		if value == "black-hole" {
			break
		}
		if s.scene.Object.Radius == 0 {
			set("object.radius", objectPlace)
		}
		for n, e := range s.scene.Emitters {
			if e.Inner.Name == "" && e.Inner.Radius > 0 && e.Inner.Radius < s.scene.Object.ISCO() || e.Inner.Name == "horizon" {
				set(emitterPath(n, "inner"), "isco")
			}
		}
		if r := math.Max(s.scene.Object.Radius, 4); o.Radius <= r {
			set("observer.radius", observerPlace)
		}
	case strings.HasPrefix(c.Key, emitterSection) && c.key.Name == "kind":
		n, _ := EmitterOf(c)
		foreign(emitterSection, n)
	case c.Key == "observer.motion":
		if value != "static" {
			if math.IsInf(o.Radius, 1) || value == "orbit" && o.Radius <= math.Max(s.scene.Object.PhotonSphere(), s.scene.Object.Radius) {
				set("observer.radius", orbitPlace)
			}
			if !angular(s.scene) {
				set("field.projection", "perspective")
				s.unsetExtent(unset)
			}
		} else if r := math.Max(s.scene.Object.Horizon(), s.scene.Object.Radius); o.Radius <= r && s.scene.Object.Kind != "shell" {
			set("observer.radius", observerPlace)
		}
	case c.Key == "field.projection":
		if value != s.scene.Field.Projection {
			s.unsetExtent(unset)
		}
		switch {
		case value != parallel && math.IsInf(o.Radius, 1):
			set("observer.radius", observerPlace)
		case value == parallel:
			if o.Motion != "static" {
				set("observer.motion", "static")
			}
			if o.Radius <= math.Max(s.scene.Object.PhotonSphere(), s.scene.Object.Radius) {
				set("observer.radius", "infinity")
			}
		}
	case c.key.Name == "pattern":
		n, _ := EmitterOf(c)
		unset(emitterPath(n, "image"))
	}
	return all
}

// unsetExtent drops lengths of the field, which another projection would take
// for angles.
func (s *State) unsetExtent(unset func(path string)) {
	unset("field.width")
	unset("field.center")
}

func emitterPath(n int, name string) string {
	return pathOf(scenes.Key{Section: emitterSection, Name: name}, n)
}
