package verbs

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// smallScene is quick to trace and has something of everything.
const smallScene = `schema = 1
title = "small"
[observer]
inclination = "60 deg"
[field]
pixels = [16, 12]
[[emitter]]
inner = "isco"
outer = "20 M"
`

// outcome is what one run did.
type outcome struct {
	code        int
	out, errors string
}

// do runs the verbs in a process that has only these streams.
func do(t *testing.T, stdin string, args ...string) outcome {
	t.Helper()
	var out, errs bytes.Buffer
	code := Run(args, strings.NewReader(stdin), &out, &errs)
	return outcome{code, out.String(), errs.String()}
}

// folder makes a directory that holds the small scene, and enters it.
func folder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	t.Chdir(dir)
	write(t, "small.toml", smallScene)
	return dir
}

func write(t *testing.T, name, text string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

// contents lists what a directory holds, hidden files too.
func contents(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return names
}

// decode reads stdout as one JSON document and nothing else.
func decode(t *testing.T, text string, into any) {
	t.Helper()
	d := json.NewDecoder(strings.NewReader(text))
	if err := d.Decode(into); err != nil {
		t.Fatalf("not JSON: %v\n%s", err, text)
	}
	if d.More() {
		t.Fatalf("more than one JSON document:\n%s", text)
	}
}

// refusals are requests that must end with exit 2, one message and nothing
// written.
var refusals = []struct {
	what  string
	args  string // separated by |
	stdin string
	says  string // part of the message
}{
	{what: "no verb", args: "", says: "One of:"},
	{what: "unknown verb", args: "paint", says: `"paint"`},
	{what: "unknown verb of scene", args: "scene|paint", says: `"paint"`},
	{what: "unknown flag", args: "trace|--bogus", says: "--bogus"},
	{what: "too many scenes", args: "probe|a|b", says: "one SCENE"},

	{what: "trace of nothing", args: "trace", says: "--observer-radius"},
	{what: "trace without impact", args: "trace|--observer-radius|10", says: "--impact"},
	{what: "observer inside", args: "trace|--observer-radius|1.9|--impact|1", says: "horizon"},
	{what: "observer on the horizon", args: "trace|--observer-radius|2|--impact|1", says: "horizon"},
	{what: "observer at nan", args: "trace|--observer-radius|nan|--impact|1", says: "nan"},
	{what: "observer at -infinity", args: "trace|--observer-radius|-inf|--impact|1", says: "-inf"},
	{what: "observer too far", args: "trace|--observer-radius|1e13|--impact|1", says: "infinity"},
	{what: "negative impact", args: "trace|--observer-radius|10|--impact|-1", says: "negative"},
	{what: "impact nan", args: "trace|--observer-radius|10|--impact|NaN", says: "NaN"},
	{what: "impact infinite", args: "trace|--observer-radius|10|--impact|infinity", says: "finite"},
	{what: "impact out of reach", args: "trace|--observer-radius|10|--impact|12", says: "allowed: 0 to 11.18"},
	{what: "tolerance 0", args: "trace|--observer-radius|10|--impact|1|--tolerance|0", says: "out of range"},
	{what: "tolerance negative", args: "trace|--observer-radius|10|--impact|1|--tolerance|-1e-9", says: "out of range"},
	{what: "tolerance nan", args: "trace|--observer-radius|10|--impact|1|--tolerance|nan", says: "nan"},
	{what: "tolerance 1", args: "trace|--observer-radius|10|--impact|1|--tolerance|1", says: "out of range"},
	{what: "star without radius", args: "trace|--observer-radius|10|--impact|1|--object|star", says: "needs --object-radius"},
	{what: "shell without radius", args: "trace|--observer-radius|10|--impact|1|--object|shell", says: "needs --object-radius"},
	{what: "star at the Buchdahl limit", args: "trace|--observer-radius|10|--impact|1|--object|star|--object-radius|2.25", says: "Buchdahl"},
	{what: "shell on its horizon", args: "trace|--observer-radius|10|--impact|1|--object|shell|--object-radius|2", says: "more than 2 M"},
	{what: "observer in a star", args: "trace|--observer-radius|5|--impact|1|--object|star|--object-radius|6|--interior|uniform", says: "allowed: above 6 M, or infinity"},
	{what: "observer at -1 in a shell", args: "trace|--observer-radius|-1|--impact|0|--object|shell|--object-radius|6", says: "negative"},
	{what: "impact out of reach in a shell", args: "trace|--observer-radius|0|--impact|1|--object|shell|--object-radius|6", says: "allowed: 0 to 0 M"},
	{what: "unknown interior", args: "trace|--observer-radius|10|--impact|1|--object|star|--object-radius|6|--interior|hollow", says: "opaque, uniform"},
	{what: "interior of a shell", args: "trace|--observer-radius|10|--impact|1|--object|shell|--object-radius|6|--interior|opaque", says: "only a star"},
	{what: "charged star", args: "trace|--observer-radius|10|--impact|1|--object|star|--object-radius|6|--charge|0.6", says: "--charge"},
	{what: "no object", args: "trace|--observer-radius|10|--impact|1|--object|teapot", says: "teapot"},
	{what: "radius of a hole", args: "trace|--observer-radius|10|--impact|1|--object-radius|4", says: "no object radius"},
	{what: "interior of a hole", args: "trace|--observer-radius|10|--impact|1|--interior|uniform", says: "uniform"},
	{what: "extreme charge", args: "trace|--observer-radius|10|--impact|1|--charge|1", says: "[0, 1)"},
	{what: "observer in a charged hole", args: "trace|--observer-radius|1.8|--impact|1|--charge|0.6", says: "allowed: above 1.8 M"},
	{what: "charge nan", args: "trace|--observer-radius|10|--impact|1|--charge|nan", says: "nan"},
	{what: "negative workers", args: "trace|--observer-radius|10|--impact|1|--workers|-1", says: "--workers"},

	{what: "table and impact", args: "trace|--table|-|--impact|1", says: "exclude"},
	{what: "table missing", args: "trace|--table|none.csv", says: "none.csv"},
	{what: "table a directory", args: "trace|--table|.", says: "directory"},
	{what: "table empty", args: "trace|--table|-", says: "empty"},
	{what: "table of 1 GB of nothing", args: "trace|--table|huge.toml", says: "not a CSV table"},
	{what: "table, one endless line", args: "trace|--table|-", stdin: strings.Repeat("impact,", 1<<14), says: "not a CSV table"},
	{what: "table, unknown column", args: "trace|--table|-", stdin: "impact,observer_radius,spin\n1,2,3\n", says: `:1: unknown column "spin"`},
	{what: "table, column twice", args: "trace|--table|-", stdin: "impact,impact\n", says: "twice"},
	{what: "table, column missing", args: "trace|--table|-", stdin: "impact\n1\n", says: `"observer_radius" is missing`},
	{what: "table, short row", args: "trace|--table|-", stdin: "impact,observer_radius\n1,10\n1\n", says: ":3: "},
	{what: "table, no number", args: "trace|--table|-", stdin: "impact,observer_radius\n1,10\nx,10\n", says: ":3: impact: "},
	{what: "table, out of reach", args: "trace|--table|-", stdin: "impact,observer_radius\n12,10\n", says: ":2: impact 12 M"},
	{what: "table, star", args: "trace|--table|-", stdin: "impact,observer_radius,object\n1,10,star\n", says: ":2: a star needs object_radius"},
	{what: "table, small star", args: "trace|--table|-", stdin: "impact,observer_radius,object,object_radius\n1,10,star,2.25\n", says: ":2: star of radius 2.25 M"},
	{what: "table, radius of a hole", args: "trace|--table|-", stdin: "impact,observer_radius,object_radius\n1,10,0\n1,10,2\n1,10,4\n", says: ":4: object_radius: a black hole"},
	{what: "table, interior of a hole", args: "trace|--table|-", stdin: "impact,observer_radius,interior\n1,10,uniform\n", says: ":2: interior uniform: only a star"},
	{what: "table, charge", args: "trace|--table|-", stdin: "impact,observer_radius,charge\n1,10,0.6\n1,10,1\n", says: ":3: charge 1 M"},
	{what: "table, charge no number", args: "trace|--table|-", stdin: "impact,observer_radius,charge\n1,10,x\n", says: ":2: charge: "},
	{what: "table, observer inside", args: "trace|--table|-", stdin: "impact,observer_radius,object,object_radius\n1,3,shell,6\n1,3,star,6\n", says: ":3: observer at rest at r = 3 M"},
	{what: "table, bad quotes", args: "trace|--table|-", stdin: "impact,observer_radius\n1,\"10\n", says: "standard input:"},

	{what: "probe of nothing", args: "probe|small.toml", says: "--at or --table"},
	{what: "probe twice", args: "probe|small.toml|--at|1,1|--table|-", says: "either"},
	{what: "probe, one number", args: "probe|small.toml|--at|1", says: "two numbers"},
	{what: "probe, nan", args: "probe|small.toml|--at|1,nan", says: "nan"},
	{what: "probe, three numbers", args: "probe|small.toml|--at|1,2,3", says: "2,3"},
	{what: "probe, table", args: "probe|small.toml|--table|-", stdin: "alpha,beta\n1,2\n1,inf\n", says: ":3: beta: "},
	{what: "probe, unknown set", args: "probe|small.toml|--at|1,1|--set|observer.radios=3", says: "observer.radius"},
	{what: "probe, set without =", args: "probe|small.toml|--at|1,1|--set|observer.radius", says: "KEY=VALUE"},

	{what: "no output", args: "render|small.toml", says: "-o FILE.png"},
	{what: "no extension", args: "render|small.toml|-o|image", says: ".png"},
	{what: "extension", args: "render|small.toml|-o|image.jpg", says: "allowed: .png"},
	{what: "one good, one bad", args: "render|small.toml|-o|a.png|-o|b.gif", says: "allowed: .png"},
	{what: "the same twice", args: "render|small.toml|-o|a.png|-o|./a.png", says: "twice"},
	{what: "no folder", args: "render|small.toml|-o|none/a.png", says: "none"},
	{what: "output a folder", args: "render|small.toml|-o|folder.png", says: "folder.png"},
	{what: "unwritable output", args: "render|small.toml|-o|/proc/a.png", says: "/proc/a.png"},
	{what: "figure without output", args: "figure|small.toml", says: "-o FILE.pdf"},
	{what: "figure of a kind", args: "figure|small.toml|-o|a.eps", says: "allowed: .pdf, .svg"},
	{what: "figure number", args: "figure|small.toml|-o|a.pdf|--figure|2", says: "1 to 1"},
	{what: "figure of a layer", args: "figure|small.toml|-o|a.pdf|--set|figure.layer=[\"heat\"]", says: "intensity"},
	{what: "figure without a beam", args: "figure|small.toml|-o|a.pdf|--set|figure.panels=[\"blurred\"]", says: "telescope.beam"},
	{what: "figure without a unit", args: "figure|small.toml|-o|a.pdf|--set|figure.unit=K-planck", says: "needs"},
	{what: "figure of many panels", args: "figure|small.toml|-o|a.pdf|--set|figure.layer=[\"g\",\"r\",\"mu\"]|--set|figure.vary=[\"\",\"\",\"\",\"\",\"\",\"\",\"\",\"\",\"\"]", says: "27 panels"},
	{what: "figure too crowded", args: "figure|small.toml|-o|a.pdf|--set|figure.across=8|--set|figure.panels=[\"path\",\"path\",\"path\",\"path\",\"path\"]", says: "do not fit"},
	{what: "depth", args: "render|small.toml|-o|a.png|--depth|12", says: "8, 16"},
	{what: "curve", args: "render|small.toml|-o|a.png|--curve|cubic", says: "logarithmic"},
	{what: "limits", args: "render|small.toml|-o|a.png|--limits|3", says: "LOW:HIGH"},
	{what: "limits nan", args: "render|small.toml|-o|a.png|--limits|nan:1", says: "nan"},
	{what: "limits equal", args: "render|small.toml|-o|a.png|--limits|1:1", says: "1:1"},
	{what: "percentiles", args: "render|small.toml|-o|a.png|--limits|5%:101%", says: "101"},
	{what: "map", args: "render|small.toml|-o|a.png|--map|rainbow", says: "ember"},
	{what: "layer", args: "render|small.toml|-o|a.png|--layer|colour", says: "delay"},
	{what: "order", args: "render|small.toml|-o|a.png|--order|-1", says: "-1"},
	{what: "order beyond", args: "render|small.toml|-o|a.png|--layer|g|--order|3", says: "max_order"},
	{what: "total of g", args: "render|small.toml|-o|a.png|--layer|g|--order|total", says: "one order"},
	{what: "workers", args: "render|small.toml|-o|a.png|--workers|-2", says: "--workers"},
	{what: "missing scene", args: "render|none.toml|-o|a.png", says: "none.toml"},
	{what: "scene a directory", args: "render|.|-o|a.png", says: "directory"},
	{what: "scene of 1 GB", args: "render|huge.toml|-o|a.png", says: "too large"},
	{what: "scene not UTF-8", args: "render|latin.toml|-o|a.png", says: "UTF-8"},
	{what: "unknown key", args: "render|unknown.toml|-o|a.png", says: "unknown.toml:3:1"},
	{what: "wrong unit", args: "render|small.toml|-o|a.png|--set|observer.inclination=3 M", says: "observer.inclination"},
	{what: "observer inside", args: "render|small.toml|-o|a.png|--set|observer.radius=1.9 M", says: "horizon"},
	{what: "nan", args: "render|small.toml|-o|a.png|--set|emitter.index=nan", says: "emitter.index"},
	{what: "too many pixels", args: "render|small.toml|-o|a.png|--set|field.pixels=[1000000, 1000000]", says: "TiB"},
	{what: "unknown built-in", args: "render|@nowhere|-o|a.png", says: "@first-light"},

	{what: "check of nothing", args: "scene|check", says: "one FILE"},
	{what: "check", args: "scene|check|unknown.toml", says: "unknown.toml:3:1"},
	{what: "list of something", args: "scene|list|x", says: "no argument"},
	{what: "completion", args: "completion|csh", says: "zsh"},
	{what: "man below a file", args: "man|small.toml/man", says: "not a directory"},
	{what: "man into a file", args: "man|small.toml", says: "not a directory"},
}

func TestRefusals(t *testing.T) {
	dir := folder(t)
	write(t, "unknown.toml", "schema = 1\n[observer]\nradios = 3\n")
	write(t, "latin.toml", "schema = 1\ntitle = \"\xe4\"\n")
	if err := os.Mkdir("folder.png", 0o755); err != nil {
		t.Fatal(err)
	}
	huge, err := os.Create("huge.toml")
	if err != nil {
		t.Fatal(err)
	}
	if err := huge.Truncate(1 << 30); err != nil { // sparse
		t.Fatal(err)
	}
	huge.Close()
	before := contents(t, dir)

	for _, r := range refusals {
		t.Run(r.what, func(t *testing.T) {
			var args []string
			if r.args != "" {
				args = strings.Split(r.args, "|")
			}
			got := do(t, r.stdin, args...)
			if got.code != exitUsage {
				t.Errorf("exit %d, want %d", got.code, exitUsage)
			}
			if got.out != "" {
				t.Errorf("printed on stdout: %q", got.out)
			}
			if !strings.Contains(got.errors, r.says) {
				t.Errorf("message %q does not say %q", got.errors, r.says)
			}
			if n := strings.Count(got.errors, "annulet-batch: "); n != 1 {
				t.Errorf("%d messages, want 1: %q", n, got.errors)
			}
			if after := contents(t, dir); !slices.Equal(before, after) {
				t.Errorf("directory holds %q, before %q", after, before)
			}
		})
	}
}

func TestHelpIsNoError(t *testing.T) {
	for _, args := range []string{"--help", "help", "trace --help", "scene --help", "help render"} {
		got := do(t, "", strings.Fields(args)...)
		if got.code != exitDone || got.errors != "" || !strings.Contains(got.out, "Usage:") {
			t.Errorf("%s: exit %d, stderr %q, stdout %q", args, got.code, got.errors, got.out)
		}
	}
}

func TestIsVerb(t *testing.T) {
	for name, want := range map[string]bool{
		"trace": true, "probe": true, "render": true, "scene": true, "version": true,
		"completion": true, "man": true, "help": true, "--help": true,
		"": false, "@first-light": false, "scene.toml": false, "Trace": false,
	} {
		if IsVerb(name) != want {
			t.Errorf("IsVerb(%q) = %v", name, !want)
		}
	}
}

func TestVersion(t *testing.T) {
	if got := do(t, "", "version"); got.code != exitDone || !strings.HasPrefix(got.out, "annulet "+Version+" ") {
		t.Errorf("%+v", got)
	}
	var v struct{ Version string }
	decode(t, do(t, "", "version", "--json").out, &v)
	if v.Version != Version {
		t.Errorf("version %q", v.Version)
	}
}

func TestCompletion(t *testing.T) {
	for _, shell := range shells {
		got := do(t, "", "completion", shell)
		if got.code != exitDone || !strings.Contains(got.out, "annulet-batch") {
			t.Errorf("%s: exit %d, %d bytes", shell, got.code, len(got.out))
		}
	}
}

func TestManPages(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "man", "man1") // is made
	got := do(t, "", "man", dir)
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	page, err := os.ReadFile(filepath.Join(dir, "annulet-batch-render.1"))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{".TH ", ".SH NAME", ".SH OPTIONS", `\-\-limits`, ".SH EXIT STATUS"} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page of render has no %q", want)
		}
	}
	do(t, "", "man", dir)
	again, err := os.ReadFile(filepath.Join(dir, "annulet-batch-render.1"))
	if err != nil || !bytes.Equal(page, again) {
		t.Errorf("the page differs on rerun (%v)", err)
	}
}

func TestSceneVerbs(t *testing.T) {
	folder(t)
	if got := do(t, "", "scene", "check", "small.toml"); got.code != exitDone || !strings.Contains(got.out, "16 x 12") {
		t.Errorf("check: %+v", got)
	}
	if got := do(t, "", "scene", "check", "small.toml", "--set", "field.pixels=[3,4]"); got.code != exitDone || !strings.Contains(got.out, "3 x 4") {
		t.Errorf("check --set: %+v", got)
	}
	if got := do(t, "", "scene", "list"); got.code != exitDone || !strings.HasPrefix(got.out, "@first-light") {
		t.Errorf("list: %+v", got)
	}
	if got := do(t, "", "scene", "keys"); got.code != exitDone || !strings.Contains(got.out, "inclination") {
		t.Errorf("keys: exit %d", got.code)
	}
	var keys struct{ Keys []struct{ Key string } }
	decode(t, do(t, "", "scene", "keys", "--json").out, &keys)
	if !slices.ContainsFunc(keys.Keys, func(k struct{ Key string }) bool { return k.Key == "observer.inclination" }) {
		t.Error("keys --json does not list observer.inclination")
	}
}
