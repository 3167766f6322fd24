package geodesic

import "math"

// HorizonRadius is the radius of the Schwarzschild horizon, M.
const HorizonRadius = 2.0

// PhotonSphere is the radius of the circular light orbit of the
// Schwarzschild exterior, M.
const PhotonSphere = 3.0

// Lapse returns √(1-2/r), the rate of a static clock in the Schwarzschild
// exterior at r, M; 1 at infinity.
func Lapse(r float64) float64 { return math.Sqrt(1 - 2/r) }
