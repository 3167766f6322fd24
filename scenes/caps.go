package scenes

import (
	"fmt"
	"strings"
)

// caps returns the hot caps of a surface; nil when there are none.
func (b *builder) caps(list reading) []Cap {
	var all []Cap
	for _, table := range list.tables {
		get := func(key string) reading {
			r := table[key]
			r.address = list.address
			return r
		}
		all = append(all, Cap{
			Colatitude:  b.plain(get("colatitude"), 0),
			Azimuth:     b.plain(get("azimuth"), 0),
			Size:        b.plain(get("size"), 0),
			Temperature: b.temperature(get("temperature")),
		})
	}
	return all
}

// formatCaps writes caps as TOML on one line.
func formatCaps(caps []Cap) string {
	var all []string
	for _, c := range caps {
		angle := func(x float64) string { return quote(formatQuantity(x, 0, "deg")) }
		all = append(all, fmt.Sprintf("{colatitude = %s, azimuth = %s, size = %s, temperature = %s}",
			angle(c.Colatitude), angle(c.Azimuth), angle(c.Size), quote(formatQuantity(c.Temperature, 0, "K"))))
	}
	return "[" + strings.Join(all, ", ") + "]"
}
