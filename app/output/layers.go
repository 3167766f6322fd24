package output

import (
	"fmt"
	"slices"
	"strings"

	"annulet/raytrace"
)

// layerInfo is how files name a layer.
type layerInfo struct {
	Layer raytrace.Layer
	Name  string // in NPZ and on the command line; FITS takes it in capitals
	Unit  string // FITS unit; "" for a pure number, which lengths in GM/c2 are
	Text  string
}

// Layers are all of a plate's, in the order of files.
var Layers = []layerInfo{
	{raytrace.Intensity, "intensity", "", "received, relative to the emitter's own unit"},
	{raytrace.Redshift, "g", "", "redshift factor nu_obs/nu_em"},
	{raytrace.Radius, "r", "", "circumferential radius, GM/c2"},
	{raytrace.Azimuth, "phi", "rad", "azimuth about the disk axis"},
	{raytrace.Delay, "delay", "", "t_obs - t_em - r*(r_obs), GM/c3"},
	{raytrace.Mu, "mu", "", "cosine of the emission angle in the gas frame"},
}

// ParseLayers reads names separated by commas; "" is all of them.
func ParseLayers(text string) ([]raytrace.Layer, error) {
	var names []string
	for _, l := range Layers {
		names = append(names, l.Name)
	}
	if text == "" {
		text = strings.Join(names, ",")
	}
	var layers []raytrace.Layer
	for name := range strings.SplitSeq(text, ",") {
		k := slices.Index(names, strings.TrimSpace(name))
		if k < 0 {
			return nil, fmt.Errorf("layer %q: allowed: %s", name, strings.Join(names, ", "))
		}
		if slices.Contains(layers, Layers[k].Layer) {
			return nil, fmt.Errorf("layer %q stands twice", name)
		}
		layers = append(layers, Layers[k].Layer)
	}
	return layers, nil
}

// kept returns the descriptions of those layers, in the order of files.
func kept(layers []raytrace.Layer) []layerInfo {
	return slices.DeleteFunc(slices.Clone(Layers), func(l layerInfo) bool { return !slices.Contains(layers, l.Layer) })
}
