package emit

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
	"sync"
)

// Star is a point of the sky.
type Star struct {
	CosTheta float64 // cosine of the polar angle from N
	Phi      float64 // azimuth, radians
	Flux     float64 // brightness times steradians
}

// Stars is a sky of points.
type Stars struct {
	at    []Vector // in the order of the cells
	flux  []float64
	first []int32 // of each cell's stars, and one more
	bands [starBands]starBand
	mean  *Picture // for footprints that hold many
}

// starBand is a band of cells around N, all of one width in azimuth.
type starBand struct{ first, cells int32 }

const (
	starBands     = 64 // in polar angle; cells are about square
	meanColumns   = 256
	meanRows      = meanColumns / 2
	widestForStar = 0.15 // radians: wider footprints show the mean. Taste.
)

// The random sky. Counts of stars rise as N(>F) ∝ F^(-3/2), that of equal
// stars spread evenly through space; the number is taste.
const (
	randomStars = 20000
	countsSlope = -1.5
)

// RandomStars returns the star field of a seed, of mean brightness 1. The
// last one made is kept.
func RandomStars(seed int64) *Stars {
	lastStars.Lock()
	defer lastStars.Unlock()
	if lastStars.stars == nil || lastStars.seed != seed {
		lastStars.seed, lastStars.stars = seed, scatter(seed)
	}
	return lastStars.stars
}

var lastStars struct {
	sync.Mutex
	seed  int64
	stars *Stars
}

func scatter(seed int64) *Stars {
	rng := rand.New(rand.NewPCG(uint64(seed), 0x5ca77e2ed))
	all := make([]Star, randomStars)
	var sum float64
	for k := range all {
		// fluxes are the quantiles of the law: the brightest stars of every
		// seed are equally bright
		flux := math.Pow((float64(k)+0.5)/randomStars, 1/countsSlope)
		all[k] = Star{CosTheta: 2*rng.Float64() - 1, Phi: 2 * math.Pi * rng.Float64(), Flux: flux}
		sum += flux
	}
	for k := range all {
		all[k].Flux *= 4 * math.Pi / sum
	}
	return NewStars(all)
}

// NewStars returns a sky of these stars.
func NewStars(all []Star) *Stars {
	s := &Stars{}
	var cells int32
	for n := range s.bands {
		middle := (float64(n) + 0.5) * math.Pi / starBands
		s.bands[n] = starBand{cells, int32(math.Ceil(2 * starBands * math.Sin(middle)))}
		cells += s.bands[n].cells
	}
	all = slices.Clone(all)
	slices.SortStableFunc(all, func(a, b Star) int { return cmp.Compare(s.cell(a), s.cell(b)) })
	s.first = make([]int32, cells+1)
	values := make([]float32, meanColumns*meanRows)
	for _, star := range all {
		s.at = append(s.at, direction(star.CosTheta, star.Phi))
		s.flux = append(s.flux, star.Flux)
		s.first[s.cell(star)+1]++
		row := min(meanRows-1, int(math.Acos(star.CosTheta)/math.Pi*meanRows))
		column := wrapIndex(int(math.Floor((1-star.Phi/(2*math.Pi))*meanColumns)), meanColumns)
		size := bandWeight(float64(row), float64(row+1), meanRows) * 2 * math.Pi / meanColumns
		values[row*meanColumns+column] += float32(star.Flux / size)
	}
	for k := range cells {
		s.first[k+1] += s.first[k]
	}
	s.mean = newPicture(meanColumns, meanRows, values)
	return s
}

func (s *Stars) cell(star Star) int32 {
	band := min(starBands-1, int(math.Acos(star.CosTheta)/math.Pi*starBands))
	return s.bands[band].first + s.bands[band].at(star.Phi)
}

// at is the cell of the band at an azimuth.
func (b starBand) at(phi float64) int32 {
	return int32(wrapIndex(b.index(phi), int(b.cells)))
}

// index is at without wrapping around.
func (b starBand) index(phi float64) int {
	return int(math.Floor(phi / (2 * math.Pi) * float64(b.cells)))
}

// over spreads every star over the pixels around it with the weights of
// linear interpolation, which add up to 1, and divides by the solid angle
// that the pixel sees: flux is kept in every magnification.
func (s *Stars) over(f *footprint) float64 {
	size := math.Hypot(f.u[0], f.u[1]) + math.Hypot(f.v[0], f.v[1])
	if size > widestForStar {
		return s.mean.over(f)
	}
	det := f.u[0]*f.v[1] - f.u[1]*f.v[0]
	if det == 0 {
		return 0
	}
	sinTheta := math.Hypot(f.at[0], f.at[1])
	theta, phi := math.Atan2(sinTheta, f.at[2]), math.Atan2(f.at[1], f.at[0])
	reach := math.Pi // in azimuth
	if sinSize := math.Sin(size); sinSize < sinTheta && theta > size && math.Pi-theta > size {
		reach = math.Asin(sinSize/sinTheta) + 1e-9
	}
	const unit = starBands / math.Pi
	var sum float64
	for n := max(0, int((theta-size)*unit)); n <= min(starBands-1, int((theta+size)*unit)); n++ {
		band := s.bands[n]
		from, to := band.index(phi-reach), band.index(phi+reach)
		to = min(to, from+int(band.cells)-1)
		for i := from; i <= to; i++ {
			cell := band.first + int32(wrapIndex(i, int(band.cells)))
			for k := s.first[cell]; k < s.first[cell+1]; k++ {
				p := s.at[k]
				if p.dot(f.at) < 0 {
					continue
				}
				d1, d2 := p.dot(f.e1), p.dot(f.e2)
				x := math.Abs(d1*f.v[1]-d2*f.v[0]) / math.Abs(det) // in pixels
				y := math.Abs(d2*f.u[0]-d1*f.u[1]) / math.Abs(det)
				if x < 1 && y < 1 {
					sum += s.flux[k] * (1 - x) * (1 - y)
				}
			}
		}
	}
	return sum / math.Abs(det)
}
