// Icongen draws the icon of Annulet, a thin ring whose approaching left side
// is the brighter and wider, as SVG and as PNG.
//
// It runs through go generate in folder assets and takes the names of the
// SVG and the PNG file to write.
package main

import (
	"bytes"
	"fmt"
	"image/png"
	"os"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, "icongen:", err)
		os.Exit(1)
	}
}

func run(args []string) error {
	if len(args) != 2 {
		return fmt.Errorf("want two arguments, the SVG and the PNG file to write, got %d", len(args))
	}
	const mode = 0o644
	if err := os.WriteFile(args[0], drawSVG(), mode); err != nil {
		return err
	}
	var out bytes.Buffer
	if err := png.Encode(&out, drawPixels()); err != nil {
		return err
	}
	return os.WriteFile(args[1], out.Bytes(), mode)
}
