package verbs

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// --only-below confines the files that a scene names, whatever verb reads
// it, and links do not lead out.
func TestOnlyBelow(t *testing.T) {
	dir := folder(t)
	for _, d := range []string{"in", "out", "in/deep"} {
		if err := os.Mkdir(d, 0o755); err != nil {
			t.Fatal(err)
		}
	}
	const rows = "2,1\n30,1\n"
	write(t, "in/good.csv", rows)
	write(t, "out/secret.csv", rows)
	for link, to := range map[string]string{
		"in/link.csv": "../out/secret.csv", "in/back": "../out", "in/fine": "deep", "in/nowhere.csv": "../out/none.csv", "alias": "in",
	} {
		if err := os.Symlink(to, link); err != nil {
			t.Skip("NOT RUN: no symbolic links here: ", err)
		}
	}
	write(t, "in/deep/good.csv", rows)
	scene := func(file string) string {
		return smallScene + "profile = \"table\"\ntable = \"" + file + "\"\n"
	}
	for _, c := range []struct {
		file string
		good bool
	}{
		{"good.csv", true}, {"deep/good.csv", true}, {"deep/../good.csv", true}, {"fine/good.csv", true},
		{filepath.Join(dir, "in/good.csv"), true}, {filepath.Join(dir, "alias/good.csv"), true},
		{"../out/secret.csv", false}, {"link.csv", false}, {"back/secret.csv", false}, {filepath.Join(dir, "out/secret.csv"), false},
		{"deep/../../out/secret.csv", false}, {"nowhere.csv", false}, {"/etc/passwd", false}, {"../inside.csv", false},
		{filepath.Join(dir, "in") + "/fine/../../out/secret.csv", false}, {"none/../../out/secret.csv", false},
		{filepath.Join(dir, "in") + "/back/../good.csv", false}, // .. of where the link leads: dir, not dir/in
	} {
		write(t, "in/s.toml", scene(c.file))
		got := do(t, "", "scene", "check", "in/s.toml", "--only-below", "in")
		switch {
		case c.good && got.code != exitDone:
			t.Errorf("%s: %+v", c.file, got)
		case !c.good && (got.code != exitUsage || !strings.Contains(got.errors, "in/s.toml:11:9: emitter.table: ")):
			t.Errorf("%s: %+v", c.file, got)
		}
	}
	// one that is not there is another matter: it cannot be read, not refused
	write(t, "in/s.toml", scene("none.csv"))
	if got := do(t, "", "scene", "check", "in/s.toml", "--only-below", "in"); got.code != exitDone {
		t.Errorf("%+v", got)
	}

	write(t, "in/s.toml", scene("../out/secret.csv"))
	for _, args := range []string{
		"render in/s.toml -o a.png", "probe in/s.toml --at 1,8", "audit in/s.toml", "rings in/s.toml", "line in/s.toml", "cut in/s.toml",
		"spectrum in/s.toml --from 0.1keV --to 20keV", "visibility in/s.toml", "lightcurve in/s.toml", "compare in/s.toml", "stations in/s.toml --radius 4",
		"sweep in/s.toml --vary observer.inclination=1,2 --out swept",
	} {
		got := do(t, "", append(strings.Fields(args), "--only-below", "in")...)
		if got.code != exitUsage || !strings.Contains(got.errors, "in/s.toml:11:9") {
			t.Errorf("%s: %+v", args, got)
		}
	}
	if got := do(t, "", "render", "in/s.toml", "-o", "a.png"); got.code != exitDone {
		t.Errorf("unconfined: %+v", got)
	}
	if got := do(t, "", "render", "in/s.toml", "-o", "a.png", "--only-below", "in", "--set", "emitter.table=good.csv"); got.code != exitDone {
		t.Errorf("set to another file: %+v", got)
	}
	write(t, "in/s.toml", scene("good.csv"))
	got := do(t, "", "render", "in/s.toml", "-o", "a.png", "--only-below", "in", "--set", "emitter.1.table=link.csv")
	if got.code != exitUsage || !strings.Contains(got.errors, "--set emitter.1.table: names a file outside") {
		t.Errorf("set outside: %+v", got)
	}
	// a case of a sweep that leads out fails alone
	got = do(t, "", "figure", "in/s.toml", "-o", "a.pdf", "--only-below", "in", "--set", `figure.vary=["emitter.table = link.csv"]`)
	if got.code != exitUsage || !strings.Contains(got.errors, "emitter.table") {
		t.Errorf("figure.vary: exit %d: %s", got.code, got.errors)
	}
	got, s := sweepOf(t, "in/s.toml", "--vary", "emitter.table=good.csv,link.csv", "--out", "swept", "--only-below", "in", "--product", "picture")
	if got.code != exitCouldNot || s.Done != 1 || s.Failed != 1 || !strings.Contains(s.Reasons[0].Text, "outside the folder") {
		t.Errorf("%+v", got)
	}
	// sky and baselines, and a folder that is none
	write(t, "in/sky.toml", "schema = 1\n[[emitter]]\nkind = \"sky\"\nimage = \"../out/sky.png\"\n")
	write(t, "in/uv.toml", smallScene+"[object]\ntheta_g = \"3.8 uas\"\n[telescope]\nuv = \"../out/uv.csv\"\n")
	for _, c := range [][2]string{{"in/sky.toml --only-below in", "sky.toml:4:9: emitter.image"}, {"in/uv.toml --only-below in", ": telescope.uv"},
		{"in/s.toml --only-below none", "none"}, {"in/s.toml --only-below in/s.toml", "not a folder"}} {
		if got := do(t, "", append([]string{"scene", "check"}, strings.Fields(c[0])...)...); got.code != exitUsage || !strings.Contains(got.errors, c[1]) {
			t.Errorf("%s: %+v", c[0], got)
		}
	}
}
