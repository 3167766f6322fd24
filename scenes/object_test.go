package scenes

import (
	"math"
	"strings"
	"testing"
)

// chargedHoles, in M. Q = 0 is Schwarzschild, Q = 1 the extreme hole: from
// memory, Chandrasekhar, The Mathematical Theory of Black Holes (1983),
// section 40. At Q = 0.6 the horizon is 1 + 0.8 and the photon sphere
// (3 + √6.12)/2, to the digits given; NaN: not compared.
var chargedHoles = []struct{ charge, horizon, photonSphere, isco float64 }{
	{0, 2, 3, 6},
	{0.6, 1.8, 2.736932, math.NaN()},
	{1, 1, 2, 4},
}

func TestRadiiOfHoles(t *testing.T) {
	for _, c := range chargedHoles {
		o := Object{Kind: blackHole, Charge: c.charge}
		near(t, "horizon", o.Horizon(), c.horizon, 1e-15)
		near(t, "photon sphere", o.PhotonSphere(), c.photonSphere, 5e-7)
		if !math.IsNaN(c.isco) {
			near(t, "isco", o.ISCO(), c.isco, 1e-14)
		}
	}
	if isco := (Object{Kind: blackHole}).ISCO(); isco != 6 {
		t.Errorf("isco %v of an uncharged hole is not exact", isco)
	}
	for _, o := range []Object{{Kind: star, Radius: 4}, {Kind: shell, Radius: 9}} {
		if o.Horizon() != 0 || o.ISCO() != max(6, o.Radius) {
			t.Errorf("%+v: horizon %v, isco %v", o, o.Horizon(), o.ISCO())
		}
	}
}

// TestStableOrbitIsLeastBound: at the innermost stable orbit the energy of
// circular motion, E = A/√(1 - 3/r + 2Q²/r²) with A = 1 - 2/r + Q²/r², is
// least.
func TestStableOrbitIsLeastBound(t *testing.T) {
	for q := 0.0; q <= 1; q += 0.0625 {
		energy := func(r float64) float64 {
			return (1 - 2/r + q*q/(r*r)) / math.Sqrt(1-3/r+2*q*q/(r*r))
		}
		r := stableOrbit(q)
		const h = 1e-3
		slope := (energy(r+h) - energy(r-h)) / (2 * h)
		near(t, "dE/dr", slope, 0, 1e-8) // far from it: 1e-3 per M²
		if energy(r) >= energy(r+0.1) || energy(r) >= energy(r-0.1) {
			t.Errorf("Q = %v: the energy is not least at %v M", q, r)
		}
	}
}

// TestAccepted holds scenes of all objects and observers against their meaning.
func TestAccepted(t *testing.T) {
	emitter := func(s Scene) Emitter { return s.Emitters[len(s.Emitters)-1] }
	for _, c := range []struct {
		name, text string
		holds      func(Scene) bool
	}{
		{"km before the mass", "[object]\nkind = \"star\"\nradius = \"14.7662503805012 km\"\nmass = 1", func(s Scene) bool { return math.Abs(s.Object.Radius-10) < 1e-12 && s.Object.Interior == "opaque" }},
		{"charge in km", "[object]\ncharge = \"0.738312519025060 km\"\nmass = 1", func(s Scene) bool { return math.Abs(s.Object.Charge-0.5) < 1e-12 }},
		{"no charge", "[object]\ncharge = 0", func(s Scene) bool { return s.Object == Object{Kind: blackHole} }},
		{"shell", thinShell, func(s Scene) bool { return s.Object == Object{Kind: shell, Radius: 4} }},
		{"uniform", uniformStar, func(s Scene) bool { return s.Object.Interior == "uniform" }},
		{"centre of a shell", thinShell + "[observer]\nradius = 0\n" + view, func(s Scene) bool { return s.Observer.Radius == 0 }},
		{"outside a shell", thinShell + "[observer]\nradius = 4.1", func(s Scene) bool { return s.Observer.Radius == 4.1 }},
		{"static below 2 M", charged + "[observer]\nradius = 1.9\n" + view, func(s Scene) bool { return s.Observer.Radius == 1.9 }},
		{"fall in a hole", "[observer]\nmotion = \"infall\"\nradius = 0.5\n" + view, func(s Scene) bool { return s.Observer.Motion == "infall" }},
		{"fall at a horizon", "[observer]\nmotion = \"infall\"\nradius = 2\n" + wholeSky, func(s Scene) bool { return s.Field.Projection == "all-sky" && s.Field.AutoWidth }},
		{"fall to a charged hole", charged + "[observer]\nmotion = \"infall\"\nradius = 1.9\n" + view, func(s Scene) bool { return s.Observer.Radius == 1.9 }},
		{"orbit", charged + "[observer]\nmotion = \"orbit\"\nradius = 2.8\n" + view, func(s Scene) bool { return s.Observer.Motion == "orbit" }},
		{"whole sky", "[observer]\nradius = 9\n" + wholeSky + "width = \"360 deg\"\npixels = [3, 7]", func(s Scene) bool { return s.Field.Width == 360 && !s.Field.AutoWidth }},
		{"isco of a charged hole", charged + "[[emitter]]", func(s Scene) bool { r := emitter(s).Inner.Radius; return r > 5 && r < 5.5 && r == s.Object.ISCO() }},
		{"horizon of a charged hole", charged + "[[emitter]]\ninner = \"horizon\"", func(s Scene) bool { return emitter(s).Inner == Rim{"horizon", 1.8} }},
		{"rim of a charged hole", charged + "[[emitter]]\ninner = 1.9\ngas = \"static\"", func(s Scene) bool { return emitter(s).Gas == "static" }},
		{"isco of a star", opaqueStar + "[[emitter]]", func(s Scene) bool { return emitter(s).Inner == Rim{"isco", 6} }},
		{"isco of a large star", largeStar + "[[emitter]]\ninner = \"isco\"", func(s Scene) bool { return emitter(s).Inner == Rim{"isco", 10} }},
		{"static on a star", opaqueStar + "[[emitter]]\ninner = 4\ngas = \"static\"", func(s Scene) bool { return emitter(s).Inner.Radius == 4 }},
		{"static in a shell", thinShell + "[[emitter]]\ninner = 1\nouter = 3\ngas = \"static\"", func(s Scene) bool { return emitter(s).Outer == 3 }},
		{"static through a shell", thinShell + "[[emitter]]\ninner = 1\nouter = 9\ngas = \"static\"", func(s Scene) bool { return emitter(s).Outer == 9 }},
		{"circles around a shell", thinShell + "[[emitter]]\ninner = 6\nouter = 9", func(s Scene) bool { return emitter(s).Inner.Radius == 6 }},
		{"emission angle", "[[emitter]]\nemission_angle = \"darkened\"", func(s Scene) bool { return emitter(s).EmissionAngle == "darkened" }},
		{"sky", skyEmitter, func(s Scene) bool {
			return s.Equal(Scene{Object: s.Object, Observer: s.Observer, Field: s.Field, Trace: s.Trace,
				Emitters: []Emitter{{Kind: "sky", Light: "bolometric", Pattern: "grid", Seed: 1}}})
		}},
		{"image", skyEmitter + "image = \"../a/sky.png\"\nseed = 0", func(s Scene) bool {
			e := emitter(s)
			return e.Image == "../a/sky.png" && e.Pattern == "" && e.Seed == 0
		}},
		{"stars", skyEmitter + "pattern = \"stars\"\nseed = 9007199254740991", func(s Scene) bool { return emitter(s).Seed == 1<<53-1 }},
		{"plain surface", lit, func(s Scene) bool {
			return s.Equal(Scene{Object: s.Object, Observer: s.Observer, Field: s.Field, Trace: s.Trace,
				Emitters: []Emitter{{Kind: "surface", Light: "bolometric", EmissionAngle: "isotropic"}}})
		}},
		{"temperature", lit + "temperature = \"1 keV\"", func(s Scene) bool {
			return math.Abs(emitter(s).Temperature-1.160451812e7) < 0.01 // CODATA 2018: 1 eV is 1.160451812e4 K
		}},
		{"caps in keV", lit + "caps = [{temperature = \"1 eV\", colatitude = \"0.5 rad\", size = 90}]", func(s Scene) bool {
			c := emitter(s).Caps[0]
			return math.Abs(c.Temperature-1.160451812e4) < 1e-5 && math.Abs(c.Colatitude-90/math.Pi) < 1e-12 && c.Azimuth == 0 && c.Size == 90
		}},
		{"no caps", lit + "caps = []", func(s Scene) bool { return emitter(s).Caps == nil }},
		{"slow", lit + "period = \"119 M\"", func(s Scene) bool { return emitter(s).Period == 119 }},
		{"seconds", "[object]\nkind = \"star\"\nradius = 6\nmass = 1\n[[emitter]]\nkind = \"surface\"\nperiod = 0.3", func(s Scene) bool { return math.Abs(emitter(s).Period/(0.3/4.92549094764127e-6)-1) < 1e-12 }},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := parse(t, top+c.text).Scene()
			if !c.holds(s) {
				t.Errorf("scene %+v", s)
			}
			if again := parse(t, string(Format(s))).Scene(); !again.Equal(s) {
				t.Errorf("does not come back from\n%s", Format(s))
			}
		})
	}
}

func TestNotes(t *testing.T) {
	const size = "\n[object]\nkind = \"star\"\ninterior = \"uniform\"\nradius = "
	const shellOf = "\n[object]\nkind = \"shell\"\nradius = "
	const orbit = skyEmitter + view + "[observer]\nmotion = \"orbit\"\nradius = "
	for _, c := range []struct {
		text string
		says string // "" for no note
	}{
		{skyEmitter + size + "2.66", "dominant energy"},
		{skyEmitter + size + "2.67", ""},
		{skyEmitter + "[object]\nkind = \"star\"\nradius = 2.3", ""},
		{skyEmitter + shellOf + "2.08", "dominant energy"},
		{skyEmitter + shellOf + "2.09", ""},
		{orbit + "5.9", "unstable, as all below 6 M"},
		{orbit + "6", ""},
		{orbit + "5.43\n[object]\ncharge = 0.6", ""},
		{orbit + "5.41\n[object]\ncharge = 0.6", "unstable"},
		{"", "no emitter"},
	} {
		notes := parse(t, top+c.text).Scene().Notes()
		is := len(notes) == 1 && strings.Contains(notes[0], c.says)
		if c.says == "" {
			is = notes == nil
		}
		if !is {
			t.Errorf("%q: notes %q, want %q", c.text, notes, c.says)
		}
	}
}

func TestCapsAreACopy(t *testing.T) {
	d := parse(t, top+lit+"caps = [{colatitude = 3, size = 3, temperature = 9}]")
	s := d.Scene()
	s.Emitters[0].Caps[0].Size = 8
	if d.Scene().Equal(s) || d.Scene().Emitters[0].Caps[0].Size != 3 {
		t.Error("the document has been changed from outside")
	}
}

func TestBuiltInStars(t *testing.T) {
	d, err := Load("@two-caps")
	if err != nil {
		t.Fatal(err)
	}
	s := d.Scene()
	// Radius in units of GM/c²: u = 2M/R = 0.344545842211696, physics.md section 8.
	near(t, "2M/R", 2/s.Object.Radius, 0.344545842211696, 1e-12)
	caps := s.Emitters[0].Caps
	if len(caps) != 2 || caps[0].Colatitude+caps[1].Colatitude != 180 || math.Abs(caps[0].Azimuth-caps[1].Azimuth) != 180 {
		t.Errorf("caps %+v are not opposite each other", caps)
	}
	if d.Dir() != "." {
		t.Errorf("directory %q", d.Dir())
	}
}
