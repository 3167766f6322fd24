package verbs

import (
	"strings"
	"testing"

	"annulet/app/files/foreign"
)

const blackbodyScene = `schema = 1
[object]
mass     = "10 Msun"
distance = "3 kpc"
[observer]
inclination = "60 deg"
[field]
width     = "30 M"
pixels    = [12, 10]
frequency = ["1 keV", "2.5 keV", "0.5 keV"]
[[emitter]]
kind       = "disk"
outer      = "12 M"
profile    = "novikov-thorne"
luminosity = "0.1 Edd"
light      = "blackbody"
`

// One file holds the image at every frequency, equal to the bit to that of a
// scene with that frequency alone; astropy and numpy tell which is which.
func TestFrequencies(t *testing.T) {
	folder(t)
	write(t, "hot.toml", blackbodyScene)
	for _, c := range [][]string{
		{"-o", "all.npz", "-o", "all.fits"},
		{"-o", "0.npz", "--set", `field.frequency="1 keV"`},
		{"-o", "1.npz", "--set", `field.frequency="2.5 keV"`},
		{"-o", "2.npz", "--set", `field.frequency="0.5 keV"`},
	} {
		if got := do(t, "", append([]string{"render", "hot.toml"}, c...)...); got.code != exitDone {
			t.Fatalf("%v: %+v", c, got)
		}
	}
	out := foreign.Python(t, "astropy", `
import numpy as np
from astropy.io import fits
import astropy.units as u
n = np.load("all.npz")
hz = (np.array([1, 2.5, 0.5]) * u.keV).to(u.Hz, u.spectral()).value
assert np.allclose(n["frequency"], hz, rtol=1e-9), n["frequency"]
with fits.open("all.fits", checksum=True) as f:
    f.verify("exception")
    assert [x.ver for x in f if x.name == "TOTAL"] == [1, 2, 3]
    for k in range(3):
        alone, x = np.load(f"{k}.npz"), f["TOTAL", k + 1]
        assert alone["total"].max() > 0
        assert np.array_equal(n["totals"][k], alone["total"])
        assert np.array_equal(x.data, alone["total"]) and abs(x.header["FREQ"] / hz[k] - 1) < 1e-9
        assert u.Unit(x.header["BUNIT"], format="fits") == u.Unit("W m-2 Hz-1 sr-1")
        area = (30 / 12) ** 2 # of a pixel, M2
        assert abs(x.header["FLUX"] / (x.data.astype("f8").sum() * area) - 1) < 1e-6
    assert np.array_equal(f[0].data, n["totals"][0]) and u.Unit(f["R", 1].header["BUNIT"], format="fits") == u.dimensionless_unscaled
    km = 10 * 1.3271244e20 / 299792458**2 / 1000
    assert abs(f[0].header["MLENGTH"] / km - 1) < 1e-12 and abs(f[0].header["MTIME"] / (km / 299792.458) - 1) < 1e-12
print("equal")
`)
	if strings.TrimSpace(out) != "equal" {
		t.Error(out)
	}
	if out := foreign.Run(t, "fitsverify", "-q", "all.fits"); !strings.Contains(out, "verification OK") {
		t.Error(out)
	}
}
