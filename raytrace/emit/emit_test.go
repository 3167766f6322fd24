package emit

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"image"
	"image/color"
	"image/jpeg"
	"image/png"
	"io"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"annulet/geodesic"

	"golang.org/x/image/tiff"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

// Every law sends out the flux ∫ I μ dμ = 1/2.
func TestAngleLaws(t *testing.T) {
	for law, ends := range map[AngleLaw][2]float64{
		Isotropic: {1, 1}, Darkened: {1 / (1 + 4.12/3), 3.06 / (1 + 4.12/3)}, Brightened: {math.Inf(1), math.Ln2},
	} {
		const n = 100000
		flux := 0.0
		for k := range n {
			mu := (float64(k) + 0.5) / n
			flux += law.Intensity(mu) * mu / n
		}
		near(t, fmt.Sprintf("flux of law %d", law), flux, 0.5, 1e-9)
		near(t, "straight out", law.Intensity(1), ends[1], 1e-15)
		if grazing := law.Intensity(0); !(grazing <= ends[0]) || math.IsInf(grazing, 0) {
			t.Errorf("law %d along the surface: %g", law, grazing)
		}
	}
}

// spot is a footprint at a place of the sky with sides along and across the
// meridian.
func spot(cosTheta, phi, along, across float64) footprint {
	sinTheta := math.Sqrt(1 - cosTheta*cosTheta)
	sin, cos := math.Sincos(phi)
	return footprint{
		at: direction(cosTheta, phi),
		e1: Vector{cosTheta * cos, cosTheta * sin, -sinTheta}, e2: Vector{-sin, cos, 0},
		u: [2]float64{0, across}, v: [2]float64{along, 0},
	}
}

// A white picture is white in any footprint, at every place.
func TestUniformPicture(t *testing.T) {
	values := make([]float32, 37*19)
	for k := range values {
		values[k] = 1
	}
	p := newPicture(37, 19, values)
	rng := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		f := spot(2*rng.Float64()-1, 7*rng.Float64(), math.Pow(10, -4+4*rng.Float64()), math.Pow(10, -4+4*rng.Float64()))
		near(t, "brightness", p.over(&f), 1, 1e-6)
	}
}

// The picture's left edge is azimuth 0, azimuth decreases to the right, and
// its top is N.
func TestPictureOrientation(t *testing.T) {
	values := make([]float32, 8*4)
	values[1*8+2] = 1 // 22.5 to 45 deg above the equator, azimuth 247.5 deg in the middle
	p := newPicture(8, 4, values)
	const deg = math.Pi / 180
	f := spot(math.Cos(67.5*deg), (360-2.5*45)*deg, 1e-3, 1e-3)
	near(t, "at the element", p.over(&f), 1, 1e-6)
	f = spot(math.Cos(67.5*deg), 2.5*45*deg, 1e-3, 1e-3)
	near(t, "mirrored", p.over(&f), 0, 1e-6)
	f = spot(-math.Cos(67.5*deg), (360-2.5*45)*deg, 1e-3, 1e-3)
	near(t, "below", p.over(&f), 0, 1e-6)
}

// Smaller sizes keep the mean over the sky, whatever the number of columns
// and rows.
func TestHalvedMeans(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	values := make([]float32, 101*45)
	for k := range values {
		values[k] = rng.Float32()
	}
	p := newPicture(101, 45, values)
	mean := func(l level) (sum float64) {
		for y := range l.rows {
			for x := range l.columns {
				sum += float64(l.values[y*l.columns+x]) * bandWeight(float64(y), float64(y+1), l.rows) / (2 * float64(l.columns))
			}
		}
		return sum
	}
	last := p.levels[len(p.levels)-1]
	if last.columns != 1 || last.rows != 1 {
		t.Fatalf("smallest size %d x %d", last.columns, last.rows)
	}
	for _, l := range p.levels {
		near(t, fmt.Sprintf("mean of %d x %d", l.columns, l.rows), mean(l), mean(p.levels[0]), 1e-6)
	}
}

// Fine stripes average out in wide footprints and stay in narrow ones.
func TestPictureFilter(t *testing.T) {
	values := make([]float32, 512*256)
	for k := range values {
		values[k] = float32(k % 2)
	}
	p := newPicture(512, 256, values)
	wide := spot(0.1, 1, 0.1, 0.1)
	near(t, "wide", p.over(&wide), 0.5, 0.01)
	narrow := spot(0.1, 2*math.Pi*(1-100.5/512), 1e-4, 1e-4)
	near(t, "narrow", p.over(&narrow), 0, 1e-6)
	long := spot(0.1, 2*math.Pi*(1-100.5/512), 0.2, 1e-4) // along a stripe
	near(t, "along", p.over(&long), 0, 0.02)
}

// sRGB, IEC 61966-2-1: 0.5 decodes to 0.2140411; luminance by ITU-R BT.709.
func TestImageFormats(t *testing.T) {
	img := image.NewNRGBA(image.Rect(0, 0, 4, 2))
	for k := range 8 {
		img.Set(k%4, k/4, color.NRGBA{0, 255, 0, 255})
	}
	img.Set(1, 0, color.NRGBA{128, 128, 128, 255})
	flat := image.NewGray(image.Rect(0, 0, 4, 2))
	for k := range flat.Pix {
		flat.Pix[k] = 128
	}
	for name, encode := range map[string]func(io.Writer) error{
		"PNG":  func(w io.Writer) error { return png.Encode(w, img) },
		"TIFF": func(w io.Writer) error { return tiff.Encode(w, img, nil) },
		"JPEG": func(w io.Writer) error { return jpeg.Encode(w, flat, nil) },
	} {
		var file bytes.Buffer
		if err := encode(&file); err != nil {
			t.Fatal(err)
		}
		p, err := DecodeImage(bytes.NewReader(file.Bytes()))
		if err != nil {
			t.Fatal(name, err)
		}
		half := math.Pow((128./255+0.055)/1.055, 2.4)
		near(t, name+" grey", float64(p.levels[0].values[1]), half, 1e-6)
		if name != "JPEG" {
			near(t, name+" green", float64(p.levels[0].values[0]), 0.7152, 1e-6)
		}
	}
}

// A file that promises 4·10⁹ pixels is refused before it is decoded.
func TestImageTooLarge(t *testing.T) {
	var file bytes.Buffer
	file.WriteString("\x89PNG\r\n\x1a\n")
	header := []byte("IHDR")
	header = binary.BigEndian.AppendUint32(header, 100000)
	header = binary.BigEndian.AppendUint32(header, 40000)
	header = append(header, 8, 0, 0, 0, 0)
	file.Write([]byte{0, 0, 0, 13})
	file.Write(header)
	_ = binary.Write(&file, binary.BigEndian, crc32.ChecksumIEEE(header))
	_, err := DecodeImage(bytes.NewReader(file.Bytes()))
	if !errors.Is(err, ErrImageSize) || !strings.Contains(err.Error(), "100000 x 40000") {
		t.Errorf("error %v", err)
	}
	if _, err := DecodeImage(strings.NewReader("not an image")); !errors.Is(err, image.ErrFormat) {
		t.Errorf("error %v", err)
	}
	if _, err := LoadImage("testdata/none.png"); err == nil {
		t.Error("a missing file is no error")
	}
}

// Stripes cover half/(step/2) of a wide box, and a box is covered exactly.
func TestStripes(t *testing.T) {
	near(t, "wide", striped(0.3, 0.1, 0.02, 10), 0.4, 1e-12)
	near(t, "on a line", striped(0.2001, 0.1, 0.02, 1e-3), 1, 1e-9)
	near(t, "half", striped(0.22, 0.1, 0.02, 1e-3), 0.5, 1e-9)
	near(t, "off", striped(-0.05, 0.1, 0.02, 1e-3), 0, 1e-9)
	near(t, "past a pole", covered(0.01, 0, 1, 0.1), 1, 1e-12)
}

// The same seed gives the same sky, another one another; fluxes fall as
// N(>F) ∝ F^(-3/2) and add up to 4π.
func TestRandomStars(t *testing.T) {
	a, b, c := scatter(1), scatter(1), scatter(2)
	var sum float64
	for k := range a.at {
		if a.at[k] != b.at[k] || a.flux[k] != b.flux[k] {
			t.Fatal("a seed gives two skies")
		}
		sum += a.flux[k]
	}
	if a.at[0] == c.at[0] {
		t.Error("two seeds give one sky")
	}
	near(t, "flux", sum, 4*math.Pi, 1e-9)
	above := func(f float64) (n float64) {
		for _, x := range a.flux {
			if x > f {
				n++
			}
		}
		return n
	}
	least := a.flux[0]
	for _, x := range a.flux {
		least = min(least, x)
	}
	near(t, "counts", above(least*4)/above(least*16), 8, 0.1)
}

// All the stars that a footprint sees are found: cells against a plain loop.
func TestStarCells(t *testing.T) {
	s := scatter(9)
	rng := rand.New(rand.NewPCG(5, 6))
	found := 0
	for range 3000 {
		cosTheta := 2*rng.Float64() - 1
		if rng.IntN(4) == 0 { // near a pole
			cosTheta = math.Copysign(1-1e-3*rng.Float64(), cosTheta)
		}
		f := spot(cosTheta, 2*math.Pi*rng.Float64()-math.Pi, 0.02+0.05*rng.Float64(), 0.02+0.05*rng.Float64())
		var want float64
		for k, p := range s.at {
			x, y := math.Abs(p.dot(f.e2)/f.u[1]), math.Abs(p.dot(f.e1)/f.v[0])
			if p.dot(f.at) > 0 && x < 1 && y < 1 {
				want += s.flux[k] * (1 - x) * (1 - y)
				found++
			}
		}
		near(t, "brightness", s.over(&f), want/f.solidAngle(), 1e-9*want/f.solidAngle())
	}
	if found < 1000 {
		t.Fatalf("%d stars", found)
	}
}

// Shade allocates nothing once its block has room, for all emitters.
func TestShadeAllocatesNothing(t *testing.T) {
	star, err := geodesic.NewStar(5, false)
	if err != nil {
		t.Fatal(err)
	}
	observer := geodesic.Observer{Radius: 40, InclinationDeg: 60}
	tracer, err := star.Tracer(observer, geodesic.Plan{Tolerance: 1e-8, MaxOrder: 1, Plane: true, Sky: true})
	if err != nil {
		t.Fatal(err)
	}
	var rays geodesic.Rays
	var at geodesic.Crossings
	var pixels Pixels
	var dirs []geodesic.Direction
	for k := range 400 {
		x := 0.4 * float64(k%20-10) / 10
		y := 0.4 * float64(k/20-10) / 10
		ahead := 1 / math.Sqrt(1+x*x+y*y)
		dirs = append(dirs, geodesic.Direction{Alpha: x * ahead, Beta: y * ahead, Ahead: ahead})
	}
	if err := star.Aim(observer, false, dirs, &rays); err != nil {
		t.Fatal(err)
	}
	tracer.Cross(&rays, geodesic.Want{Delay: true, Slope: true}, &at)
	pixels.Orient(60, 0)
	pixels.Resize(len(dirs))
	for k := range dirs {
		pixels.Column[k], pixels.Row[k] = [2]float64{1.6, 0}, [2]float64{0, 1.6}
	}
	white := newPicture(64, 32, make([]float32, 64*32))
	for name, shade := range map[string]func(*geodesic.Rays, *geodesic.Crossings, *Pixels, *Light){
		"disk": (&Disk{Gas: star.CircularGas(), Inner: 6, Outer: 20, Index: 3, GPower: 4, Angle: Brightened}).Shade,
		"accretion disk": (&Disk{Gas: star.CircularGas(), Inner: 6, Outer: 20, Profile: NovikovThorne{}, Depth: 0.5,
			Thermal: &Thermal{Scale: 1e8, Colour: 1.7, Frequency: 1e17, Brightness: 1}}).Shade,
		"broken":  (&Disk{Gas: star.CircularGas(), Inner: 6, Outer: 20, Profile: NewBrokenPower([]float64{6, 3}, []float64{9}), GPower: 4}).Shade,
		"without": (&Disk{Gas: star.StaticGas(), Inner: 6, Outer: 20, Without: Without{Gravity: true, Bending: true, ObserverLapse: 1}}).Shade,
		"spot":    NewSpot(Disk{Gas: star.CircularGas(), Inner: 6, Outer: 20, GPower: 4}, 9, 0, 3, 1, 5).Shade,
		"surface": (&Surface{Radius: 5, Brightness: 1, Spin: 0.01, GPower: 4, Caps: []Cap{NewCap(40, 0, 20, 3)}}).Shade,
		"grid":    NewSky(NewGrid(), 4).Shade,
		"stars":   NewSky(RandomStars(1), 4).Shade,
		"picture": NewSky(white, 4).Shade,
	} {
		var light Light
		lit := 0
		shade(&rays, &at, &pixels, &light)
		for _, l := range light.Lit {
			if l {
				lit++
			}
		}
		if lit < 10 {
			t.Errorf("%s: %d crossings lit", name, lit)
		}
		if n := testing.AllocsPerRun(20, func() { shade(&rays, &at, &pixels, &light) }); n != 0 {
			t.Errorf("%s allocates %v times a block, want 0", name, n)
		}
	}
}
