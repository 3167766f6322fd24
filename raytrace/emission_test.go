package raytrace

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// hotDisk is a blackbody accretion disk of 10 Msun at 3 kpc.
func hotDisk(pixels int) scenes.Scene {
	s := scene(60, 6, pixels)
	s.Object.Mass = scenes.Measure{Value: 10, Given: true}
	s.Object.Distance = scenes.Measure{Value: 3000, Given: true}
	s.Field.Frequency = []float64{2e3 * scenes.ElementaryCharge / scenes.Planck} // 2 keV
	s.Trace.MaxOrder = 0
	e := &s.Emitters[0]
	e.Profile, e.Light, e.Index = "novikov-thorne", "blackbody", nil
	e.Luminosity = scenes.Rate{Value: 0.1, Unit: "Edd"}
	e.ColourCorrection = 1.7
	e.Outer = 60
	e.OpticalDepth = math.Inf(1)
	return s
}

// quadrature is the integral over the direct image of a circular disk, M²
// times intensity, by closed forms alone: b(r, s) of each point of a ring by
// elliptic integrals, its slope by differences, g of circular gas.
func quadrature(inclination, inner, outer float64, angles, nodes int, intensity func(r, g float64) float64) float64 {
	sinI, cosI := math.Sincos(inclination * math.Pi / 180)
	sum := 0.0
	for k := range angles {
		sinS, cosS := math.Sincos(2 * math.Pi * float64(k) / float64(angles))
		psi := geodesic.FirstPlaneAngle(sinI, cosI, sinS)
		sum += quad.Fixed(func(x float64) float64 {
			r := math.Exp(x)
			const h = 1e-4
			b := geodesic.RimImpact(0, psi, r)
			slope := (geodesic.RimImpact(0, psi, r*(1+h)) - geodesic.RimImpact(0, psi, r*(1-h))) / (2 * h)
			g := math.Sqrt(1-3/r) / (1 + math.Pow(r, -1.5)*b*cosS*sinI)
			return b * slope * intensity(r, g)
		}, math.Log(inner), math.Log(outer), nodes, nil, 0) * 2 * math.Pi / float64(angles)
	}
	return sum
}

// The flux density of a blackbody disk by three roads: closed forms and
// Gauss, paths and on-disk integration, and the sum of the pixels. Constants
// are written out anew: L_Edd = 1.257e31 W Msun⁻¹ of hydrogen, h, k, c of the
// SI.
func TestBlackBodyDisk(t *testing.T) {
	const h, k, c, gm, mp, thomson = 6.62607015e-34, 1.380649e-23, 299792458.0, 1.3271244e21, 1.67262192e-27, 6.65245873e-29
	eddington := 4 * math.Pi * gm * mp * c / thomson
	near(t, "Eddington luminosity", eddington/1.257e32, 1, 1e-3)
	rate := 0.1 * eddington / (1 - math.Sqrt(8./9)) // Ṁc²
	sigma := 5.670374419e-8
	m := gm / (c * c)
	s := hotDisk(400)
	s.Trace.FluxTolerance = 1e-4
	nu := s.Field.Frequency[0]
	want := quadrature(60, 6, 60, 48, 24, func(r, g float64) float64 {
		temperature := 1.7 * math.Pow(emit.NovikovThorne{}.Flux(r)*rate/(m*m*sigma), 0.25)
		return g * g * g * 2 * h * math.Pow(nu/g, 3) / (c * c) / math.Expm1(h*nu/(g*k*temperature)) / math.Pow(1.7, 4)
	})
	v := view(t, s)
	orders, change, err := v.DiskFlux(v.Emitters[0].(*emit.Disk))
	if err != nil || len(orders) != 1 || change > 1e-5 {
		t.Fatalf("orders %v, change %g, error %v", orders, change, err)
	}
	near(t, "on the disk", orders[0]/want, 1, 1e-5)
	plate := render(t, v, Options{Layers: []Layer{}})
	jansky, err := v.Radiometry().In(JyPerPixel)
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for _, i := range plate.Total {
		sum += jansky(float64(i))
	}
	d := 3000 * 648000 / math.Pi * 149597870700
	near(t, "pixels", sum/(want*m*m/(d*d)*1e26), 1, 2e-5)
	total, ok := v.Jansky(plate.Flux[0])
	bound, _ := v.Jansky(plate.FluxBound[0])
	if want *= m * m / (d * d) * 1e26; !ok || math.Abs(total-want) > bound+1e-5*want {
		t.Errorf("the image has %g ± %g Jy, want %g", total, bound, want)
	}
	near(t, "temperature", v.TemperatureAt(9.5509280779439), math.Pow(1.36781108198299e-5*rate/(m*m*sigma), 0.25), 1)
	if !math.IsNaN(v.TemperatureAt(5)) {
		t.Error("a temperature off the disk")
	}
}

// Far below the thermal frequencies the disk's intensity is that of
// Rayleigh and Jeans, 2kν² gT/(f³c²), far above Wien's.
func TestBlackBodyLimits(t *testing.T) {
	s := hotDisk(8)
	s.Field.Frequency = []float64{1e9, 5e18}
	v := view(t, s)
	read := func(v *View) Reading {
		t.Helper()
		readings, err := v.Probe(context.Background(), [][2]float64{{5, 9}})
		if err != nil || len(readings) != 1 {
			t.Fatal(readings, err)
		}
		return readings[0]
	}
	const h, k, c = 6.62607015e-34, 1.380649e-23, 299792458.0
	low := read(v)
	temperature := v.TemperatureAt(low.R)
	near(t, "Rayleigh-Jeans", low.Intensity/(2*k*1e18*low.G*temperature/(c*c*math.Pow(1.7, 3))), 1, 1e-6)
	in, err := v.Radiometry().In(RayleighJeansKelvin)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "brightness temperature", in(low.Intensity)/(low.G*temperature/math.Pow(1.7, 3)), 1, 1e-6)
	tuned, err := v.WithFrequency(1)
	if err != nil {
		t.Fatal(err)
	}
	high := read(tuned)
	near(t, "Wien", high.Intensity/(2*h*125e54/(c*c)*math.Exp(-h*5e18/(low.G*k*1.7*temperature))/math.Pow(1.7, 4)), 1, 1e-9)
}

// total_flux is what the pixels of the image add up to, all orders, at the
// first frequency, and other frequencies follow the spectral index.
func TestTotalFlux(t *testing.T) {
	s := scene(50, 2, 500)
	s.Object.ThetaG = scenes.Measure{Value: 4, Given: true}
	s.Field.Frequency = []float64{230e9, 345e9}
	s.Object.Redshift = 0.1
	e := &s.Emitters[0]
	e.Light, e.SpectralIndex, e.TotalFlux = "monochromatic", -0.7, 0.6
	e.Profile, e.Index, e.Breaks = "power", []float64{2, 3.5}, []float64{9}
	v := view(t, s)
	sum := func(v *View) (total float64) {
		jansky, err := v.Radiometry().In(JyPerPixel)
		if err != nil {
			t.Fatal(err)
		}
		for _, i := range render(t, v, Options{Layers: []Layer{}}).Total {
			total += jansky(float64(i))
		}
		return total
	}
	near(t, "flux, Jy", sum(v), 0.6, 0.6*2e-3)
	higher, err := v.WithFrequency(1)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "ratio", sum(higher)/sum(v), math.Pow(1.5, -0.7), 1e-6)
	if _, err := v.WithFrequency(2); err == nil {
		t.Error("a third of two frequencies")
	}
	// Jy/beam: 0.6 Jy in an unresolved source would be one beam of it
	beam := BeamSolidAngle(20, 20)
	near(t, "beam", beam*math.Pow(180/math.Pi*3600e6, 2), 1.1330900354567985*400, 1e-6) // π/(4 ln 2) FWHM²
}

// A cosmological redshift z multiplies g by 1/(1+z): intensities per Hz fall
// by (1+z)³ at ν(1+z), bolometric ones by (1+z)⁴.
func TestHostRedshift(t *testing.T) {
	at := [][2]float64{{5, 9}}
	intensity := func(s scenes.Scene) float64 {
		readings, err := view(t, s).Probe(context.Background(), at)
		if err != nil || len(readings) != 1 {
			t.Fatal(readings, err)
		}
		return readings[0].Intensity
	}
	near1, far := scene(60, 6, 8), scene(60, 6, 8)
	far.Object.Redshift = 1
	near(t, "bolometric", intensity(near1)/intensity(far), 16, 1e-12)
	hot, redder := hotDisk(8), hotDisk(8)
	redder.Object.Redshift = 1
	redder.Field.Frequency[0] /= 2
	near(t, "blackbody", intensity(hot)/intensity(redder), 8, 1e-12)
}

// A table goes through its points: a power law in fine steps is the power
// law.
func TestTableProfile(t *testing.T) {
	folder := t.TempDir()
	var text strings.Builder
	text.WriteString("r,value\n")
	for k := range 400 {
		r := 5 * math.Exp(float64(k)*0.005)
		text.WriteString(formatFloat(r) + "," + formatFloat(math.Pow(r, -3)) + "\n")
	}
	if err := os.WriteFile(filepath.Join(folder, "p.csv"), []byte(text.String()), 0o600); err != nil {
		t.Fatal(err)
	}
	s, power := scene(60, 6, 8), scene(60, 6, 8)
	s.Emitters[0].Profile, s.Emitters[0].Table, s.Emitters[0].Index = "table", "p.csv", nil
	v, err := NewViewIn(s, folder)
	if err != nil {
		t.Fatal(err)
	}
	at := [][2]float64{{5, 9}, {-8, 1}, {0, 12}}
	got, err := v.Probe(context.Background(), at)
	if err != nil {
		t.Fatal(err)
	}
	want, err := view(t, power).Probe(context.Background(), at)
	if err != nil || len(got) != len(want) || len(got) < 3 {
		t.Fatal(len(got), len(want), err)
	}
	for k := range got {
		near(t, "intensity", got[k].Intensity/want[k].Intensity, 1, 1e-5)
	}
	s.Emitters[0].Outer = 50
	if _, err := NewViewIn(s, folder); err == nil || !strings.Contains(err.Error(), "does not cover") {
		t.Errorf("error %v", err)
	}
}

// A spot at 6 M seen face-on: image n shows it n echo delays late, 20.336 M
// for the first one; published echo delays of a ring, see physics.md 10.
// Worked out to ten digits outside this program.
func TestSpotDelays(t *testing.T) {
	s := scene(0, 6, 8)
	s.Emitters = []scenes.Emitter{{Kind: "spot", Radius: 6, Azimuth: 30, Size: 0.3, Contrast: 1, Light: "bolometric"}}
	v := view(t, s)
	rings := []float64{6.932148479189, 5.478913722084, 5.207989587555} // b_n(6), physics.md 5
	echoes := []float64{20.3360924044, 16.5913938971}
	period := 92.3435877716542 // of the ISCO, Bardeen, Press & Teukolsky
	peak := func(v *View, b float64) float64 {
		const steps = 720
		var at [][2]float64
		for k := range steps {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / steps)
			at = append(at, [2]float64{b * cos, b * sin})
		}
		readings, err := v.Probe(context.Background(), at)
		if err != nil {
			t.Fatal(err)
		}
		var sin, cos float64 // of the mean azimuth
		for _, r := range readings {
			if math.Abs(r.R-6) < 1e-3 {
				sin += r.Intensity * math.Sin(r.Phi)
				cos += r.Intensity * math.Cos(r.Phi)
			}
		}
		if sin == 0 && cos == 0 {
			t.Fatalf("the spot does not show at b = %g", b)
		}
		return math.Atan2(sin, cos)
	}
	turn := func(angle float64) float64 { return math.Remainder(angle, 2*math.Pi) }
	for _, time := range []float64{0, 40} {
		w := v.AtTime(time)
		first := peak(w, rings[0])
		near(t, "direct image", turn(first-(30*math.Pi/180+(time+1.015759)/period*2*math.Pi)), 0, 1e-6)
		for n, echo := range echoes {
			next := peak(w, rings[n+1])
			near(t, "echo", turn(first-next-echo/period*2*math.Pi), 0, 2e-6)
			first = next
		}
	}
	near(t, "one period later", turn(peak(v.AtTime(period), rings[0])-peak(v, rings[0])), 0, 1e-9)
}

// On a disk the spot's peak is contrast times the disk's own intensity.
func TestSpotOnDisk(t *testing.T) {
	s := scene(60, 6, 8)
	s.Emitters = append(s.Emitters, scenes.Emitter{Kind: "spot", Radius: 10, Azimuth: 90, Size: 0.4, Contrast: 2})
	v := view(t, s)
	// the middle of the spot, where it is seen: look for it on the disk
	best := Reading{}
	sinS, cosS := 0.0, 0.0
	psi := 0.0
	for k := range 12000 {
		sinS, cosS = math.Sincos(2 * math.Pi * float64(k) / 12000)
		psi = geodesic.FirstPlaneAngle(math.Sin(math.Pi/3), 0.5, sinS)
		b := geodesic.RimImpact(0, psi, 10)
		readings, err := v.Probe(context.Background(), [][2]float64{{b * cosS, b * sinS}})
		if err != nil || len(readings) == 0 {
			t.Fatal(readings, err)
		}
		r := readings[0]
		disk := math.Pow(r.G, 4) * 1e-3
		if ratio := r.Intensity / disk; ratio > best.Intensity {
			best = r
			best.Intensity = ratio
		}
	}
	near(t, "peak over the disk alone", best.Intensity, 3, 1e-3)
	near(t, "where it is", math.Remainder(best.Phi-(math.Pi/2-math.Pow(10, -1.5)*best.Delay), 2*math.Pi), 0, 2e-3)
}

// Each effect left out takes its own factor away; without all of them nothing
// happens to light.
func TestEffects(t *testing.T) {
	at := [][2]float64{{-7, 3}}
	probe := func(bending, gravity, motion bool) Reading {
		t.Helper()
		s := scene(60, 6, 8)
		s.Trace.NoBending, s.Trace.NoGravity, s.Trace.NoMotion = !bending, !gravity, !motion
		readings, err := view(t, s).Probe(context.Background(), at)
		if err != nil || len(readings) == 0 {
			t.Fatal(readings, err)
		}
		return readings[0]
	}
	all := probe(true, true, true)
	lapse := math.Sqrt(1 - 2/all.R)
	near(t, "no gravity", probe(true, false, true).G, all.G/lapse, 1e-12)
	near(t, "no motion", probe(true, true, false).G, lapse, 1e-12)
	near(t, "bending alone", probe(true, false, false).G, 1, 1e-12)
	near(t, "μ without gravity", probe(true, false, true).Mu, all.Mu, 1e-12)
	// straight: the plane is met at α, β/cos i
	straight := probe(false, true, true)
	r := math.Hypot(7, 3/math.Cos(math.Pi/3))
	near(t, "r", straight.R, r, 1e-12)
	near(t, "delay", straight.Delay, 3*math.Tan(math.Pi/3), 1e-12) // behind the plane of the sky
	near(t, "azimuth", straight.Phi, math.Atan2(-7, -6), 1e-12)
	// special relativity with v = 1/√(r-2) and n·v from the straight line
	v := 1 / math.Sqrt(r-2)
	along := 7 * math.Sin(math.Pi/3) / r
	near(t, "g", straight.G, math.Sqrt(1-2/r)*math.Sqrt(1-v*v)/(1-v*along), 1e-12)
	flat := probe(false, false, false)
	near(t, "nothing", flat.G, 1, 1e-12)
	near(t, "μ of the plane", flat.Mu, 0.5, 1e-12)
	near(t, "intensity", flat.Intensity, math.Pow(r, -3), 1e-15)
}

func formatFloat(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// A spot's light curve over its orbit: the flux of every image order peaks
// when the place of the orbit that looks brightest in it passes, late by that
// order's own delay. Brightest is where g⁴ |dα dβ/dA| is largest, found here by
// closed forms.
func TestSpotLightCurve(t *testing.T) {
	const radius = 9
	s := scene(60, 6, 8)
	s.Emitters = []scenes.Emitter{{Kind: "spot", Radius: radius, Size: 0.1, Contrast: 1, Light: "bolometric"}}
	v := view(t, s)
	period := s.Object.OrbitalPeriod(radius)
	near(t, "period", period, 2*math.Pi*27, 1e-12)
	s.Object.Mass = scenes.Measure{Value: 4e6, Given: true}
	seconds, _ := s.SecondsPerM()
	near(t, "period in s", period*seconds, 2*math.Pi*27*4e6*4.92549094764127e-6, 1e-6) // physics.md 3

	sinI, cosI := math.Sincos(math.Pi / 3)
	for order := range 2 {
		// the ring of the orbit on the screen, and the brightness of a point
		const n = 1440
		var at [][2]float64
		var slope []float64
		for k := range n {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / n)
			psi := geodesic.FirstPlaneAngle(sinI, cosI, sin) + float64(order)*math.Pi
			b := geodesic.RimImpact(0, psi, radius)
			slope = append(slope, (geodesic.RimImpact(0, psi, radius*(1+1e-5))-geodesic.RimImpact(0, psi, radius*(1-1e-5)))/(2e-5*radius))
			at = append(at, [2]float64{b * cos, b * sin})
		}
		disk := s
		disk.Emitters = []scenes.Emitter{{Kind: "disk", Inner: scenes.Rim{Radius: 6}, Outer: 12, Profile: "power", Index: []float64{0}, Light: "bolometric"}}
		readings, err := view(t, disk).Probe(context.Background(), at)
		if err != nil {
			t.Fatal(err)
		}
		ring := make([]Reading, 0, n)
		for _, r := range readings {
			if r.Order == order {
				ring = append(ring, r)
			}
		}
		if len(ring) != n {
			t.Fatalf("order %d: %d points", order, len(ring))
		}
		best, when := 0.0, 0.0
		for k, r := range ring {
			next, last := ring[(k+1)%n], ring[(k+n-1)%n]
			dphi := math.Remainder(next.Phi-last.Phi, 2*math.Pi) / (4 * math.Pi / n)
			if bright := math.Pow(r.G, 4) * r.Impact * slope[k] / math.Abs(dphi); bright > best {
				best, when = bright, r.Phi*period/(2*math.Pi)+r.Delay
			}
		}
		// the spot's flux in that order, summed along rays across the ring
		flux := func(time float64) (sum float64) {
			w := v.AtTime(time)
			var around [][2]float64
			for _, p := range at {
				for step := -3; step <= 3; step++ {
					k := len(around) / 7
					b := math.Hypot(p[0], p[1])
					scale := 1 + 0.08*float64(step)*slope[k]/b
					around = append(around, [2]float64{p[0] * scale, p[1] * scale})
				}
			}
			readings, err := w.Probe(context.Background(), around)
			if err != nil {
				t.Fatal(err)
			}
			k := 0
			for _, r := range readings {
				for around[k] != [2]float64{r.Alpha, r.Beta} {
					k++
				}
				if r.Order == order {
					sum += r.Intensity * r.Impact * slope[k/7]
				}
			}
			return sum
		}
		peak := 0.0
		for _, dt := range []float64{-6, 0, 6} {
			peak = max(peak, flux(when+dt))
		}
		if here := flux(when); here != peak || here <= 0 {
			t.Errorf("order %d: flux %g at its time, %g to one side", order, here, peak)
		}
	}
}

// Several frequencies, and several times, from one trace: what is shaded again
// is what would be traced anew, bit for bit.
func TestOneTrace(t *testing.T) {
	s := hotDisk(40)
	s.Trace.MaxOrder = 1
	s.Field.Frequency = append(s.Field.Frequency, 2*s.Field.Frequency[0])
	s.Emitters = append(s.Emitters, scenes.Emitter{Kind: "spot", Radius: 10, Size: 0.5, Contrast: 1})
	v := view(t, s)
	traced, err := v.Trace(context.Background(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	tuned, err := v.WithFrequency(1)
	if err != nil {
		t.Fatal(err)
	}
	for what, w := range map[string]*View{"first": v, "second": tuned, "later": tuned.AtTime(30)} {
		plate, err := traced.Shade(context.Background(), w, Options{})
		if err != nil {
			t.Fatal(what, err)
		}
		samePlate(t, what, plate, render(t, w, Options{}))
	}
	s.Field.Frequency = s.Field.Frequency[1:] // as the only one
	samePlate(t, "only", render(t, tuned, Options{}), render(t, view(t, s), Options{}))
}
