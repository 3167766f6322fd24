package assets

import (
	"image/color"
	"slices"
)

const (
	entries = 256 // of a table

	opaque = 0xffff // alpha of a 16-bit colour
	to8    = 257    // 65535/255: from 16-bit to 8-bit components
)

// NoValue is the colour of NaN in every map: a slate grey that none of them
// comes near, so that a missing value is not taken for a low one.
var NoValue = color.RGBA64{R: 0x4040, G: 0x4646, B: 0x4d4d, A: opaque}

// Map turns a number in [0, 1] into a colour.
// A Map never changes, so any number of goroutines may share it.
type Map struct {
	name  string
	table *[entries][3]uint16 // encoded sRGB, full scale 65535
}

// maps lists every map, by name.
var maps = []*Map{
	// ember, sequential, for intensity: near-black through red and amber to
	// cream.
	{name: "ember", table: &emberTable},
	// shift, diverging, for the redshift factor g with 1 at x = 0.5: dark red
	// and orange below, light neutral at the centre, blue above.
	{name: "shift", table: &shiftTable},
	// tarn, sequential, for radii and delays: deep blue through teal to pale
	// green.
	{name: "tarn", table: &tarnTable},
	// wheel, cyclic, for azimuths: lightness rises once and falls once, and
	// the ends meet.
	{name: "wheel", table: &wheelTable},
	// orders, ten flat colours of rising lightness, for image orders 0 to 9.
	{name: "orders", table: &ordersTable},
}

// Lookup returns the map of that name.
func Lookup(name string) (*Map, bool) {
	for _, m := range maps {
		if m.name == name {
			return m, true
		}
	}
	return nil, false
}

// Names returns the names of all maps, sorted.
func Names() []string {
	names := make([]string, len(maps))
	for i, m := range maps {
		names[i] = m.name
	}
	slices.Sort(names)
	return names
}

// Name returns the name under which Lookup finds the map.
func (m *Map) Name() string { return m.name }

// At returns the colour at x, opaque sRGB with 16 bits a component,
// interpolated linearly between the entries of the table. Values of x below 0
// count as 0, above 1 as 1; NaN gives NoValue.
func (m *Map) At(x float64) color.RGBA64 {
	if x != x {
		return NoValue
	}
	k, part := place(x)
	low, high := &m.table[k], &m.table[k+1]
	mix := func(i int) uint16 {
		from, to := float64(low[i]), float64(high[i])
		return uint16(from + part*(to-from) + 0.5)
	}
	return color.RGBA64{R: mix(0), G: mix(1), B: mix(2), A: opaque}
}

// At8 returns the colour at x as At does, rounded to 8 bits a component.
func (m *Map) At8(x float32) (r, g, b uint8) {
	c := m.At(float64(x))
	return round8(c.R), round8(c.G), round8(c.B)
}

// place returns the entry below x and how far, in [0, 1], x lies from it
// towards the next.
func place(x float64) (k int, part float64) {
	const last = entries - 1
	s := min(max(x, 0), 1) * last
	k = min(int(s), last-1)
	return k, s - float64(k)
}

func round8(v uint16) uint8 { return uint8((uint32(v) + to8/2) / to8) }
