package state

import (
	"strconv"
	"strings"

	"annulet/scenes"
)

// Differing says in a few words what a scene has that another has not, by the
// keys that differ; "" if nothing does. Both are texts of scene files.
func Differing(text, other []byte) string {
	a, err := scenes.Parse("", text)
	if err != nil {
		return ""
	}
	b, err := scenes.Parse("", other)
	if err != nil {
		return ""
	}
	var words []string
	for _, k := range scenes.Keys() {
		instances := 1
		if k.Section == emitterSection {
			instances = max(len(a.Scene().Emitters), len(b.Scene().Emitters))
		}
		for n := range instances {
			path := k.Path()
			if k.Section == emitterSection {
				path = emitterSection + "." + strconv.Itoa(n+1) + "." + k.Name
			}
			value, given := a.Written(path)
			if was, also := b.Written(path); value == was && given == also {
				continue
			}
			if !given {
				if value = k.DefaultText(); value == "" {
					value = "none"
				}
			}
			words = append(words, strings.ReplaceAll(k.Name, "_", " ")+" "+value)
		}
	}
	return strings.Join(words, ", ")
}
