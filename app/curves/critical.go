package curves

import (
	"errors"
	"math"

	"annulet/raytrace"
	"annulet/scenes"
)

// smooth is how many points make a curve smooth. Taste.
const smooth = 360

// around returns the screen angles of a smooth curve.
func around(point func(sin, cos float64) (alpha, beta float64)) [][2]float64 {
	points := make([][2]float64, smooth)
	for k := range points {
		points[k][0], points[k][1] = point(math.Sincos(2 * math.Pi * float64(k) / smooth))
	}
	return points
}

// Critical returns the critical curve on a field, or the limb of an opaque
// star that is larger than its photon sphere, and which of the two it is. Its
// first point is not repeated. The error says why there is none.
func Critical(s scenes.Scene, f raytrace.Field) (points [][2]float64, name string, err error) {
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		return nil, "", err
	}
	name = "critical curve"
	opaque := s.Object.Kind == "star" && s.Object.Interior == "opaque"
	larger := object.Edge() >= object.PhotonSphere()
	if larger {
		name = "limb"
	}
	if larger && !opaque {
		return nil, "", errors.New("no critical curve: the object is larger than its photon sphere")
	}
	if f.IsParallel() {
		b := object.CriticalImpact()
		if larger {
			b = object.Edge() / object.Lapse(object.Edge())
		}
		return around(func(sin, cos float64) (float64, float64) { return b * cos, b * sin }), name, nil
	}
	at := object.Station(s.Observer.Radius)
	angle, centre := at.ShadowStatic, 0.
	switch s.Observer.Motion {
	case "orbit":
		angle, centre = at.ShadowOrbit, at.ShadowCentre
	case "infall":
		angle = at.ShadowInfall
	}
	if math.IsNaN(angle) {
		return nil, "", errors.New("no critical curve here")
	}
	sinC, cosC := math.Sincos(centre)
	return around(func(sin, cos float64) (float64, float64) {
		x, y, z := math.Sin(angle)*cos, math.Sin(angle)*sin, math.Cos(angle)
		return project(f, x*cosC+z*sinC, y, z*cosC-x*sinC)
	}), name, nil
}

// Beam returns the scene's beam at half power about zero, M, for an angular
// scale of theta µas an M; closed. North lies clockwise of the disk axis, which
// is up, by the position angle.
func Beam(s scenes.Scene, theta float64) [][2]float64 {
	b := s.Telescope.Beam
	major, minor := b[0]/theta/2, b[1]/theta/2
	sinB, cosB := math.Sincos((b[2] - s.Observer.PositionAngle) * math.Pi / 180)
	points := around(func(sin, cos float64) (float64, float64) {
		along, across := major*cos, minor*sin
		return across*cosB - along*sinB, along*cosB + across*sinB
	})
	return append(points, points[0])
}

// project returns the screen coordinates of a unit vector: right, up, ahead;
// NaN where the field has none.
func project(f raytrace.Field, right, up, ahead float64) (alpha, beta float64) {
	switch {
	case f.Projection == raytrace.AllSky:
		return math.Atan2(right, ahead), math.Asin(max(-1, min(1, up)))
	case ahead <= 0:
		return math.NaN(), math.NaN()
	}
	return right / ahead, up / ahead
}
