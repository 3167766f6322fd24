package state

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// FirstStations are the radii that the panel opens with.
const FirstStations = "4, 10, infinity"

// mostStations bounds the table. Taste: every ordered pair is listed.
const mostStations = 12

// ParseStations reads radii in M, separated by commas or blanks.
func ParseStations(text string) ([]float64, error) {
	var radii []float64
	for _, word := range strings.FieldsFunc(text, func(r rune) bool { return strings.ContainsRune(", ;\t", r) }) {
		if word == "M" {
			continue
		}
		word = strings.TrimSuffix(word, "M")
		r, err := strconv.ParseFloat(word, 64)
		switch {
		case strings.HasPrefix(strings.ToLower(word), "inf") || word == "∞":
			r = math.Inf(1)
		case err != nil || math.IsNaN(r):
			return nil, fmt.Errorf("%q is neither a number of M nor infinity", word)
		case r < 0:
			return nil, fmt.Errorf("%s M is negative", word)
		case r > geodesic.MaxRadius:
			return nil, fmt.Errorf("beyond %g M say infinity", geodesic.MaxRadius)
		}
		radii = append(radii, r)
	}
	switch {
	case len(radii) == 0:
		return nil, errors.New("radii in M, as in 4, 10, infinity")
	case len(radii) > mostStations:
		return nil, fmt.Errorf("at most %d radii", mostStations)
	}
	return radii, nil
}

// StationsTable lists what static clocks and rulers show at each radius, and
// for each ordered pair.
func StationsTable(s scenes.Scene, radii []float64) Table {
	var t Table
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		t.section("Stations")
		t.say("none", err.Error())
		return t
	}
	for _, r := range radii {
		at := object.Station(r)
		t.section("At " + place(r))
		if metres, ok := s.MetresPerM(); ok && !math.IsInf(r, 0) {
			const metresPerKm = 1000
			t.number("r", r*metres/metresPerKm, "km")
		}
		t.number("clock rate", at.ClockRate, "")
		t.number("ruler stretch", at.RulerStretch, "")
		t.number("orbit speed", at.OrbitSpeed, "c")
		t.number("infall speed", at.InfallSpeed, "c")
		t.angle("escape cone", at.EscapeCone)
		if at.EscapeMirrored {
			t.say("", "and its mirror image")
		}
		t.angle("shadow static", at.ShadowStatic)
		t.angle("shadow orbit", at.ShadowOrbit)
		t.angle("  centre", at.ShadowCentre)
		t.angle("shadow infall", at.ShadowInfall)
	}
	seconds, _ := s.SecondsPerM()
	metres, scaled := s.MetresPerM()
	for i, from := range radii {
		for j, to := range radii {
			if i == j {
				continue
			}
			p := object.Pair(from, to, geodesic.Static, geodesic.Static)
			t.section("From " + place(from) + " to " + place(to))
			t.number("frequency ratio", p.FrequencyRatio, "")
			t.number("proper distance", p.ProperDistance, "M")
			t.number("excess radius", p.ExcessRadius, "M")
			t.number("light time", p.LightTime, "M")
			if scaled {
				t.number("", p.ProperDistance*metres/1000, "km")
				t.number("", p.LightTime*seconds, "s")
			}
		}
	}
	t.Remark = "Closed forms, good to 12 digits; radial light between static stations. The shadow is the dark disk of a hole or of an opaque star."
	return t
}

// place writes a radius as a heading does.
func place(r float64) string {
	if math.IsInf(r, 1) {
		return "infinity"
	}
	return strconv.FormatFloat(r, 'g', -1, 64) + " M"
}
