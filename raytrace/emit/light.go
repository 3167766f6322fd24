package emit

// Light is what an emitter sends along each crossing of a block; every slice
// has one entry a crossing, which means something only where Lit.
type Light struct {
	Lit       []bool    // the crossing lies on the emitter
	Passes    []float64 // share of the light from behind that gets through, 0 to 1: 0 ends the path
	Intensity []float64 // as the observer receives it
	G         []float64 // redshift factor ν_obs/ν_em
	Mu        []float64 // |cos| of the emission angle in the gas frame
}

// Resize makes room for n crossings, all unlit, keeping the storage it has.
func (l *Light) Resize(n int) {
	if cap(l.Lit) < n {
		*l = Light{
			Lit: make([]bool, n), Passes: make([]float64, n),
			Intensity: make([]float64, n), G: make([]float64, n), Mu: make([]float64, n),
		}
	}
	l.Lit, l.Passes = l.Lit[:n], l.Passes[:n]
	l.Intensity, l.G, l.Mu = l.Intensity[:n], l.G[:n], l.Mu[:n]
	clear(l.Lit)
}

// Reads says which columns of the crossings an emitter looks at, beyond
// Surface and R; what nobody reads need not be worked out.
type Reads struct{ Place, KR, Delay bool }
