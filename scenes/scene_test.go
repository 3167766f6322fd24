package scenes

import (
	"bytes"
	"math"
	"strings"
	"testing"
)

// near fails when got is not within tol of want; NaN fails.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

// Gravitational radii as angles: GM/(c² D) computed from IAU 2015 Resolutions
// B2 and B3. Masses and distances: EHT 2019, ApJL 875, L1 and L6; GRAVITY
// 2022, A&A 657, L12; Do et al. 2019.
var angularScales = []struct {
	mass, distance string
	thetaG         float64 // uas, to the digits given
}{
	{"6.5e9 Msun", "16.8 Mpc", 3.8189933},
	{"4.297e6 Msun", "8277 pc", 5.1243315},
	{"3.975e6 Msun", "7.959 kpc", 4.9297335},
}

func TestThetaG(t *testing.T) {
	for _, c := range angularScales {
		d := parse(t, "schema = 1\n[object]\nmass = \""+c.mass+"\"\ndistance = \""+c.distance+"\"\n")
		got, ok := d.Scene().ThetaG()
		if !ok {
			t.Errorf("%s at %s has no theta_g", c.mass, c.distance)
		}
		near(t, c.mass+" theta_g", got, c.thetaG, 0.5e-7)
	}
}

func TestScaleOfOneSun(t *testing.T) {
	s := parse(t, "schema = 1\n[object]\nmass = 1\n").Scene()
	metres, ok := s.MetresPerM()
	seconds, ok2 := s.SecondsPerM()
	if !ok || !ok2 {
		t.Error("a mass gives no scale")
	}
	// GMsun/c² and GMsun/c³, computed from IAU 2015 Resolution B3 and the SI.
	near(t, "metres", metres, 1476.62503805012, 1e-11)
	near(t, "seconds", seconds, 4.92549094764127e-6, 1e-20)
	if _, ok := s.ThetaG(); ok {
		t.Error("theta_g without a distance")
	}
	if _, ok := (Scene{}).MetresPerM(); ok {
		t.Error("metres without a mass")
	}
	if _, ok := (Scene{}).SecondsPerM(); ok {
		t.Error("seconds without a mass")
	}
}

func TestUnits(t *testing.T) {
	const scaled = "[object]\nmass = 1\ndistance = \"1 pc\"\n"
	mPerAngle := 1476.62503805012 / 3.0856775814913673e16 * 180 / math.Pi * 3600e6 // uas in one M; pc: IAU 2015 B2
	outer := func(s Scene) float64 { return s.Emitters[0].Outer }
	frequency := func(s Scene) float64 { return s.Field.Frequency[0] }
	for _, c := range []struct {
		text string
		get  func(Scene) float64
		want float64
	}{
		{"[[emitter]]\nouter = 30", outer, 30},
		{"[[emitter]]\nouter = \"30M\"", outer, 30},
		{"[[emitter]]\nouter = \"+3.0E1 rg\"", outer, 30},
		{"[[emitter]]\nouter = \"15 rs\"", outer, 30},
		{"[[emitter]]\nouter = 0x1F", outer, 31},
		{"[[emitter]]\nouter = 1_000.5", outer, 1000.5},
		{scaled + "[[emitter]]\nouter = \"14.7662503805012 km\"", outer, 10},
		{scaled + "[[emitter]]\nouter = \"4.92549094764127e-5 s\"", outer, 10},
		{scaled + "[[emitter]]\nouter = \"0.1 µas\"", outer, 0.1 / mPerAngle},
		{scaled + "[[emitter]]\nouter = \"0.0001 mas\"", outer, 0.1 / mPerAngle},
		{"[object]\ntheta_g = \"2 μas\"\n[[emitter]]\nouter = \"40 uas\"", outer, 20},
		{"[observer]\ninclination = \"0.5 rad\"", func(s Scene) float64 { return s.Observer.Inclination }, 90 / math.Pi},
		{"[object]\ndistance = 8.2", func(s Scene) float64 { return s.Object.Distance.Value }, 8200},
		{"[object]\ndistance = \"14 ± 2 Mpc\"", func(s Scene) float64 { return s.Object.Distance.Sigma }, 2e6},
		{"[object]\nmass = \"4.1e6+-0.1e6Msun\"", func(s Scene) float64 { return s.Object.Mass.Sigma }, 1e5},
		{"[field]\nfrequency = 230", frequency, 230e9},
		{"[field]\nfrequency = [\"1 THz\", \"1 MHz\"]", frequency, 1e12},
		{"[field]\nfrequency = \"1eV\"", frequency, 2.417989242084e14}, // CODATA 2018, e/h
		{"[field]\nfrequency = \"6.4 keV\"", frequency, 6400 * 2.417989242084e14},
		{"[observer]\nradius = 9\n[field]\nprojection = \"perspective\"\nwidth = 40", func(s Scene) float64 { return s.Field.Width }, 40},
		{"[observer]\nradius = 9\n[field]\nprojection = \"perspective\"\nwidth = \"36 mas\"", func(s Scene) float64 { return s.Field.Width }, 1e-5},
		{"[object]\ntheta_g = 2\n[field]\nwidth = \"150 uas\"", func(s Scene) float64 { return s.Field.Width }, 75},
		{"[object]\ntheta_g = 2\n[telescope]\nbeam = [\"1 mas\", 20, \"1 rad\"]", func(s Scene) float64 { return s.Telescope.Beam[2] }, 180 / math.Pi},
	} {
		near(t, c.text, c.get(parse(t, top+c.text).Scene()), c.want, 1e-12*c.want)
	}
}

// TestDefaults pins what an almost empty file means.
func TestDefaults(t *testing.T) {
	s := parse(t, "schema = 1\n[[emitter]]\n").Scene()
	want := Scene{
		Object:   Object{Kind: "black-hole"},
		Observer: Observer{Radius: math.Inf(1), Inclination: 60, Motion: "static"},
		Field:    Field{Projection: "parallel", AutoWidth: true, Pixels: [2]int{800, 800}},
		Emitters: []Emitter{{Kind: "disk", Inner: Rim{"isco", 6}, Outer: 20, Gas: "circular", Profile: "power", Index: []float64{3}, Light: "bolometric", EmissionAngle: "isotropic"}},
		Trace:    Trace{Tolerance: 1e-9, MaxOrder: 2, FluxTolerance: 1e-4},
	}
	if !s.Equal(want) {
		t.Errorf("defaults %+v, want %+v", s, want)
	}
	if notes := s.Notes(); notes != nil {
		t.Errorf("notes %q", notes)
	}
	if notes := parse(t, "schema = 1").Scene().Notes(); len(notes) != 1 {
		t.Errorf("an empty image gives notes %q", notes)
	}
}

func TestFormatComesBack(t *testing.T) {
	for _, text := range []string{
		"",
		"title = \"tab\\t, quote \\\", slash \\\\, µ, \\u0000 \\u007f\"",
		"[object]\nmass = \"4.1e6 +- 0.1e6 Msun\"\ndistance = \"8178.3 +- 13.1 pc\"\n[measured]\nring_diameter = \"51.8 ± 2.3 µas\"\nestimator = \"ridge\"",
		"[object]\ntheta_g = 3\n[telescope]\nuv = \"uv.csv\"\nresolution = \"5 eV\"",
		"[object]\ntheta_g = \"3.8 +- 0.4 uas\"\n[telescope]\nbeam = [0.3e2, \"20.1 uas\", \"0.1 rad\"]",
		"[observer]\nradius = 3.0000000000000004\ninclination = \"1 rad\"\nazimuth = -0.1\n[field]\nwidth = 0.1\ncenter = [1e-300, -7]\npixels = [3, 1]",
		"[observer]\nradius = 2.5\n[field]\nprojection = \"perspective\"\nwidth = \"0.3 rad\"\ncenter = [\"1 uas\", 3]",
		"[field]\nfrequency = [\"6.4 keV\", 230, \"1 Hz\", 1e-300]",
		"[[emitter]]\ninner = 2.1\nouter = \"1e300 M\"\nsense = \"clockwise\"\nindex = -0.1\n[[emitter]]\nlight = \"monochromatic\"\nspectral_index = -0.7\noptical_depth = \"thick\"",
		"[trace]\neffects = []",
		"[trace]\neffects = [\"motion\", \"bending\"]\n[[emitter]]\nindex = [3.5, -1, 2]\nbreaks = [7, \"1e3 M\"]\nlight = \"line\"\nrest = \"6.4 keV\"\noptical_depth = 0.25\n[[emitter]]\nprofile = \"table\"\ntable = \"a \\\"b\\\".csv\"",
		"[object]\nmass = 10\ndistance = 3\nredshift = 0.1\n[field]\nfrequency = \"2 keV\"\n[[emitter]]\nprofile = \"novikov-thorne\"\nluminosity = \"1e38 erg/s\"\nlight = \"blackbody\"\ncolour_correction = 1.7\n[[emitter]]\nlight = \"blackbody\"\ntemperature = \"1 keV\"\n[[emitter]]\nprofile = \"novikov-thorne\"\naccretion_rate = \"0.3 Edd\"\nlight = \"blackbody\"\n[[emitter]]\nlight = \"monochromatic\"\ntotal_flux = \"3 mJy\"",
		"[[emitter]]\nsense = \"clockwise\"\n[[emitter]]\nkind = \"spot\"\nradius = 8.1\nazimuth = -0.1\nsize = 0.3\ncontrast = 2\n[time]\nstart = \"-0.1 orbit\"\nend = \"1 orbit\"\nstep = \"0.01 orbit\"",
		"[object]\nmass = 10\nredshift = 0.3\n[[emitter]]\nkind = \"spot\"\nradius = 8.1\nlight = \"line\"\nsense = \"clockwise\"\n[time]\nend = \"3 s\"\nstep = \"1e-3 s\"",
		"[trace]\ntolerance = 1e-13\nmax_order = 0\nflux_tolerance = 0.01",
		"[object]\ncharge = \"0.1 rs\"\n[[emitter]]\ninner = \"isco\"\nemission_angle = \"brightened\"\n[[emitter]]\ninner = \"horizon\"",
		"[object]\nkind = \"star\"\nradius = \"12.3 km\"\nmass = \"1.4 +- 0.1 Msun\"\ninterior = \"uniform\"\n[[emitter]]\ngas = \"static\"\ninner = 6",
		"[object]\nkind = \"star\"\nradius = 2.2500000000000004\n[[emitter]]\nkind = \"surface\"\nperiod = \"250.3 M\"\nemission_angle = \"darkened\"\nlight = \"monochromatic\"\nspectral_index = -1",
		"[object]\nkind = \"star\"\nradius = 6\nmass = 1.4\n[[emitter]]\nkind = \"surface\"\ntemperature = \"0.1 keV\"\nperiod = 0.3\ncaps = [{colatitude = \"1 rad\", azimuth = -0.1, size = 90, temperature = \"0.3 keV\"}, {colatitude = 0, size = 1e-300, temperature = 1e300}]",
		"[object]\nkind = \"shell\"\nradius = 2.5\n[observer]\nradius = 0\n[field]\nprojection = \"all-sky\"\nwidth = 360\ncenter = [\"0 deg\", 0]\n[[emitter]]\nkind = \"sky\"\npattern = \"stars\"\nseed = 9007199254740991",
		"[[emitter]]\nkind = \"sky\"\nimage = \"a \\\"b\\\" µ.png\"\nlight = \"monochromatic\"\nspectral_index = 1\n[[emitter]]",
		"[observer]\nradius = 1e-300\nmotion = \"infall\"\n[field]\nprojection = \"perspective\"",
		"[observer]\nradius = \"3.0000000000000004 M\"\nmotion = \"orbit\"\n[field]\nprojection = \"all-sky\"",
	} {
		first := parse(t, top+text)
		formatted := Format(first.Scene())
		again := parse(t, string(formatted))
		if !again.Scene().Equal(first.Scene()) {
			t.Errorf("%q does not come back from\n%s", text, formatted)
		}
		if !bytes.Equal(Format(again.Scene()), formatted) {
			t.Errorf("%q is formatted in two ways", text)
		}
	}
}

func TestSceneIsACopy(t *testing.T) {
	d := parse(t, "schema = 1\n[field]\nfrequency = 230\n[[emitter]]\n")
	s := d.Scene()
	s.Emitters[0].Outer, s.Field.Frequency[0] = 1, 1
	d.Text()[0] = 'x'
	if d.Scene().Equal(s) || d.Text()[0] != 's' {
		t.Error("the document has been changed from outside")
	}
}

// TestKeyTable holds the table against what its own fields promise.
func TestKeyTable(t *testing.T) {
	seen := map[string]bool{}
	for _, k := range Keys() {
		if seen[k.Path()] || k.Text == "" {
			t.Errorf("%s is there twice or without text", k.Path())
		}
		seen[k.Path()] = true
		if _, ok := findSection(k.Section); !ok {
			t.Errorf("%s has no section", k.Path())
		}
		for _, name := range k.Units {
			if u, ok := findUnit(name); !ok || u.name != name {
				t.Errorf("%s accepts the unknown unit %s", k.Path(), name)
			}
		}
		if _, ok := findUnit(k.Unit); !ok && k.Unit != "" {
			t.Errorf("%s has the unknown unit %s", k.Path(), k.Unit)
		}
	}
	if len(seen) != len(keyTable) || len(seen) < 50 {
		t.Errorf("%d keys", len(seen))
	}
}

func TestFormatKeysNamesEveryKey(t *testing.T) {
	var b strings.Builder
	if err := FormatKeys(&b); err != nil {
		t.Fatal(err)
	}
	for _, k := range keyTable {
		if !strings.Contains(b.String(), "\n  "+k.Name+" ") {
			t.Errorf("the reference lacks %s", k.Path())
		}
	}
}

// Keys that mean nothing with the others are ignored, and notes say so.
func TestIdleKeys(t *testing.T) {
	s := parse(t, top+`[[emitter]]
profile = "novikov-thorne"
index = [1, 2]
rest = "6.4 keV"
table = "x.csv"
total_flux = 3
colour_correction = 2
`).Scene()
	notes := strings.Join(s.Notes(), "\n")
	for _, key := range []string{"index", "rest", "table", "total_flux", "colour_correction"} {
		if !strings.Contains(notes, "emitter."+key+" means nothing") {
			t.Errorf("nothing said about %s:\n%s", key, notes)
		}
	}
	e := s.Emitters[0]
	if len(s.Notes()) != 5 || e.Index != nil || e.Rest != 0 || e.Table != "" || e.TotalFlux != 0 || e.ColourCorrection != 0 {
		t.Errorf("%+v, notes\n%s", e, notes)
	}
}

// A cosmological redshift makes observed times longer: 3 s at z = 0.5 are 2 s
// there.
func TestRedshiftedTimes(t *testing.T) {
	s := parse(t, top+"[object]\nmass = 10\nredshift = 0.5\n[time]\nend = \"3 s\"\nstep = \"1 s\"").Scene()
	const perM = 10 * 4.92549094764127e-6 // GM/c³, s
	near(t, "end", s.Time.End, 2/perM, 1e-9/perM)
	if frames := s.Time.Frames(); len(frames) != 4 || frames[3] != s.Time.Start+3*s.Time.Step {
		t.Errorf("frames %v", frames)
	}
	seconds, _ := s.ObservedSecondsPerM()
	near(t, "M", seconds, 1.5*perM, 1e-15)
}
