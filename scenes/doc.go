// Package scenes reads and writes the scene file: what is looked at, from
// where, over which field, and what shines there.
//
// A scene file is TOML with schema = 1. Quantities are strings with a unit
// ("60 deg", "4.1e6 +- 0.1e6 Msun") or bare numbers in the key's default
// unit. One table of keys (type, unit, range, default, text) drives the
// checks, the defaults, the reference that `scene keys` prints and the
// tooltips of the desk.
//
// Units inside this package: lengths and times in M (GM/c², GM/c³), angles
// in degrees, masses in solar masses, distances in parsec, angles on the sky
// in microarcseconds, frequencies in hertz. In a file a bare distance is in kpc
// and a bare frequency in GHz, as the table of keys says. A length in km or s
// needs the object's mass; every angle on the sky needs mass and distance, or
// theta_g. A scene without an emitter is legal: its image is empty.
//
// Object, observer and emitters are held against one another: a key that the
// kind at hand does not have is refused, and so is what cannot stay where it
// is put, such as gas circling inside a shell. What is legal but strange is
// said by Notes. Nothing here knows of light paths or pixels beyond their
// count; the few radii that the checks need (horizon, photon sphere,
// innermost stable orbit) are in radii.go.
package scenes
