package verbs

import (
	"fmt"
	"io"
	"maps"
	"math"
	"slices"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// placing is what the flags of stations say.
type placing struct {
	radii                []string
	object, interior     string
	objectRadius, charge quantity
	mass                 quantity
	from, to             string
	set                  []string
	json                 bool
}

// objectFlags are those that a scene says instead.
var objectFlags = []string{"object", "object-radius", "interior", "charge", "mass"}

// motions are how a sender or receiver of light moves.
var motions = []string{"static", "orbit", "infall"}

func newStations(s streams) *cobra.Command {
	o := placing{
		objectRadius: quantity{name: "M", parse: parseLength},
		charge:       quantity{name: "M", parse: parseLength},
		mass:         quantity{name: "Msun", parse: parseMass},
	}
	cmd := &cobra.Command{
		Use:   "stations [SCENE]",
		Short: "clocks, rulers, speeds and shadows at given radii",
		Long: "Prints, from closed forms, what static clocks and rulers show at each radius:\n" +
			"clock rate, ruler stretch, the speeds of a circular orbit and of a fall from rest\n" +
			"at infinity in the static frame, the half angle of the cone in which light\n" +
			"escapes, and the angular radius of the dark disk that a static, an orbiting and\n" +
			"a falling observer sees (with the shift of its middle in an orbit, towards the\n" +
			"motion). For each ordered pair of radii: a frequency received at the second over\n" +
			"the one sent from the first by radial light, the proper distance, its excess over\n" +
			"the difference of the radii, and the coordinate time of light. What is impossible\n" +
			"is null. The object comes from a SCENE or from flags. Radii are circumferential,\n" +
			"in M; 0 is the centre.\n\n" +
			"The dark disk is the shadow of a hole and the disk of an opaque star; shells and\n" +
			"uniform stars let light and bodies through and have none. Where they are smaller\n" +
			"than 3 M, light within 3 M also escapes in the mirror image of its cone, straight\n" +
			"through the object (escape_cone_mirrored), and a belt between is trapped.",
		Example: "  " + programName() + " stations --radius 2.25,4,10,infinity\n" +
			"  " + programName() + " stations --object shell --object-radius 4 --radius 0,4,infinity --json\n" +
			"  " + programName() + " stations @first-light --radius 6,30 --from-motion orbit",
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) > 1 {
				return refuse("%s takes at most one SCENE, got %d arguments", cmd.CommandPath(), len(args))
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error { return stations(cmd, s, o, args) },
	}
	f := cmd.Flags()
	f.StringSliceVar(&o.radii, "radius", nil, "the stations, `R,R,...`, each 0 or more, or infinity; repeatable")
	f.StringVar(&o.object, "object", "black-hole", "what is at the centre: black-hole, star, shell")
	f.Var(&o.objectRadius, "object-radius", "radius of a star (above 9/4 M) or shell (above 2 M)")
	f.StringVar(&o.interior, "interior", "", "interior of a star: opaque (the default) or uniform")
	f.Var(&o.charge, "charge", "charge |Q| of a black hole, below 1 M")
	f.Var(&o.mass, "mass", "mass, as in \"10 Msun\"; adds km and s")
	f.StringVar(&o.from, "from-motion", "static", "how the sender of each pair's light moves: "+strings.Join(motions, ", "))
	f.StringVar(&o.to, "to-motion", "static", "how the receiver moves, likewise")
	addSet(f, &o.set)
	f.BoolVar(&o.json, "json", false, "print one JSON document on stdout")
	return cmd
}

// parseLength reads a finite number of M.
func parseLength(text string) (float64, error) {
	return parseFinite(strings.TrimSuffix(strings.TrimSpace(text), "M"))
}

// parseMass reads a mass in solar masses.
func parseMass(text string) (float64, error) {
	m, err := parseFinite(strings.TrimSuffix(strings.TrimSpace(text), "Msun"))
	if err != nil {
		return 0, fmt.Errorf("%q is not a number of Msun", text)
	}
	if m <= 0 {
		return 0, fmt.Errorf("%s Msun is not above 0", number(m).csv())
	}
	return m, nil
}

// parseStation reads the radius of a station, in M.
func parseStation(text string) (float64, error) {
	if t := strings.TrimSpace(text); t == "infinity" || t == "inf" {
		return math.Inf(1), nil
	}
	r, err := parseLength(text)
	switch {
	case err != nil:
		return 0, fmt.Errorf("%q is neither a number of M nor infinity", text)
	case r < 0:
		return 0, fmt.Errorf("%s M is negative; allowed: 0 or more, or infinity", number(r).csv())
	case r > geodesic.MaxRadius:
		return 0, fmt.Errorf("%s M is too far; beyond %g M say infinity", number(r).csv(), geodesic.MaxRadius)
	}
	return r + 0, nil // no -0
}

// parseMotion reads a motion.
func parseMotion(flag, text string) (geodesic.Motion, error) {
	switch text {
	case "static":
		return geodesic.Static, nil
	case "orbit":
		return geodesic.Orbit, nil
	case "infall":
		return geodesic.Infall, nil
	}
	return 0, refuse("--%s %q: allowed: %s", flag, text, strings.Join(motions, ", "))
}

// flaggedObject is the object that the flags describe.
func flaggedObject(o placing) (scenes.Object, error) {
	object := scenes.Object{Kind: o.object, Mass: scenes.Measure{Value: o.mass.value, Given: o.mass.given}}
	if o.interior != "" && o.object != "star" {
		return object, refuse("--interior %s: only a star has a choice of one", o.interior)
	}
	if o.charge.given && o.charge.value != 0 && o.object != "black-hole" {
		return object, refuse("--charge: only a black hole may have one")
	}
	switch o.object {
	case "black-hole":
		object.Charge = o.charge.value
		// A hole has no such radius, but 0 and 2 M do no harm.
		if r := o.objectRadius.value; r != 0 && (r != 2 || object.Charge != 0) {
			return object, refuse("--object-radius: a black hole has no object radius, got %s M", number(r).csv())
		}
		return object, nil
	case "star":
		object.Interior = "opaque"
		switch o.interior {
		case "", "opaque":
		case "uniform":
			object.Interior = o.interior
		default:
			return object, refuse("--interior %q: allowed: opaque, uniform", o.interior)
		}
	case "shell":
	default:
		return object, refuse("--object %q: allowed: black-hole, star, shell", o.object)
	}
	if !o.objectRadius.given {
		return object, refuse("a %s needs --object-radius", o.object)
	}
	object.Radius = o.objectRadius.value
	return object, nil
}

// spacetimeOf returns an object's spacetime.
func spacetimeOf(o scenes.Object) (*geodesic.Round, error) { return raytrace.NewObject(o) }

// stationRow is one station as it is printed.
type stationRow struct {
	R              number `json:"r"`
	ClockRate      number `json:"clock_rate"`
	RulerStretch   number `json:"ruler_stretch"`
	OrbitSpeed     number `json:"orbit_speed"`
	InfallSpeed    number `json:"infall_speed"`
	EscapeConeDeg  number `json:"escape_cone_deg"`
	EscapeMirrored bool   `json:"escape_cone_mirrored"`
	EscapeFraction number `json:"escape_fraction"`
	ShadowRadius   struct {
		Static number `json:"static"`
		Orbit  number `json:"orbit"`
		Infall number `json:"infall"`
	} `json:"shadow_radius_deg"`
	ShadowCentreDeg number `json:"shadow_centre_deg"`

	RKm *number `json:"r_km,omitempty"`
}

// pairRow is one ordered pair as it is printed.
type pairRow struct {
	FromR          number `json:"from_r"`
	ToR            number `json:"to_r"`
	FrequencyRatio number `json:"frequency_ratio"`
	FrequencyShift number `json:"frequency_shift"`
	ProperDistance number `json:"proper_distance"`
	ExcessRadius   number `json:"excess_radius"`
	LightTime      number `json:"light_time"`

	ProperDistanceKm *number `json:"proper_distance_km,omitempty"`
	ExcessRadiusKm   *number `json:"excess_radius_km,omitempty"`
	LightTimeS       *number `json:"light_time_s,omitempty"`
}

// stationsReport is the JSON of stations.
type stationsReport struct {
	Units        map[string]string `json:"units"`
	Object       string            `json:"object"`
	ObjectRadius number            `json:"object_radius"`
	Interior     *string           `json:"interior"`
	Charge       number            `json:"charge"`
	MassMsun     number            `json:"mass_msun"`
	FromMotion   string            `json:"from_motion"`
	ToMotion     string            `json:"to_motion"`
	Stations     []stationRow      `json:"stations"`
	Pairs        []pairRow         `json:"pairs"`
	NotIncluded  []string          `json:"not_included"`
}

var stationUnits = map[string]string{
	"object_radius": "M", "charge": "M", "mass_msun": "Msun",
	"r": "M", "clock_rate": "1", "ruler_stretch": "1", "orbit_speed": "c", "infall_speed": "c",
	"escape_cone_deg": "deg", "escape_fraction": "1", "shadow_radius_deg": "deg", "shadow_centre_deg": "deg",
	"from_r": "M", "to_r": "M", "frequency_ratio": "1", "frequency_shift": "1",
	"proper_distance": "M", "excess_radius": "M", "light_time": "M",
}

// physicalUnits are those of the fields that a known mass adds.
var physicalUnits = map[string]string{
	"r_km": "km", "proper_distance_km": "km", "excess_radius_km": "km", "light_time_s": "s",
}

// mostStations bounds the pairs, its square. Taste: far more than a table
// that anybody reads.
const mostStations = 200

func stations(cmd *cobra.Command, s streams, o placing, args []string) error {
	if len(o.radii) == 0 {
		return refuse("stations needs --radius, as in --radius 4,10,infinity")
	}
	if len(o.radii) > mostStations {
		return refuse("--radius: %d stations are too many; allowed: up to %d", len(o.radii), mostStations)
	}
	radii := make([]float64, len(o.radii))
	for k, text := range o.radii {
		var err error
		if radii[k], err = parseStation(text); err != nil {
			return refuse("--radius: %w", err)
		}
	}
	sender, err := parseMotion("from-motion", o.from)
	if err != nil {
		return err
	}
	receiver, err := parseMotion("to-motion", o.to)
	if err != nil {
		return err
	}

	var object scenes.Object
	if len(args) == 1 {
		for _, flag := range objectFlags {
			if cmd.Flags().Changed(flag) {
				return refuse("--%s and a SCENE exclude each other: the scene says it (--set overrides its keys)", flag)
			}
		}
		document, err := s.loadScene(args[0], o.set)
		if err != nil {
			return err
		}
		object = document.Scene().Object
	} else {
		if len(o.set) > 0 {
			return refuse("--set overrides keys of a SCENE, and there is none")
		}
		if object, err = flaggedObject(o); err != nil {
			return err
		}
	}
	spacetime, err := spacetimeOf(object)
	if err != nil {
		return refuse("%s", strings.TrimPrefix(err.Error(), "geodesic: "))
	}
	// What is strange about the object itself, not about a picture of it.
	alone := scenes.Scene{Object: object, Emitters: make([]scenes.Emitter, 1)}
	for _, n := range alone.Notes() {
		s.note("%s", n)
	}
	report := newStationsReport(alone, spacetime, radii, sender, receiver)
	if o.json {
		return writeJSON(s.out, report)
	}
	defer s.note("%s", notIncludedLine)
	return stationTables(s.out, report)
}

// newStationsReport computes all that is printed.
func newStationsReport(scene scenes.Scene, spacetime *geodesic.Round, radii []float64, sender, receiver geodesic.Motion) stationsReport {
	object := scene.Object
	report := stationsReport{
		Units: maps.Clone(stationUnits), Object: object.Kind,
		ObjectRadius: number(math.NaN()), Charge: number(math.NaN()), MassMsun: number(math.NaN()),
		FromMotion: motions[sender], ToMotion: motions[receiver],
		Pairs: []pairRow{}, NotIncluded: notIncluded,
	}
	switch object.Kind {
	case "black-hole":
		report.Charge = number(object.Charge)
	case "star":
		report.Interior = &object.Interior
		fallthrough
	default:
		report.ObjectRadius = number(object.Radius)
	}
	metres, known := scene.MetresPerM()
	seconds, _ := scene.SecondsPerM()
	if known {
		report.MassMsun = number(object.Mass.Value)
		maps.Copy(report.Units, physicalUnits)
	}
	physical := func(x, factor float64) *number {
		if !known {
			return nil
		}
		y := number(x * factor)
		return &y
	}
	const deg = 180 / math.Pi
	const perKm = 1e-3
	for _, r := range radii {
		at := spacetime.Station(r)
		row := stationRow{
			R: number(r), ClockRate: number(at.ClockRate), RulerStretch: number(at.RulerStretch),
			OrbitSpeed: number(at.OrbitSpeed), InfallSpeed: number(at.InfallSpeed),
			EscapeConeDeg: number(at.EscapeCone * deg), EscapeMirrored: at.EscapeMirrored,
			EscapeFraction: number(at.EscapeFraction), ShadowCentreDeg: number(at.ShadowCentre * deg),
			RKm: physical(r, metres*perKm),
		}
		row.ShadowRadius.Static = number(at.ShadowStatic * deg)
		row.ShadowRadius.Orbit = number(at.ShadowOrbit * deg)
		row.ShadowRadius.Infall = number(at.ShadowInfall * deg)
		report.Stations = append(report.Stations, row)
	}
	for i, from := range radii {
		for k, to := range radii {
			if i == k {
				continue
			}
			p := spacetime.Pair(from, to, sender, receiver)
			report.Pairs = append(report.Pairs, pairRow{
				FromR: number(from), ToR: number(to),
				FrequencyRatio: number(p.FrequencyRatio), FrequencyShift: number(p.FrequencyShift),
				ProperDistance: number(p.ProperDistance), ExcessRadius: number(p.ExcessRadius), LightTime: number(p.LightTime),
				ProperDistanceKm: physical(p.ProperDistance, metres*perKm),
				ExcessRadiusKm:   physical(p.ExcessRadius, metres*perKm),
				LightTimeS:       physical(p.LightTime, seconds),
			})
		}
	}
	return report
}

// closedFormDigits is the relative accuracy that the tests of package
// geodesic hold stations to.
const closedFormDigits = 1e-12

// stationTables prints a report for people: what is impossible is a dash.
func stationTables(out io.Writer, r stationsReport) error {
	w := tabwriter.NewWriter(out, 0, 0, 2, ' ', tabwriter.AlignRight)
	given := func(x number) string {
		if text := x.csv(); text != "" {
			return text
		}
		return "-"
	}
	computed := func(x number) string {
		if f := math.Abs(float64(x)); f > 0 && (f < 1e-3 || f >= 1e9) && !math.IsInf(f, 0) {
			return fmt.Sprintf("%.11e", float64(x))
		}
		if math.IsNaN(float64(x)) {
			return "-"
		}
		return honest(float64(x), closedFormDigits*math.Abs(float64(x)))
	}
	row := func(cells ...string) { fmt.Fprintln(w, strings.Join(cells, "\t")+"\t") }
	section := func(format string, args ...any) {
		w.Flush()
		fmt.Fprintf(out, format+"\n", args...)
	}
	known := !math.IsNaN(float64(r.MassMsun))

	title := r.Object
	switch {
	case r.Interior != nil:
		title = fmt.Sprintf("%s star of %s M", *r.Interior, given(r.ObjectRadius))
	case !math.IsNaN(float64(r.ObjectRadius)):
		title += fmt.Sprintf(" of %s M", given(r.ObjectRadius))
	case r.Charge != 0:
		title += fmt.Sprintf(" of charge %s M", given(r.Charge))
	}
	if known {
		title += fmt.Sprintf(", %s Msun", given(r.MassMsun))
	}
	section("%s; from closed forms, to 12 digits", title)

	section("\nclocks, rulers and speeds (static frame)")
	head := []string{"r [M]", "clock rate", "ruler stretch", "orbit speed [c]", "infall speed [c]"}
	if known {
		head = slices.Insert(head, 1, "r [km]")
	}
	row(head...)
	for _, at := range r.Stations {
		cells := []string{given(at.R), computed(at.ClockRate), computed(at.RulerStretch), computed(at.OrbitSpeed), computed(at.InfallSpeed)}
		if known {
			cells = slices.Insert(cells, 1, computed(*at.RKm))
		}
		row(cells...)
	}
	section("\nlight [deg]: half angle of the escape cone; radius of the dark disk")
	row("r [M]", "escape cone", "disk, static", "disk, orbit", "its shift", "disk, infall")
	mirrored := false
	for _, at := range r.Stations {
		cone := computed(at.EscapeConeDeg)
		if at.EscapeMirrored {
			cone += "*"
			mirrored = true
		}
		row(given(at.R), cone, computed(at.ShadowRadius.Static), computed(at.ShadowRadius.Orbit),
			computed(at.ShadowCentreDeg), computed(at.ShadowRadius.Infall))
	}
	if mirrored {
		section("* and its mirror image, through the object; between them light is trapped")
	}
	if len(r.Pairs) > 0 {
		section("\npairs; frequency received over sent, sender %s, receiver %s", r.FromMotion, r.ToMotion)
		head := []string{"from [M]", "to [M]", "frequency", "distance [M]", "excess [M]", "light time [M]"}
		if known {
			head = append(head, "distance [km]", "excess [km]", "light time [s]")
		}
		row(head...)
		for _, p := range r.Pairs {
			cells := []string{given(p.FromR), given(p.ToR), computed(p.FrequencyRatio),
				computed(p.ProperDistance), computed(p.ExcessRadius), computed(p.LightTime)}
			if known {
				cells = append(cells, computed(*p.ProperDistanceKm), computed(*p.ExcessRadiusKm), computed(*p.LightTimeS))
			}
			row(cells...)
		}
	}
	return w.Flush()
}
