package output

import (
	"cmp"
	"io"
	"math"
	"slices"
	"strings"

	"annulet/app/files"
	"annulet/raytrace"
	"annulet/scenes"
)

// FITS writes plates, whole or in strips, as one file: the total in the
// primary unit; an extension for every layer and image order, EXTNAME the
// layer and EXTVER the order plus one; where the scene has several frequencies,
// the total at each; and the scene, a table of one cell.
type FITS struct {
	file       *files.FITS
	images     []fitsImage
	firstTotal int // unit of the first frequency's total; 0 without several
}

// fitsImage is what a unit shows.
type fitsImage struct {
	layer raytrace.Layer
	order int // -1 for the total
}

// sceneUnit is the name of the extension with the scene, totalUnit that of
// the totals at several frequencies, EXTVER the number of the frequency.
const (
	sceneUnit = "SCENE"
	totalUnit = "TOTAL"
)

// severalFrequencies are those of the scene if there is more than one.
func severalFrequencies(v *raytrace.View) []float64 {
	if all := v.Frequencies(); len(all) > 1 {
		return all
	}
	return nil
}

// NewFITS lays the file out.
func NewFITS(w io.WriterAt, v *raytrace.View, s scenes.Scene, layers []raytrace.Layer, p Provenance) (*FITS, error) {
	f := &FITS{images: []fitsImage{{raytrace.Intensity, -1}}}
	columns, rows := v.Field.Columns, v.Field.Rows
	wcs := worldCoordinates(v.Field, s)
	light := v.Radiometry()
	primary := slices.Concat(brightness(light, s), wcs, sceneCards(s), calibration(light), numericsCards(p))
	units := []files.HDU{{Columns: columns, Rows: rows, Cards: primary}}
	for _, l := range kept(layers) {
		for order := range v.Plan.MaxOrder + 1 {
			cards := slices.Clone(wcs)
			if l.Layer == raytrace.Intensity {
				cards = append(cards, brightness(light, s)...)
			} else {
				cards = append(cards, files.Card{Key: "BUNIT", Value: l.Unit, Comment: l.Text})
			}
			cards = append(cards,
				files.Card{Key: "LAYER", Value: l.Name, Comment: l.Text},
				files.Card{Key: "ORDER", Value: order, Comment: "image order: half orbits"})
			units = append(units, files.HDU{Name: strings.ToUpper(l.Name), Version: order + 1, Columns: columns, Rows: rows, Cards: cards})
			f.images = append(f.images, fitsImage{l.Layer, order})
		}
	}
	for k, frequency := range severalFrequencies(v) {
		tuned, err := v.WithFrequency(k)
		if err != nil {
			return nil, err
		}
		cards := slices.Concat(brightness(tuned.Radiometry(), s), wcs, []files.Card{
			{Key: "FREQ", Value: frequency, Comment: "[Hz] observed"},
		}, fluxCards(notIntegrated, notIntegrated), calibration(tuned.Radiometry()))
		f.firstTotal = cmp.Or(f.firstTotal, len(units))
		units = append(units, files.HDU{Name: totalUnit, Version: k + 1, Columns: columns, Rows: rows, Cards: cards})
	}
	units = append(units, files.HDU{Name: sceneUnit, Column: "TEXT", Bytes: []byte(p.Scene)})
	var err error
	f.file, err = files.NewFITS(w, units...)
	return f, err
}

// Put writes rows of all images, from firstRow up.
func (f *FITS) Put(plate *raytrace.Plate, firstRow int) error {
	for k, i := range f.images {
		values := plate.Total
		if i.order >= 0 {
			values = plate.Layer(i.layer, i.order)
		}
		if err := f.file.Rows(k, firstRow, values); err != nil {
			return err
		}
	}
	return nil
}

// PutFrequency writes the total at the kth of several frequencies.
func (f *FITS) PutFrequency(k int, plate *raytrace.Plate) error {
	unit := f.firstTotal + k
	if plate.Flux != nil {
		flux, bound := plate.WholeFlux()
		for _, c := range fluxCards(flux, bound) {
			if err := f.file.Set(unit, c); err != nil {
				return err
			}
		}
	}
	return f.file.Rows(unit, 0, plate.Total)
}

// Close writes the headers, with the bounds as they are known in the end.
func (f *FITS) Close(p Provenance) error {
	for _, c := range boundCards(p) {
		if err := f.file.Set(0, c); err != nil {
			return err
		}
	}
	return f.file.Close()
}

// brightness is the unit of intensities; relative ones are pure numbers, whose
// unit is blank. Units as in section 4.3 of the FITS standard.
func brightness(r raytrace.Radiometry, s scenes.Scene) []files.Card {
	if s.Radiance() == scenes.Relative {
		return []files.Card{{Key: "BUNIT", Value: "", Comment: "a ratio, see INTENSIT"}}
	}
	return []files.Card{{Key: "BUNIT", Value: r.Plate(), Comment: "specific or bolometric intensity, observed"}}
}

// calibration says in words what intensities are, and their flux density.
func calibration(r raytrace.Radiometry) []files.Card {
	cards := []files.Card{{Key: "INTENSIT", Value: r.Plate(), Comment: "unit of intensities"}}
	if perPixel, err := r.In(raytrace.JyPerPixel); err == nil {
		cards = append(cards, files.Card{Key: "JYPERPIX", Value: perPixel(1), Comment: "[Jy/pixel] of an intensity of 1"})
	}
	return cards
}

// worldCoordinates places the pixels: in degrees on the sky about the object,
// east left, where the scene gives an angular scale, else in M; with a scale
// also by the screen coordinates in M as description A, and by offsets in
// microarcseconds as B. Source: Greisen &
// Calabretta, A&A 395, 1061 (2002), and Calabretta & Greisen, A&A 395, 1077
// (2002).
func worldCoordinates(f raytrace.Field, s scenes.Scene) []files.Card {
	across, up := f.Pitches()
	x := float64(f.Columns)/2 + 0.5 - f.Center[0]/across
	y := float64(f.Rows)/2 + 0.5 - f.Center[1]/up
	axes := func(alternate, type1, type2, unit string, cdelt1, cdelt2 float64) []files.Card {
		cards := []files.Card{
			{Key: "WCSAXES" + alternate, Value: 2},
			{Key: "CTYPE1" + alternate, Value: type1}, {Key: "CTYPE2" + alternate, Value: type2},
			{Key: "CRPIX1" + alternate, Value: x, Comment: "the object's centre; the first pixel's is 1"}, {Key: "CRPIX2" + alternate, Value: y},
			{Key: "CRVAL1" + alternate, Value: 0.0}, {Key: "CRVAL2" + alternate, Value: 0.0},
			{Key: "CDELT1" + alternate, Value: cdelt1}, {Key: "CDELT2" + alternate, Value: cdelt2},
		}
		if unit != "" {
			cards = append(cards, files.Card{Key: "CUNIT1" + alternate, Value: unit}, files.Card{Key: "CUNIT2" + alternate, Value: unit})
		}
		return cards
	}
	const deg = 180 / math.Pi
	switch f.Projection {
	case raytrace.Perspective: // the observer's own sky, longitude growing to the right
		return axes("", "OBLN-TAN", "OBLT-TAN", "deg", across*deg, up*deg)
	case raytrace.AllSky:
		return axes("", "OBLN-CAR", "OBLT-CAR", "deg", across*deg, up*deg)
	}
	screen := func(alternate string) []files.Card {
		cards := axes(alternate, "ALPHA", "BETA", "", across, up)
		return append(cards, files.Card{Key: "WCSNAME" + alternate, Value: "screen", Comment: "alpha, beta in GM/c2"})
	}
	theta, ok := s.ThetaG()
	if !ok || !math.IsInf(s.Observer.Radius, 1) {
		return screen("")
	}
	const uasPerDeg = 3600e6
	scale := theta / uasPerDeg
	cards := axes("", "RA---TAN", "DEC--TAN", "deg", -across*scale, up*scale)
	sin, cos := math.Sincos(s.Observer.PositionAngle / deg)
	cards = append(cards,
		files.Card{Key: "PC1_1", Value: cos, Comment: "N is at the position angle, from north through east"},
		files.Card{Key: "PC1_2", Value: -sin}, files.Card{Key: "PC2_1", Value: sin}, files.Card{Key: "PC2_2", Value: cos},
		files.Card{Key: "WCSNAME", Value: "sky", Comment: "offsets from the object, put at RA = Dec = 0"},
		files.Card{Key: "UASPIX", Value: across * theta, Comment: "[uas] side of a pixel"},
		files.Card{Key: "UASM", Value: theta, Comment: "[uas] GM/(c2 D)"})
	// without CUNIT: the standard has no microarcsecond, and readers refuse it
	offsets := axes("B", "EAST", "NORTH", "", -across*theta, up*theta)
	offsets = append(offsets,
		files.Card{Key: "PC1_1B", Value: cos}, files.Card{Key: "PC1_2B", Value: -sin}, files.Card{Key: "PC2_1B", Value: sin}, files.Card{Key: "PC2_2B", Value: cos},
		files.Card{Key: "WCSNAMEB", Value: "uas", Comment: "[uas] offsets from the object, tangent plane"})
	return slices.Concat(cards, screen("A"), offsets)
}

// sceneCards tell the scene in keywords, for those who do not read its text.
func sceneCards(s scenes.Scene) []files.Card {
	cards := []files.Card{
		{Key: "OBJECT", Value: s.Object.Kind},
		{Key: "INCLIN", Value: s.Observer.Inclination, Comment: "[deg] from the disk axis"},
		{Key: "POSANG", Value: s.Observer.PositionAngle, Comment: "[deg] of the disk axis"},
	}
	if math.IsInf(s.Observer.Radius, 1) {
		cards = append(cards, files.Card{Key: "OBSRAD", Value: "infinity", Comment: "the observer's radius"})
	} else {
		cards = append(cards, files.Card{Key: "OBSRAD", Value: s.Observer.Radius, Comment: "[GM/c2] the observer's radius"})
	}
	if metres, ok := s.MetresPerM(); ok {
		seconds, _ := s.SecondsPerM()
		cards = append(cards,
			files.Card{Key: "MLENGTH", Value: metres / 1000, Comment: "[km] GM/c2, the M of lengths"},
			files.Card{Key: "MTIME", Value: seconds, Comment: "[s] GM/c3, the M of times, without redshift"})
	}
	if s.Title != "" {
		cards = append(cards, files.Card{Key: "TITLE", Value: s.Title})
	}
	if len(s.Field.Frequency) > 0 {
		cards = append(cards, files.Card{Key: "FREQ", Value: s.Field.Frequency[0], Comment: "[Hz] observed"})
	}
	return cards
}

func numericsCards(p Provenance) []files.Card {
	cards := append([]files.Card{
		{Key: "CREATOR", Value: "Annulet " + p.Version},
		{Key: "TOLERANC", Value: p.Tolerance, Comment: "of light paths, relative"},
		{Key: "MAXORDER", Value: p.MaxOrder, Comment: "image orders are 0 to this"},
	}, boundCards(p)...)
	cards = append(cards, files.Card{Key: "HISTORY", Comment: NotIncludedLine(p.NotIncluded)})
	for _, text := range p.Assumed {
		cards = append(cards, files.Card{Key: "HISTORY", Comment: "Assumed: " + text + "."})
	}
	if p.Audit != "" {
		cards = append(cards, files.Card{Key: "HISTORY", Comment: "Audit: " + p.Audit})
	}
	return append(cards, files.Card{Key: "HISTORY", Comment: "The scene that made this file is in the extension " + sceneUnit + "."})
}

// notIntegrated stands for a flux where pixels are sampled at their middles.
const notIntegrated = "not integrated"

// boundCards are known when all is rendered.
func boundCards(p Provenance) []files.Card {
	var flux, bound any = notIntegrated, notIntegrated
	if p.Flux != nil {
		flux, bound = p.WholeFlux()
	}
	return append([]files.Card{
		{Key: "RBOUND", Value: p.WorstBound, Comment: "worst bound on r, relative"},
		{Key: "PSIBOUND", Value: p.WorstAngle, Comment: "[rad] worst bound on a swept angle"},
		{Key: "PATHS", Value: p.Paths, Comment: "light paths"},
	}, fluxCards(flux, bound)...)
}

// fluxCards tell a flux and its bound, numbers or notIntegrated.
func fluxCards(flux, bound any) []files.Card {
	return []files.Card{
		{Key: "FLUX", Value: flux, Comment: "over the field, BUNIT times M2 or sr"},
		{Key: "FLUXBND", Value: bound, Comment: "bound on FLUX"},
	}
}
