package assets

import _ "embed"

// IconPNG is the icon, 256 × 256 pixels with 8 bits a component and alpha;
// icon.svg beside this file is the same drawing for packages.
//
//go:embed icon.png
var IconPNG []byte
