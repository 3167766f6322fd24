package files

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"annulet/app/files/foreign"

	"codeberg.org/sbinet/npyio/npz"
)

// Two foreign readers: npyio, and NumPy itself where there is one.
func TestNPZ(t *testing.T) {
	image := []float32{1, 2, 3, float32(math.NaN()), 5, math.MaxFloat32}
	many := make([]float64, 20001) // more than a block
	for k := range many {
		many[k] = math.Sqrt(float64(k))
	}
	var file bytes.Buffer
	w := NewNPZ(&file)
	for _, err := range []error{
		w.Float32("image", image, 2, 3), w.Float64("many", many, len(many)),
		w.Text("scene", "title = \"µ\"\n"), w.Float32("none", nil, 0, 4), w.Close(),
	} {
		if err != nil {
			t.Fatal(err)
		}
	}
	r, err := npz.NewReader(bytes.NewReader(file.Bytes()), int64(file.Len()))
	if err != nil {
		t.Fatal(err)
	}
	if shape := r.Header("image.npy").Descr.Shape; len(shape) != 2 || shape[0] != 2 || shape[1] != 3 {
		t.Errorf("shape %v", shape)
	}
	var got []float32
	if err := r.Read("image.npy", &got); err != nil {
		t.Fatal(err)
	}
	for k := range image {
		if math.Float32bits(got[k]) != math.Float32bits(image[k]) {
			t.Errorf("value %d: %g, want %g", k, got[k], image[k])
		}
	}
	var gotMany []float64
	if err := r.Read("many.npy", &gotMany); err != nil {
		t.Fatal(err)
	}
	for k := range many {
		if gotMany[k] != many[k] {
			t.Fatalf("value %d: %g, want %g", k, gotMany[k], many[k])
		}
	}

	if err := NewNPZ(&file).Float32("image", image, 7); err == nil {
		t.Error("a wrong shape was written")
	}
	numpyReads(t, file.Bytes())
}

func numpyReads(t *testing.T, file []byte) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.npz")
	if err := os.WriteFile(path, file, 0o666); err != nil {
		t.Fatal(err)
	}
	out := foreign.Python(t, "numpy", `
import numpy, sys
f = numpy.load(sys.argv[1])
print(sorted(f.files), f["image"].shape, f["image"].dtype, f["image"][1, 1], f["many"][20000] == 20000**.5, f["none"].shape, repr(bytes(f["scene"]).decode()))
`, path)
	want := `['image', 'many', 'none', 'scene'] (2, 3) float32 5.0 True (0, 4) 'title = "µ"\n'`
	if got := strings.TrimSpace(out); got != want {
		t.Errorf("NumPy reads %s, want %s", got, want)
	}
}
