package figure

import (
	"fmt"
	"math"
	"math/cmplx"

	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

func (m *maker) options() measure.Options {
	return measure.Options{Workers: m.Workers, Report: m.Measured}
}

// ordersName names the curve of an image order.
func ordersName(n int) string { return fmt.Sprintf("n = %d", n) }

// dashOf is the line style of an image order; that of the total is solid.
func dashOf(n int) []float64 { return dashes[1+n%(len(dashes)-1)] }

// line is the profile of a line by image order, energy flux in bins of g over
// the whole, so that the area under the total is 1.
func (m *maker) line() (panel, error) {
	l, err := measure.NewLine(m.ctx, m.view, m.Figure.Bin, m.options())
	if err != nil {
		return nil, err
	}
	total, _ := l.Totals()
	if !(total > 0) {
		return nil, refuse("the line has no flux")
	}
	highest := 0.
	steps := func(bins []float64) []point {
		g := float64(l.First) * l.Bin
		points := []point{{g, 0}}
		for k, v := range bins {
			y := v / total / l.Bin
			highest = max(highest, y)
			points = append(points, point{g + float64(k)*l.Bin, y}, point{g + float64(k+1)*l.Bin, y})
		}
		return append(points, point{g + float64(len(bins))*l.Bin, 0})
	}
	p := &graphPanel{curves: []curve{{name: "total", points: steps(l.Energy), order: -1}}}
	for n, bins := range l.Orders {
		p.curves = append(p.curves, curve{name: ordersName(n), points: steps(bins), dash: dashOf(n), order: n})
	}
	first, last := float64(l.First)*l.Bin, float64(l.First+len(l.Energy))*l.Bin
	margin := 0.03 * (last - first)
	p.f = frame{
		X: axis{Lo: first - margin, Hi: last + margin, Title: "g = ν/ν₀"},
		Y: axis{Lo: 0, Hi: 1.08 * highest, Title: "normalised energy flux"},
	}
	for _, e := range m.Scene.Emitters {
		if e.Rest > 0 {
			rest := e.Rest * scenes.Planck / scenes.ElementaryCharge / 1e3 / (1 + m.Scene.Object.Redshift)
			p.f.Top = &axis{Lo: rest * p.f.X.Lo, Hi: rest * p.f.X.Hi, Title: "E (keV)"}
			break
		}
	}
	m.note("profile of a narrow line by image order, whole image, bins of %g in g; bound on any bin %.1e of the total; g from %.4f to %.4f", l.Bin, l.Bound/total, l.Edge.Min, l.Edge.Max)
	return p, nil
}

func (m *maker) spectrum() (panel, error) {
	s, err := measure.NewSpectrum(m.ctx, m.view, 0, m.options())
	if err != nil {
		return nil, err
	}
	scale, title := 1., "flux (M² of the intensity)"
	if jansky, ok := m.view.Jansky(1); ok {
		scale, title = jansky, "flux (Jy)"
	}
	unit, name := 1e9, "ν (GHz)"
	if s.Frequencies[0] > 1e16 { // X-rays are told by their energy
		unit, name = 1e3*scenes.ElementaryCharge/scenes.Planck, "hν (keV)"
	}
	p := &graphPanel{f: frame{X: axis{Lo: math.Inf(1), Hi: 0, Log: true, Title: name}}}
	highest := 0.
	along := func(flux []float64) []point {
		var all []point
		for k, y := range flux {
			x := s.Frequencies[k] / unit
			p.f.X.Lo, p.f.X.Hi = min(p.f.X.Lo, x), max(p.f.X.Hi, x)
			highest = max(highest, y*scale)
			all = append(all, point{x, y * scale})
		}
		return all
	}
	p.curves = append(p.curves, curve{name: "total", points: along(s.Flux), order: -1})
	for n, flux := range s.Orders {
		p.curves = append(p.curves, curve{name: ordersName(n), points: along(flux), dash: dashOf(n), order: n})
	}
	p.f.Y = logAxis(highest, p.curves, title)
	worst := 0.
	for k, b := range s.Bound {
		worst = max(worst, b/s.Flux[k])
	}
	m.note("spectrum by image order, whole image; relative bound %.1e", worst)
	return p, nil
}

// mostDecades bounds a logarithmic axis downwards. Taste.
const mostDecades = 5

// logAxis reaches from a little below the curves, and no further down than
// mostDecades, to a little above.
func logAxis(highest float64, all []curve, title string) axis {
	lowest := highest
	for _, c := range all {
		for _, p := range c.points {
			if p.Y > 0 {
				lowest = min(lowest, p.Y)
			}
		}
	}
	lowest = max(lowest, highest*math.Pow(10, -mostDecades))
	if lowest > highest/30 {
		lowest = highest / 30
	}
	return axis{Lo: lowest / 1.3, Hi: highest * 1.6, Log: true, Title: title}
}

// visibilitySteps is how many baselines a curve has.
const visibilitySteps = 300

// The grid of visibilities, half of the default both ways: against that one
// amplitudes of @first-light change by up to 3e-5 of the flux, of @broad-line
// by 1.4e-4.
const (
	visibilityLines = 360
	visibilityCells = 120
)

// visibility is the amplitude along baselines to the east and to the north at
// the first frequency: of the whole images of disks where nothing else shines,
// with the part of order 1; else of the field's pixels.
func (m *maker) visibility() (panel, error) {
	view := m.view
	if k := m.frequencies()[0]; k > 0 {
		var err error
		if view, err = m.view.WithFrequency(k); err != nil {
			return nil, err
		}
	}
	theta, _ := m.Scene.ThetaG()
	perGlambda := 1e9 * theta / scenes.MicroarcsecondsPerRadian // cycles per M
	object, err := raytrace.NewObject(m.Scene.Object)
	if err != nil {
		return nil, err
	}
	const lobes = 5 // of the critical curve's diameter
	most := lobes / (2 * object.CriticalImpact())
	whole := view.Field.IsParallel()
	for _, e := range m.Scene.Emitters {
		whole = whole && e.Kind == "disk"
	}
	transform := func(at [][2]float64) ([][]measure.Visibility, error) {
		o := m.options()
		o.Lines, o.Cells = visibilityLines, visibilityCells
		return measure.DiskVisibilities(m.ctx, view, at, o)
	}
	if !whole {
		plate, _, err := m.plate(m.frequencies()[0])
		if err != nil {
			return nil, err
		}
		img, err := measure.NewImage(view.Field, plate.Total)
		if err != nil {
			return nil, err
		}
		most = min(most, img.Nyquist()/2)
		transform = func(at [][2]float64) ([][]measure.Visibility, error) {
			all, err := img.Visibilities(m.ctx, at)
			return [][]measure.Visibility{all}, err
		}
	}
	sin, cos := math.Sincos(m.Scene.Observer.PositionAngle * math.Pi / 180)
	ways := []struct {
		name        string
		alpha, beta float64 // of the screen, a unit vector
	}{{"east–west", -cos, sin}, {"north–south", sin, cos}}
	const steps = visibilitySteps + 1
	var at [][2]float64
	for _, to := range ways {
		for n := range steps {
			x := most * float64(n) / visibilitySteps
			at = append(at, [2]float64{x * to.alpha, x * to.beta})
		}
	}
	orders, err := transform(at)
	if err != nil {
		return nil, err
	}
	sum := make([]complex128, len(at))
	for _, o := range orders {
		for k, v := range o {
			sum[k] += v.Value
		}
	}
	flux := cmplx.Abs(sum[0])
	if !(flux > 0) {
		return nil, refuse("the image is dark")
	}
	along := func(of func(k int) complex128) (all []point) {
		for n := range steps {
			all = append(all, point{most * float64(n) / visibilitySteps / perGlambda, cmplx.Abs(of(n)) / flux})
		}
		return all
	}
	p := &graphPanel{}
	for w, to := range ways {
		p.curves = append(p.curves, curve{name: to.name, order: w - 1, dash: dashes[w],
			points: along(func(k int) complex128 { return sum[w*steps+k] })})
	}
	of := "the field's pixels"
	if whole {
		of = "the whole image"
	}
	if whole && len(orders) > 1 {
		p.curves = append(p.curves, curve{name: "n = 1, east–west", order: 1, dash: dashes[2],
			points: along(func(k int) complex128 { return orders[1][k].Value })})
		of += " (to about 1e-4 of its flux), and of its order 1"
	}
	p.f = frame{X: axis{Lo: 0, Hi: most / perGlambda, Title: "baseline (Gλ)"}, Y: logAxis(1, p.curves, "visibility amplitude")}
	m.note("visibility amplitude of %s, relative to the flux, against the baseline", of)
	return p, nil
}

func (m *maker) lightCurve() (panel, error) {
	times := m.Scene.Time.Frames()
	found, err := measure.LightCurve(m.ctx, m.view, times, m.options())
	if err != nil {
		return nil, err
	}
	mean, worst, highest := 0., 0., 0.
	for _, f := range found {
		mean += f.Flux / float64(len(found))
		worst = max(worst, f.Bound)
	}
	along := func(of func(measure.Instant) float64) (all []point) {
		for _, f := range found {
			y := of(f) / mean
			highest = max(highest, y)
			all = append(all, point{f.T, y})
		}
		return all
	}
	p := &graphPanel{curves: []curve{{name: "total", order: -1, points: along(func(f measure.Instant) float64 { return f.Flux })}}}
	for n := range found[0].Orders {
		p.curves = append(p.curves, curve{name: ordersName(n), order: n, dash: dashOf(n),
			points: along(func(f measure.Instant) float64 { return f.Orders[n] })})
	}
	p.f = frame{X: axis{Lo: times[0], Hi: times[len(times)-1], Title: "t (M)"}, Y: axis{Lo: 0, Hi: 1.08 * highest, Title: "flux / mean"}}
	if seconds, ok := m.Scene.ObservedSecondsPerM(); ok {
		unit, name := 1., "t (s)"
		switch span := (p.f.X.Hi - p.f.X.Lo) * seconds; {
		case span > 2*86400:
			unit, name = 86400, "t (d)"
		case span > 2*3600:
			unit, name = 3600, "t (h)"
		case span > 600:
			unit, name = 60, "t (min)"
		case span < 0.1:
			unit, name = 1e-3, "t (ms)"
		}
		p.f.Top = &axis{Lo: p.f.X.Lo * seconds / unit, Hi: p.f.X.Hi * seconds / unit, Title: name}
	}
	m.note("light curve by image order over its mean; bound %.1e of the mean", worst/mean)
	return p, nil
}

// cutPoints is how many lines of sight a cut has.
const cutPoints = 400

// cut is the intensity along β = 0, by image order.
func (m *maker) cut() (panel, error) {
	left, right, _, _ := edges(m.view.Field)
	found, err := measure.Cut(m.ctx, m.view, [2]float64{left, 0}, [2]float64{right, 0}, cutPoints)
	if err != nil {
		return nil, err
	}
	convert, name, err := m.unit(m.view)
	if err != nil {
		return nil, err
	}
	highest := 0.
	along := func(of func(measure.CutPoint) float64) (all []point) {
		for _, f := range found {
			y := convert(of(f))
			if y > 0 {
				highest = max(highest, y)
			} else {
				y = math.NaN() // below any logarithmic axis
			}
			all = append(all, point{f.Alpha, y})
		}
		return all
	}
	p := &graphPanel{curves: []curve{{name: "total", order: -1, points: along(func(f measure.CutPoint) float64 { return f.Intensity })}}}
	for n := range found[0].Orders {
		p.curves = append(p.curves, curve{name: ordersName(n), order: n, dash: dashOf(n),
			points: along(func(f measure.CutPoint) float64 { return f.Orders[n].Intensity })})
	}
	x := axis{Lo: left, Hi: right, Title: "α (M)"}
	theta, sky := angular(m.Scene, m.view.Field)
	switch {
	case sky:
		p.f.Top = &axis{Lo: left * theta, Hi: right * theta, Title: "α (µas)"}
		if m.Scene.Observer.PositionAngle == 0 {
			p.f.Top = &axis{Lo: -left * theta, Hi: -right * theta, Title: "Δα (µas)"}
		}
	case !m.view.Field.IsParallel():
		const deg = 180 / math.Pi
		x = axis{Lo: left * deg, Hi: right * deg, Title: "α (deg)"}
		for k := range p.curves {
			for n := range p.curves[k].points {
				p.curves[k].points[n].X *= deg
			}
		}
	}
	p.f.X, p.f.Y = x, logAxis(highest, p.curves, name)
	m.note("intensity along β = 0 by image order")
	return p, nil
}

// paths are light paths in their plane, the observer to the right.
func (m *maker) paths() (panel, error) {
	if !m.view.Field.IsParallel() {
		return nil, refuse("paths are told by their impact parameters, which a %s field has not", m.Scene.Field.Projection)
	}
	object, err := raytrace.NewObject(m.Scene.Object)
	if err != nil {
		return nil, err
	}
	critical := object.CriticalImpact()
	impacts := m.Figure.Impacts
	if len(impacts) == 0 {
		for _, x := range []float64{0.4, 0.8, 0.99, 1.001, 1.05, 1.2, 1.5, 2, 2.5} {
			impacts = append(impacts, critical*x)
		}
	}
	side := 2.4 * critical
	for _, b := range impacts {
		side = max(side, 1.15*b)
	}
	p := &graphPanel{square: true}
	circle := func(r float64) (all []point) {
		const smooth = 180
		for k := range smooth + 1 {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / smooth)
			all = append(all, point{r * cos, r * sin})
		}
		return all
	}
	ground := object.Edge() // of a hole, its horizon
	if m.Scene.Object.Kind == "black-hole" || m.Scene.Object.Interior == "opaque" {
		p.solids = append(p.solids, circle(ground))
	} else {
		p.curves = append(p.curves, curve{name: m.Scene.Object.Kind, points: circle(ground), order: -1, fine: true})
	}
	if ps := object.PhotonSphere(); ps > ground {
		p.curves = append(p.curves, curve{name: "photon sphere", points: circle(ps), order: -1, dash: dashes[1], fine: true})
	}
	for _, b := range impacts {
		const perTurn = 720
		track, err := m.view.Walk(b, 0, perTurn)
		if err != nil {
			return nil, err
		}
		c := curve{order: -1, fine: true}
		for k, r := range track.R {
			sin, cos := math.Sincos(track.Psi[k])
			q := point{r * cos, r * sin}
			if math.IsInf(r, 1) { // parallel to the direction to the observer
				q = point{20 * side, b}
			}
			c.points = append(c.points, q)
		}
		p.curves = append(p.curves, c)
	}
	p.f = frame{X: axis{Lo: -side, Hi: side, Title: "x (M)"}, Y: axis{Lo: -side, Hi: side, Title: "y (M)"}}
	m.note("light paths in their plane, traced backwards from the observer to the right, impact parameters %s M; grey: the %s", numberList(impacts), map[bool]string{true: "horizon's inside", false: "object"}[m.Scene.Object.Kind == "black-hole"])
	return p, nil
}

func numberList(all []float64) string {
	text := ""
	for k, x := range all {
		if k > 0 {
			text += ", "
		}
		text += fmt.Sprintf("%.4g", x)
	}
	return text
}
