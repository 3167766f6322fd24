package scenes

import (
	"slices"
	"strings"
)

// Kinds of emitter.
const (
	disk    = "disk"
	surface = "surface"
	sky     = "sky"
	spot    = "spot"
)

func (b *builder) emitter(index int) {
	get := func(key string) reading { return b.get("emitter", index, key) }
	kind := get("kind")
	b.foreign("emitter", index, kind.word)
	e := Emitter{
		Kind:          kind.word,
		Light:         get("light").word,
		SpectralIndex: b.number(get("spectral_index"), 0),
	}
	b.lights(e, get)
	b.idle(index, get("profile").word, e.Light)
	if rest := get("rest"); rest.given {
		e.Rest = b.plain(rest, 0)
	}
	switch e.Kind {
	case disk:
		b.disk(&e, get)
	case spot:
		b.spot(&e, get)
	case surface:
		b.alone(kind)
		b.surface(&e, get)
	case sky:
		b.alone(kind)
		b.sky(&e, get)
	}
	b.scene.Emitters = append(b.scene.Emitters, e)
}

// alone refuses a second emitter of the kind.
func (b *builder) alone(kind reading) {
	same := func(e Emitter) bool { return e.Kind == kind.word }
	if slices.ContainsFunc(b.scene.Emitters, same) {
		b.failAt(kind, Error{Problem: "a second " + kind.word, Allowed: "one " + kind.word + " in a scene"})
	}
}

// isFor reports whether a kind of object or emitter has the key.
func (k Key) isFor(kind string) bool { return len(k.Kinds) == 0 || slices.Contains(k.Kinds, kind) }

// article names one of a kind: "a black hole".
func article(kind string) string { return "a " + strings.ReplaceAll(kind, "-", " ") }

// kinds lists kinds: "a star or a shell".
func kinds(all []string) string {
	var parts []string
	for _, kind := range all {
		parts = append(parts, article(kind))
	}
	return strings.Join(parts, " or ")
}
