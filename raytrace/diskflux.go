package raytrace

import (
	"errors"
	"fmt"
	"math"
	"sync"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"

	"gonum.org/v1/gonum/integrate/quad"
)

// The integration over a disk.
const (
	fluxFirstAngles = 16   // screen angles to begin with; doubled until the sum stays
	fluxMostAngles  = 2048 // edge-on disks need most
	fluxNodes       = 16   // Gauss-Legendre nodes between two marked radii
	fluxSettled     = 1e-5 // relative change at which doubling ends
	leastSqueeze    = 0.01 // of screen angles edge-on, see angle
	fluxSecants     = 60   // steps of the search for a radius
	fluxRadius      = 1e-9 // relative error of a radius at which its search ends
)

// ErrDiskFlux: the flux of a disk is not known from on-disk integration here.
var ErrDiskFlux = errors.New("on-disk integration needs a parallel field and an object that light does not pass through")

// DiskFlux returns the flux of the whole image of an emitter, a disk, order
// by order: ∫ I dα dβ over the screen, in the unit of intensity times M², what
// the field shows or not, and as if nothing else shone or stood in the way.
//
// It is integrated on the disk, dα dβ = b (∂b/∂r) dr ds with s the screen
// angle, r by Gauss and Legendre in log r and s by the trapezoid rule, and
// shares nothing with the pixels but the paths. Change is by how much the
// last doubling of angles changed the sum.
func (v *View) DiskFlux(d *emit.Disk) (orders []float64, change float64, err error) {
	round, ok := v.Spacetime.(*geodesic.Round)
	if !ok || !v.Field.IsParallel() || !round.Opaque() {
		return nil, 0, ErrDiskFlux
	}
	alone := *v
	alone.Emitters = []Emitter{d}
	alone.Plan.Plane, alone.Plan.Sky, alone.Plan.Reach = true, false, 0
	b, err := alone.newBench(nil)
	if err != nil {
		return nil, 0, err
	}
	f := &diskFlux{bench: b, disk: d, dark: round.DarkImpact(), sphere: round.PhotonSphere()}
	f.squeeze = max(leastSqueeze, math.Sqrt(math.Abs(math.Cos(v.Observer.InclinationDeg*math.Pi/180))))
	f.marks(round)
	n := fluxFirstAngles
	sum, err := f.angles(n, 0)
	for {
		if err != nil {
			return nil, 0, err
		}
		middle, err := f.angles(n, 0.5)
		if err != nil {
			return nil, 0, err
		}
		total, before := 0.0, 0.0
		for k := range sum {
			before += sum[k]
			sum[k] = (sum[k] + middle[k]) / 2
			total += sum[k]
		}
		n *= 2
		if change = math.Abs(total-before) / math.Abs(total); !(change > fluxSettled) || n >= fluxMostAngles {
			return sum, change, nil
		}
	}
}

type diskFlux struct {
	bench   *bench
	disk    *emit.Disk
	dark    float64   // b below which a path that misses the radius ends on the object
	radii   []float64 // nodes, M, growing
	weight  []float64 // of each, in dr
	sphere  float64   // the photon sphere, M
	squeeze float64   // see angle

	at      []float64 // b of the lines of sight, radius after radius for every angle
	bracket []bracket
}

// bracket holds the b sought between two others.
type bracket struct {
	lo, hi       float64
	offLo, offHi float64 // by how much 1/r is off; NaN where the plane is not met
	kept         int8    // the end that the last step kept: 1 hi, -1 lo
}

// marks sets the nodes: between the rims, the ISCO and the breaks.
func (f *diskFlux) marks(round *geodesic.Round) {
	marks := []float64{f.disk.Inner}
	if isco := round.ISCO(); isco > f.disk.Inner && isco < f.disk.Outer {
		marks = append(marks, isco)
	}
	if p, ok := f.disk.Profile.(interface{ Breaks() []float64 }); ok {
		for _, r := range p.Breaks() {
			if r > marks[len(marks)-1] && r < f.disk.Outer {
				marks = append(marks, r)
			}
		}
	}
	marks = append(marks, f.disk.Outer)
	x, w := make([]float64, fluxNodes), make([]float64, fluxNodes)
	for k := range len(marks) - 1 {
		quad.Legendre{}.FixedLocations(x, w, math.Log(marks[k]), math.Log(marks[k+1]))
		for i := range x {
			r := math.Exp(x[i])
			f.radii, f.weight = append(f.radii, r), append(f.weight, w[i]*r)
		}
	}
}

// angles sums over n screen angles, the first one shifted by a share of a
// step, order by order.
func (f *diskFlux) angles(n int, shift float64) ([]float64, error) {
	b, orders := f.bench, f.bench.view.Plan.MaxOrder+1
	sums := make([]float64, orders)
	size := n * len(f.radii)
	f.at = make([]float64, size)
	f.bracket = make([]bracket, size)
	for order := range orders {
		f.begin(order, n, shift)
		for range fluxSecants {
			if err := f.follow(n, shift); err != nil {
				return nil, err
			}
			if f.narrow(order) {
				break
			}
		}
		b.shade()
		for k := range size {
			j := f.crossing(k, order)
			if j < 0 {
				continue
			}
			through := 1.0
			for i := b.at.Start[k]; i < j; i++ {
				if _, lit, passes := b.look(i); lit {
					through *= passes
				}
			}
			s, _, _ := b.look(j)
			_, rate := f.angle(k, n, shift)
			ring := rate * f.at[k] / math.Abs(b.at.Slope[j]) * f.weight[k%len(f.radii)]
			sums[order] += through * s.intensity * ring * 2 * math.Pi / float64(n)
		}
	}
	return sums, nil
}

// begin brackets b around every radius, or finds it by closed form.
func (f *diskFlux) begin(order, n int, shift float64) {
	o := f.bench.view.Observer
	sinI, cosI := geodesic.SinCosDeg(o.InclinationDeg)
	closed := f.sphere == geodesic.PhotonSphere && o.Motion == geodesic.Static
	for k := range f.at {
		r := f.radii[k%len(f.radii)]
		if closed {
			s, _ := f.angle(k, n, shift)
			psi := geodesic.FirstPlaneAngle(sinI, cosI, math.Sin(s)) + float64(order)*math.Pi
			f.at[k] = geodesic.RimImpact(1/o.Radius, psi, r)
			f.bracket[k] = bracket{lo: f.at[k], hi: f.at[k]}
			continue
		}
		hi := f.dark * (1 + 1e-9)
		if r > f.sphere { // no path of larger b comes as near
			hi = r / f.disk.Gas.Lapse(r) * (1 + 1e-12)
		}
		f.bracket[k] = bracket{hi: hi, offLo: math.NaN(), offHi: math.NaN()}
		f.at[k] = hi / 2
	}
}

// angle is the screen angle s of line of sight k, radians, and ds/dt where t
// goes around evenly. Edge-on the image changes within cos i of the horizontal:
// s is squeezed towards it by the square root, with which the trapezoid rule
// converges fastest, as functions of t are then analytic to either side of it
// for as far from both causes.
func (f *diskFlux) angle(k, n int, shift float64) (s, rate float64) {
	sin, cos := math.Sincos(2 * math.Pi * (float64(k/len(f.radii)) + shift) / float64(n))
	q := f.squeeze
	return math.Atan2(q*sin, cos), q / (cos*cos + q*q*sin*sin)
}

// follow traces the lines of sight at these b.
func (f *diskFlux) follow(n int, shift float64) error {
	b := f.bench
	b.screen = b.screen[:0]
	for k, impact := range f.at {
		s, _ := f.angle(k, n, shift)
		sin, cos := math.Sincos(s)
		b.screen = append(b.screen, [2]float64{impact * cos, impact * sin})
	}
	_, err := b.follow(geodesic.Want{Delay: true, Slope: true})
	return err
}

// crossing returns ray k's crossing of that order, -1 if it has none.
func (f *diskFlux) crossing(k, order int) int32 {
	a := &f.bench.at
	for j := a.Start[k]; j < a.Start[k+1]; j++ {
		if a.Surface[j] == geodesic.Plane && int(a.Order[j]) == order {
			return j
		}
	}
	return -1
}

// narrow moves every bracket and says whether all are as narrow as they get:
// halving until both ends meet the plane, then the Illinois method (Dowell &
// Jarratt, BIT 11, 168 (1971), from memory) in 1/r.
func (f *diskFlux) narrow(order int) bool {
	done := true
	for k := range f.at {
		r := f.radii[k%len(f.radii)]
		off := math.NaN() // 1/r there less the one sought
		beyond := f.at[k] >= f.dark
		if j := f.crossing(k, order); j >= 0 {
			off = 1/f.bench.at.R[j] - 1/r
			beyond = off < 0
		}
		p := &f.bracket[k]
		if math.Abs(off)*r < fluxRadius || p.lo == p.hi {
			continue
		}
		if beyond {
			p.hi, p.offHi = f.at[k], off
			if p.kept < 0 {
				p.offLo /= 2
			}
			p.kept = -1
		} else {
			p.lo, p.offLo = f.at[k], off
			if p.kept > 0 {
				p.offHi /= 2
			}
			p.kept = 1
		}
		next := (p.lo + p.hi) / 2
		if secant := p.hi - p.offHi*(p.hi-p.lo)/(p.offHi-p.offLo); secant > p.lo && secant < p.hi {
			next = secant
		}
		if next <= p.lo || next >= p.hi {
			continue
		}
		f.at[k], done = next, false
	}
	return done
}

// wholeFlux is the sum of DiskFlux over orders. That of the last disk is
// kept: a hand that moves the field asks for it again and again.
func (v *View) wholeFlux(d *emit.Disk, e scenes.Emitter, o scenes.Object) (total float64, err error) {
	lastFlux.Lock()
	defer lastFlux.Unlock()
	e.TotalFlux = 0
	key := fmt.Sprint(e, o, v.Observer, v.Plan, v.scene.Trace)
	if e.Table == "" && key == lastFlux.key { // a file may have changed
		return lastFlux.total, nil
	}
	orders, _, err := v.DiskFlux(d)
	for _, flux := range orders {
		total += flux
	}
	if err == nil {
		lastFlux.key, lastFlux.total = key, total
	}
	return total, err
}

var lastFlux struct {
	sync.Mutex
	key   string
	total float64
}

// scaleTo scales a disk to its total flux, at infinity.
func (l *lighting) scaleTo(d *emit.Disk, e scenes.Emitter) error {
	theta, ok := l.scene.ThetaG()
	if !ok {
		return errors.New("total_flux needs the angle of M")
	}
	v := &View{
		scene: l.scene, Spacetime: l.object, Field: Field{Projection: Parallel},
		Plan: geodesic.Plan{Tolerance: l.scene.Trace.Tolerance, MaxOrder: l.scene.Trace.MaxOrder},
	}
	var err error
	if v.Observer, err = newObserver(l.scene.Observer); err != nil {
		return err
	}
	total, err := v.wholeFlux(d, e, l.scene.Object)
	if err != nil {
		return fmt.Errorf("total_flux: %w", err)
	}
	side := theta / scenes.MicroarcsecondsPerRadian
	d.Scale *= e.TotalFlux * scenes.Jansky / (total * side * side)
	return nil
}
