package scenes

func (b *builder) sky(e *Emitter, get func(string) reading) {
	image, pattern := get("image"), get("pattern")
	e.Seed = int64(b.number(get("seed"), 0))
	switch {
	case image.given && pattern.given:
		b.failAt(pattern, Error{Problem: "given together with image", Allowed: "image or pattern"})
	case image.given && image.word == "":
		b.failAt(image, Error{Problem: "an empty path", Allowed: "the path of an image, or a pattern instead"})
	case image.given:
		e.Image = image.word
	default:
		e.Pattern = pattern.word
	}
}
