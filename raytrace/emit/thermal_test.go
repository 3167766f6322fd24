package emit

import (
	"errors"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"annulet/geodesic"
	"annulet/scenes"
)

// Values of Page & Thorne's integral (ApJ 191, 499 (1974)), worked out to
// 1e-35 outside this program; the peak at 9.55 M is Luminet's (A&A 75, 228
// (1979)), from memory.
func TestNovikovThorneFlux(t *testing.T) {
	var p NovikovThorne
	for r, want := range map[float64]float64{
		7: 6.11501027352178e-6, 10: 1.35687546380469e-5, 20: 4.72514406575524e-6, 100: 7.78585359203805e-8,
		9.5509280779439: 1.36781108198299e-5, 6: 0, 3: 0, 2: 0,
	} {
		near(t, "flux", p.Flux(r), want, 1e-12*want)
	}
	// golden section
	lo, hi := 6.5, 20.0
	const ratio = 0.6180339887498949
	for hi-lo > 1e-7 {
		a, b := hi-ratio*(hi-lo), lo+ratio*(hi-lo)
		if p.Flux(a) < p.Flux(b) {
			lo = a
		} else {
			hi = b
		}
	}
	near(t, "peak", lo, 9.5509280779439, 1e-6)
	near(t, "in a block", At(p, 10), p.Flux(10), 0)
}

// Both faces radiate 1 - √(8/9) of the rest energy: ∫ 4πr F E dr, with the
// energy at infinity E = (1-2/r)/√(1-3/r) of what the gas loses.
func TestNovikovThorneEfficiency(t *testing.T) {
	integrand := func(s float64) float64 { // r = 6/s²
		r := 6 / (s * s)
		return 4 * math.Pi * r * NovikovThorne{}.Flux(r) * (1 - 2/r) / math.Sqrt(1-3/r) * 12 / (s * s * s)
	}
	got := quad.Fixed(integrand, 1e-6, 1, 400, nil, 0)
	near(t, "efficiency", got, 1-math.Sqrt(8./9), 2e-6) // 1e-6 is cut off
	near(t, "constant", Efficiency, 1-math.Sqrt(8./9), 1e-15)
	near(t, "constant of scenes", scenes.ThinDiskEfficiency, Efficiency, 0)
}

// Far out the flux is 3Ṁ/(8πr³): Shakura & Sunyaev, A&A 24, 337 (1973).
func TestShakuraSunyaevLimit(t *testing.T) {
	for _, r := range []float64{1e8, 1e10} {
		near(t, "flux", NovikovThorne{}.Flux(r)*8*math.Pi/3*r*r*r, 1, 5/math.Sqrt(r))
	}
}

// CODATA 2018: σ = 5.670374419e-8 W m⁻² K⁻⁴, Wien's ν_max/T = 5.878925757e10
// Hz/K, exact to the digits shown.
func TestBlackBody(t *testing.T) {
	near(t, "σ", StefanBoltzmann, 5.670374419e-8, 1e-17)
	const temperature = 5772
	whole := quad.Fixed(func(x float64) float64 { // ν = x kT/h
		perX := scenes.Boltzmann * temperature / scenes.Planck
		return math.Pi * BlackBody(x*perX, temperature) * perX
	}, 1e-9, 60, 200, nil, 0)
	near(t, "∫πB", whole/(StefanBoltzmann*math.Pow(temperature, 4)), 1, 1e-10)
	peak := 5.878925757e10 * temperature
	for _, step := range []float64{-1e-4, 1e-4} {
		if !(BlackBody(peak*(1+step), temperature) < BlackBody(peak, temperature)) {
			t.Error("the maximum is not Wien's")
		}
	}
	// limits: 2kTν²/c² and 2hν³/c² exp(-hν/kT)
	const c = 299792458.0
	near(t, "Rayleigh-Jeans", BlackBody(1e9, 1e9)*c*c/(2*1.380649e-23*1e9*1e18), 1, 1e-7)
	near(t, "Wien", BlackBody(1e18, 1e6)*c*c/(2*6.62607015e-34*1e54)*math.Exp(6.62607015e-34*1e18/(1.380649e-23*1e6)), 1, 1e-12)
	for _, nu := range []float64{1e9, 1e14, 1e17} {
		near(t, "brightness temperature", BrightnessTemperature(BlackBody(nu, 1e7), nu)/1e7, 1, 1e-9)
	}
	near(t, "Rayleigh-Jeans temperature", RayleighJeansTemperature(BlackBody(1e9, 1e9), 1e9)/1e9, 1, 1e-7)
	near(t, "no light", BlackBody(1e9, 0)+BrightnessTemperature(0, 1e9), 0, 0)
}

// A diluted blackbody keeps its flux σT⁴ whatever the colour correction, and
// a shift g makes of it one of temperature gT, times g³/g³: B_ν(T)/ν³ is
// invariant.
func TestThermal(t *testing.T) {
	h := Thermal{Scale: 1e7, Colour: 1.7, Brightness: 1}
	total := quad.Fixed(func(x float64) float64 {
		h.Frequency = x * 1e17
		return math.Pi * h.received(1e7, 1) * 1e17
	}, 1e-6, 200, 400, nil, 0)
	near(t, "flux", total/(StefanBoltzmann*1e28), 1, 1e-6)
	h.Frequency = 3e17
	near(t, "shifted", h.received(1e7, 0.6)/(BlackBody(3e17, 1.7*0.6e7)/math.Pow(1.7, 4)), 1, 1e-12)
	near(t, "from the horizon", h.received(1e7, 0), 0, 0)
	near(t, "temperature of a profile", h.Temperature(16), 2e7, 1e-8)
}

func TestBrokenPower(t *testing.T) {
	p := NewBrokenPower([]float64{6, 3, -1}, []float64{10, 40})
	near(t, "inside", At(p, 7), math.Pow(7, -6), 1e-20)
	near(t, "between", At(p, 20), math.Pow(10, -6)*math.Pow(2, -3), 1e-20)
	near(t, "outside", At(p, 80), math.Pow(10, -6)*math.Pow(4, -3)*2, 1e-20)
	near(t, "one power", At(Power(2.5), 3), math.Pow(3, -2.5), 1e-16)
}

func TestTable(t *testing.T) {
	table, err := readTable(strings.NewReader("\ufeffr, value\n# a step\n\n6,0\n8 , 0\n9,1\r\n12,1\n40,0.25\n"))
	if err != nil {
		t.Fatal(err)
	}
	for r := 6.0; r <= 40; r += 0.01 {
		got := At(table, r)
		lo, hi := 0.0, 1.0
		if r > 12 {
			lo = 0.25
		}
		if r < 8 {
			hi = 0
		}
		if !(got >= lo && got <= hi) {
			t.Fatalf("overshoots to %g at %g", got, r)
		}
	}
	near(t, "at a point", At(table, 40), 0.25, 1e-15)
	if err := table.Covers(6, 40); err != nil {
		t.Error(err)
	}
	if err := table.Covers(6, 41); !errors.Is(err, ErrTableShort) {
		t.Errorf("error %v", err)
	}
	for text, says := range map[string]string{
		"6,1\n7,2\n7,3\n":      "3: radii must grow, and 7 M does not come after 7 M",
		"r,f\n6,1\n5,2\n":      "3: radii must grow",
		"6,1\n7;2\n":           `2: "7;2"`,
		"6,1\n7,x\n":           `2: value "x"`,
		"6,1\n7,-1\n":          "2: value -1: allowed: 0 or more, up to 1e+300",
		"0,1\n7,1\n":           "1: radius 0",
		"6,1\n":                "a table of 1 rows",
		"":                     "a table of 0 rows",
		"r,f\nx,y\n6,1\n7,1\n": `2: radius "x"`,
		"6,1\nnan,1\n":         "2: radius NaN",
	} {
		if _, err := readTable(strings.NewReader(text)); err == nil || !strings.Contains(err.Error(), says) {
			t.Errorf("%q: error %v, want %q", text, err, says)
		}
	}
}

// The area of gas in its own frame is √det h of h = g + u u on the (r, φ)
// plane, whatever the motion.
func TestAreaElement(t *testing.T) {
	hole, err := geodesic.NewHole(0)
	if err != nil {
		t.Fatal(err)
	}
	for _, gas := range []geodesic.Gas{hole.CircularGas(), hole.StaticGas()} {
		for _, r := range []float64{2.5, 4, 5.9, 6, 9, 100} {
			f := 1 - 2/r
			v := gas.At(r)
			ur, uphi := v.UR/f, r*r*v.UPhi
			det := (1/f+ur*ur)*(r*r+uphi*uphi) - ur*ur*uphi*uphi
			near(t, "area", gas.AreaElement(r)/math.Sqrt(det), 1, 1e-12)
		}
	}
	near(t, "at the ISCO", hole.CircularGas().AreaElement(6), 6*math.Sqrt2, 1e-14)
}

// All the light of a blackbody disk is σT⁴/π g⁴, however its temperature is
// given.
func TestBolometric(t *testing.T) {
	shine := func(d *Disk) float64 {
		b := d.Bolometric()
		value := []float64{0}
		b.profile().Fill([]float64{9}, []bool{true}, value)
		return value[0] * b.gain(0.5, 1)
	}
	want := 5.670374419e-8 / math.Pi * math.Pow(3e6, 4) / 16
	byPower := &Disk{Index: 2, Thermal: &Thermal{Scale: 9e6, Colour: 1.7}} // T ∝ r^(-1/2)
	near(t, "power", shine(byPower)/want, 1, 1e-9)
	table, err := readTable(strings.NewReader("6,3e6\n12,3e6"))
	if err != nil {
		t.Fatal(err)
	}
	near(t, "table", shine(&Disk{Profile: table, Thermal: &Thermal{Kelvin: true, Colour: 1.7}})/want, 1, 1e-9)
}
