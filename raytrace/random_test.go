package raytrace

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"image"
	"image/png"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"annulet/scenes"
)

// Whatever passes the check of scenes is rendered without a panic, within a
// time, and every number of the image is finite or, where the plate says so,
// none. ANNULET_SCENES is how many random scenes, for the long form, and
// ANNULET_SEED which.
func TestRandomScenes(t *testing.T) {
	n, seed := 200, 1
	if testing.Short() {
		n = 20
	}
	for name, to := range map[string]*int{"ANNULET_SCENES": &n, "ANNULET_SEED": &seed} {
		if text := os.Getenv(name); text != "" {
			var err error
			if *to, err = strconv.Atoi(text); err != nil {
				t.Fatal(err)
			}
		}
	}
	folder := t.TempDir()
	writeSceneFiles(t, folder)
	refused, slowest, began := 0, time.Duration(0), time.Now()
	for k := range n {
		r := rand.New(rand.NewPCG(uint64(seed), uint64(k)))
		text := randomScene(t, r, folder)
		since := time.Now()
		if !survives(t, fmt.Sprintf("ANNULET_SEED=%d, scene %d", seed, k), text, folder) {
			refused++
		}
		slowest = max(slowest, time.Since(since))
	}
	t.Logf("%d scenes, %d refused by NewView with a reason, slowest %v, all %v", n, refused, slowest.Round(time.Millisecond), time.Since(began).Round(time.Millisecond))
	if refused > n/3 {
		t.Errorf("%d of %d scenes that passed the check were refused", refused, n)
	}
}

// Scenes that once did harm.
func TestHostileScenes(t *testing.T) {
	folder := t.TempDir()
	writeSceneFiles(t, folder)
	paths, err := filepath.Glob("testdata/hostile/*.toml")
	if err != nil || len(paths) == 0 {
		t.Fatalf("%v, %v", paths, err)
	}
	for _, path := range paths {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		survives(t, path, string(text), folder)
	}
}

// hangs is far more than an image of 16 x 16 pixels takes.
const hangs = 30 * time.Second

// survives renders a right scene and says whether it could be; that a file or
// an emitter is refused by NewView, with a reason, is no harm.
func survives(t *testing.T, name, text, folder string) (rendered bool) {
	t.Helper()
	d, err := scenes.Parse(filepath.Join(folder, "scene.toml"), []byte(text))
	if err != nil {
		t.Fatalf("%s: no right scene: %v\n%s", name, err, text)
	}
	ctx, stop := context.WithTimeout(t.Context(), hangs)
	defer stop()
	defer func() {
		if p := recover(); p != nil {
			t.Errorf("%s: panic: %v\n%s", name, p, text)
		}
	}()
	view, err := NewViewIn(d.Scene(), folder)
	if err != nil {
		return false
	}
	plate, err := view.Render(ctx, Options{Workers: 1, PathByPath: len(text)%2 == 0}) // both roads
	switch {
	case errors.Is(err, context.DeadlineExceeded):
		t.Errorf("%s: hangs\n%s", name, text)
		return true
	case err != nil:
		if strings.Contains(err.Error(), "the program failed") {
			t.Errorf("%s: %v\n%s", name, err, text)
		}
		return false
	}
	if fault := unsound(plate); fault != "" {
		t.Errorf("%s: %s\n%s", name, fault, text)
	}
	return true
}

// unsound says what number of a plate is none and should be one.
func unsound(p *Plate) string {
	finite := func(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }
	if !(p.WorstBound >= 0) || !finite(p.WorstBound) || !finite(p.WorstAngle) {
		return fmt.Sprintf("worst bounds %g, %g", p.WorstBound, p.WorstAngle)
	}
	for n, flux := range p.Flux {
		if !finite(flux) || !(p.FluxBound[n] >= 0) {
			return fmt.Sprintf("flux of order %d is %g, bound %g", n, flux, p.FluxBound[n])
		}
	}
	for at, total := range p.Total {
		if !finite(float64(total)) || total < 0 {
			return fmt.Sprintf("pixel %d: total %g", at, total)
		}
		for n := range p.Orders {
			intensity := float64(p.Layer(Intensity, n)[at])
			if !finite(intensity) || intensity < 0 {
				return fmt.Sprintf("pixel %d, order %d: intensity %g", at, n, intensity)
			}
			for l := Redshift; l < layerCount; l++ {
				if x := float64(p.Layer(l, n)[at]); math.IsInf(x, 0) {
					return fmt.Sprintf("pixel %d, order %d, layer %d: %g", at, n, l, x)
				}
			}
			// NaN: the middle of the pixel lies beside what shines into it
			if g := float64(p.Layer(Redshift, n)[at]); g <= 0 {
				return fmt.Sprintf("pixel %d, order %d: g = %g", at, n, g)
			}
		}
	}
	return ""
}

// writeSceneFiles writes what random scenes may name.
func writeSceneFiles(t *testing.T, folder string) {
	t.Helper()
	write := func(name, text string) {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	write("profile.csv", "r,value\n2,1\n6,5\n20,0\n1e4,1e-3\n")
	write("uv.csv", "u,v\n1,2\n")
	sky := image.NewGray(image.Rect(0, 0, 16, 8))
	for k := range sky.Pix {
		sky.Pix[k] = uint8(37 * k)
	}
	var text bytes.Buffer
	if err := png.Encode(&text, sky); err != nil {
		t.Fatal(err)
	}
	write("sky.png", text.String())
}

// draft is a scene in the making: lines by table.
type draft struct {
	header string
	lines  []draftLine
}

type draftLine struct{ path, key, value string }

// randomScene makes a text that passes the check: keys at random from the
// table of keys, with those taken out again that the check refuses.
func randomScene(t *testing.T, r *rand.Rand, folder string) string {
	t.Helper()
	for range 100 {
		all := randomDraft(r)
		for range 60 {
			var text strings.Builder
			text.WriteString("schema = 1\n")
			for _, d := range all {
				text.WriteString(d.header + "\n")
				for _, l := range d.lines {
					text.WriteString(l.key + " = " + l.value + "\n")
				}
			}
			_, err := scenes.Parse(filepath.Join(folder, "scene.toml"), []byte(text.String()))
			if err == nil {
				return text.String()
			}
			var e *scenes.Error
			if !errors.As(err, &e) || !takeOut(all, e.Key) {
				break // begin anew
			}
		}
	}
	t.Fatal("no right scene in 100 attempts")
	return ""
}

// takeOut removes a key's line and says whether it was there.
func takeOut(all []draft, path string) bool {
	for k := range all {
		for i, l := range all[k].lines {
			if l.path == path {
				all[k].lines = append(all[k].lines[:i:i], all[k].lines[i+1:]...)
				return true
			}
		}
	}
	return false
}

func randomDraft(r *rand.Rand) []draft {
	var all []draft
	for _, name := range []string{"object", "observer", "field", "trace", "time"} {
		d := draft{header: "[" + name + "]"}
		kind := ""
		for _, k := range scenes.Keys() {
			if k.Section != name || k.Later || len(k.Kinds) > 0 && !contains(k.Kinds, kind) {
				continue
			}
			l := draftLine{k.Path(), k.Name, randomValue(r, k)}
			if name == "object" && k.Name == "kind" {
				kind = strings.Trim(l.value, `"`)
			}
			often := 0.4
			switch {
			case k.Path() == "field.pixels" || k.Path() == "object.kind" || k.Path() == "object.radius":
				often = 1
			case k.Path() == "trace.tolerance" || k.Path() == "trace.flux_tolerance":
				often = 0.1
			}
			if r.Float64() < often {
				d.lines = append(d.lines, l)
			}
		}
		all = append(all, d)
	}
	for n := range 1 + r.IntN(3) {
		d := draft{header: "[[emitter]]"}
		kinds := []string{"disk", "disk", "disk", "spot", "surface", "sky"}
		kind := kinds[r.IntN(len(kinds))]
		for _, k := range scenes.Keys() {
			if k.Section != "emitter" || k.Later || len(k.Kinds) > 0 && !contains(k.Kinds, kind) {
				continue
			}
			path := k.Path()
			if n > 0 {
				path = fmt.Sprintf("emitter.%d.%s", n+1, k.Name)
			}
			l := draftLine{path, k.Name, randomValue(r, k)}
			if k.Name == "kind" {
				l.value = strconv.Quote(kind)
			}
			if k.Name == "kind" || k.Name == "radius" || r.Float64() < 0.35 {
				d.lines = append(d.lines, l)
			}
		}
		all = append(all, d)
	}
	return all
}

func contains(list []string, x string) bool {
	for _, y := range list {
		if x == y {
			return true
		}
	}
	return false
}

// randomValue writes a value of the key's type, most often an ordinary one.
func randomValue(r *rand.Rand, k scenes.Key) string {
	list := func(n int, one func() string) string {
		parts := make([]string, n)
		for i := range parts {
			parts[i] = one()
		}
		return "[" + strings.Join(parts, ", ") + "]"
	}
	some := func() int {
		if k.Count > 0 {
			return k.Count
		}
		return 1 + r.IntN(3)
	}
	quantity := func() string {
		if len(k.Words) > 0 && r.Float64() < 0.4 {
			return strconv.Quote(k.Words[r.IntN(len(k.Words))])
		}
		x := strconv.FormatFloat(randomNumber(r, k), 'g', -1, 64)
		if len(k.Units) > 0 && r.Float64() < 0.25 {
			return strconv.Quote(x + " " + k.Units[r.IntN(len(k.Units))])
		}
		return tomlNumber(x)
	}
	switch k.Type {
	case scenes.Text:
		return strconv.Quote(map[string]string{"table": "profile.csv", "uv": "uv.csv", "image": "sky.png"}[k.Name])
	case scenes.Choice:
		if k.OrNumber && r.Float64() < 0.4 {
			return tomlNumber(strconv.FormatFloat(randomNumber(r, k), 'g', -1, 64))
		}
		return strconv.Quote(k.Choices[r.IntN(len(k.Choices))])
	case scenes.ChoiceList:
		return list(r.IntN(3), func() string { return strconv.Quote(k.Choices[r.IntN(len(k.Choices))]) })
	case scenes.Integer:
		if k.Name == "max_order" {
			return strconv.Itoa(min(r.IntN(4), r.IntN(4), r.IntN(10)))
		}
		return strconv.Itoa(1 + r.IntN(1000))
	case scenes.IntegerList:
		const most = 7
		return list(2, func() string { return strconv.Itoa(1 + r.IntN(most)) })
	case scenes.Number:
		return tomlNumber(strconv.FormatFloat(randomNumber(r, k), 'g', -1, 64))
	case scenes.NumberList:
		return list(some(), func() string { return tomlNumber(strconv.FormatFloat(randomNumber(r, k), 'g', -1, 64)) })
	case scenes.Quantity:
		return quantity()
	case scenes.QuantityList:
		return list(some(), quantity)
	case scenes.TableList:
		return list(1+r.IntN(2), func() string {
			var parts []string
			for _, f := range k.Fields {
				parts = append(parts, f.Name+" = "+randomValue(r, f))
			}
			return "{" + strings.Join(parts, ", ") + "}"
		})
	}
	panic(fmt.Sprintf("a key of type %v", k.Type))
}

// tomlNumber makes 1e+06 a number that TOML knows.
func tomlNumber(x string) string { return strings.Replace(x, "e+", "e", 1) }

// randomNumber is within the key's range: in its middle, at its ends, or far
// out.
func randomNumber(r *rand.Rand, k scenes.Key) float64 {
	lo, hi := k.Range.Min, k.Range.Max
	dice := r.Float64()
	switch {
	case !math.IsInf(lo, 0) && !math.IsInf(hi, 0):
		switch {
		case dice < 0.1:
			return lo
		case dice < 0.2:
			return hi
		case dice < 0.25:
			return lo + (hi-lo)*1e-9
		}
		return lo + (hi-lo)*r.Float64()
	case !math.IsInf(lo, 0):
		switch {
		case dice < 0.05:
			return lo + math.Pow(10, 40*r.Float64()-20)
		case dice < 0.08:
			return math.Nextafter(lo, math.Inf(1))
		}
		return lo + math.Pow(10, 4*r.Float64()-1.5)
	case dice < 0.05:
		return (2*r.Float64() - 1) * math.Pow(10, 30*r.Float64())
	}
	return 20 * (2*r.Float64() - 1)
}
