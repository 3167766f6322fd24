package emit

import "annulet/geodesic"

// Without says which effects of relativity a picture leaves out, to show what
// they do. The motion of the gas is left out by gas at rest.
type Without struct {
	// Bending: light goes straight. Where it leaves the gas, its direction
	// in the static frame is that of the straight line.
	Bending bool
	// Gravity: no gravitational shift between gas and observer, only that
	// of their motions in the local static frames.
	Gravity       bool
	ObserverLapse float64 // √-g_tt at the observer
}

// redshift returns g and μ of gas at r, M; the other arguments are those of
// geodesic.Gas's RedshiftFactor, and eta.
func (w Without) redshift(gas geodesic.Gas, r, gObs, lambda, eta, kr, sense float64) (g, mu float64) {
	lapse := gas.Lapse(r)
	if w.Bending {
		// the constants of motion of a path that leaves in that direction:
		// n_φ = λ√A/r in the static frame, λ√A(r_obs)/r of the line
		turned := w.ObserverLapse / lapse
		lambda *= turned
		eta *= turned * turned
	}
	g = gas.RedshiftFactor(r, gObs, lambda, kr, sense)
	mu = geodesic.EmissionCosine(g, gObs, eta, r)
	return w.shifted(g, lapse), mu
}

// shifted takes the gravitational part out of g of light from where √-g_tt
// is lapse.
func (w Without) shifted(g, lapse float64) float64 {
	if w.Gravity {
		g *= w.ObserverLapse / lapse
	}
	return g
}
