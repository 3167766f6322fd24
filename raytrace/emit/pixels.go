package emit

import "math"

// Pixels is what the pixels around a block's rays cover at the observer.
type Pixels struct {
	// Toward, Right and Up are unit vectors along the direction of the
	// observer and the screen's α and β, in the axes of the disk: z along N,
	// x at azimuth 0.
	Toward, Right, Up Vector
	// Column and Row, one entry a ray, are how (b cos s, b sin s), M, changes
	// from one side of the pixel to the other.
	Column, Row [][2]float64
}

// Resize makes room for n rays, keeping the storage it has.
func (p *Pixels) Resize(n int) {
	if cap(p.Column) < n {
		p.Column, p.Row = make([][2]float64, n), make([][2]float64, n)
	}
	p.Column, p.Row = p.Column[:n], p.Row[:n]
}

// Orient sets the unit vectors for an observer in that direction, degrees.
func (p *Pixels) Orient(inclination, azimuth float64) {
	sinI, cosI := math.Sincos(inclination * math.Pi / 180)
	sinA, cosA := math.Sincos(azimuth * math.Pi / 180)
	p.Toward = Vector{sinI * cosA, sinI * sinA, cosI}
	p.Right = Vector{-sinA, cosA, 0}
	p.Up = Vector{-cosI * cosA, -cosI * sinA, sinI}
}

// Vector is a vector in space.
type Vector [3]float64

// mix returns a v + b w.
func (v Vector) mix(a float64, w Vector, b float64) Vector {
	return Vector{a*v[0] + b*w[0], a*v[1] + b*w[1], a*v[2] + b*w[2]}
}

func (v Vector) dot(w Vector) float64 { return v[0]*w[0] + v[1]*w[1] + v[2]*w[2] }

// direction is the unit vector at a polar angle and azimuth.
func direction(cosTheta, phi float64) Vector {
	sin, cos := math.Sincos(phi)
	sinTheta := math.Sqrt(max(0, 1-cosTheta*cosTheta))
	return Vector{sinTheta * cos, sinTheta * sin, cosTheta}
}
