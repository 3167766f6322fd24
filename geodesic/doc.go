// Package geodesic carries light backwards from an observer through a round
// spacetime, and knows the closed forms that judge it.
//
// Conventions: G = c = 1, lengths and times in units of the mass M; r is the
// circumferential (areal) radius, u = 1/r, f = 1 - 2u. A light path stays in
// a plane through the centre; ψ >= 0 is the angle swept in that plane from
// the observer's direction, w = du/dψ, and b = L/E the impact parameter:
//
//	w² = 1/b² - u² + 2u³,   u″ = -u + 3u².
//
// Paths are followed backwards in time, so an "inward leg" (w > 0) is light
// that physically moves outward. Time along a path is regularised with the
// tortoise coordinate r* = r + 2 ln(r/2 - 1), so that it stays finite for an
// observer at infinity: delay = t_obs - t_em - r*(r_obs).
//
// Orientation: the disk axis is N, the observer stands at inclination i from
// it; the screen has α to the right and β up along projected N. Then
// λ = Lz/E = -α sin i, and a path with screen angle s (counter-clockwise
// from +α) meets the disk plane after sweeping
//
//	ψ_n = π/2 + nπ + arctan(tan i sin s),   n = 0, 1, 2 …
//
// with n the image order. Nothing here knows of pixels or of what shines.
//
// Sources: Darwin, Proc. R. Soc. A 249, 180 (1959); Bardeen, Press &
// Teukolsky, ApJ 178, 347 (1972); Luminet, A&A 75, 228 (1979); Carlson,
// Numer. Algorithms 10, 13 (1995); Dormand & Prince, J. Comput. Appl. Math.
// 6, 19 (1980). Citations from memory.
package geodesic
