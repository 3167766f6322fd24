package scenes

import (
	"strings"
	"testing"
	"time"
)

// TestHostileTexts: no text costs much time or gives a long message. The texts
// are an eighth of the allowed size; what grows with the square of it would
// still show. The limit is wide, for slow machines and the race detector.
func TestHostileTexts(t *testing.T) {
	const limit = 10 * time.Second
	full := func(piece string) string { return strings.Repeat(piece, maxBytes/8/len(piece)) }
	for name, text := range map[string]string{
		"emitters":       full("[[emitter]]\n"),
		"items":          "emitter = [" + full("{},") + "]",
		"unknown keys":   full("x.y={}\n[[q]]\n"),
		"dotted":         full("a.") + "a = 1",
		"brackets":       "title = " + full("["),
		"long key":       full("k") + " = 1",
		"long value":     "title = \"" + full("v") + "\"",
		"long unit":      "observer.radius = \"1 " + full("v") + "\"",
		"long number":    "observer.radius = \"" + full("1") + " M\"",
		"many spaces":    "observer.radius = \"1" + full(" ") + "M\"",
		"frequencies":    "field.frequency = [" + full("1,") + "]",
		"comments":       full("#\n"),
		"caps":           "emitter = [{kind = \"surface\", caps = [" + full("{size = 1, temperature = 9, colatitude = 3},") + "]}]",
		"foreign keys":   full("[[emitter]]\nkind = \"sky\"\ninner = 3\n"),
		"repeated words": "trace.effects = [" + full("\"motion\",") + "]",
	} {
		t.Run(name, func(t *testing.T) {
			start := time.Now()
			d, err := Parse("hostile.toml", []byte("schema = 1\n"+text))
			if err == nil {
				Format(d.Scene())
			}
			if took := time.Since(start); took > limit {
				t.Errorf("took %v", took)
			}
			if err != nil && len(err.Error()) > 2000 {
				t.Errorf("message of %d bytes", len(err.Error()))
			}
		})
	}
}
