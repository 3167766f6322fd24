package verbs

import (
	"fmt"
	"io"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"annulet/scenes"
)

func newScene(s streams) *cobra.Command {
	cmd := &cobra.Command{
		Use:   "scene",
		Short: "check scene files, list built-in scenes, explain the keys, recover scenes",
		Args:  cobra.ArbitraryArgs,
		RunE:  groupOnly,
	}
	cmd.AddCommand(newSceneCheck(s), newSceneList(s), newSceneKeys(s), newSceneRecover(s))
	return cmd
}

func newSceneCheck(s streams) *cobra.Command {
	var set []string
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "check FILE",
		Short: "check a scene file without tracing it",
		Args:  takes(1, "one FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			d, err := s.loadScene(args[0], set)
			if err != nil {
				return err
			}
			scene := d.Scene()
			for _, n := range scene.Notes() {
				s.note("%s", n)
			}
			if asJSON {
				return writeJSON(s.out, struct {
					File  string `json:"file"`
					Title string `json:"title"`
					OK    bool   `json:"ok"`
				}{args[0], scene.Title, true})
			}
			_, err = fmt.Fprintf(s.out, "%s: a right scene, %d x %d pixels, orders 0 to %d\n",
				args[0], scene.Field.Pixels[0], scene.Field.Pixels[1], scene.Trace.MaxOrder)
			return err
		},
	}
	addSet(cmd.Flags(), &set)
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

func newSceneList(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "list",
		Short: "list the built-in scenes, all invented; the first is the default",
		Args:  takes(0, ""),
		RunE: func(*cobra.Command, []string) error {
			type entry struct {
				Name  string `json:"name"`
				Title string `json:"title"`
			}
			var all []entry
			for _, b := range scenes.BuiltIn() {
				all = append(all, entry{b.Name, b.Title})
			}
			if asJSON {
				return writeJSON(s.out, struct {
					Scenes []entry `json:"scenes"`
				}{all})
			}
			w := tabwriter.NewWriter(s.out, 0, 0, 2, ' ', 0)
			for _, e := range all {
				fmt.Fprintf(w, "%s\t%s\n", e.Name, e.Title)
			}
			return w.Flush()
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

func newSceneKeys(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "keys",
		Short: "print the reference of the scene file's keys",
		Args:  takes(0, ""),
		RunE: func(*cobra.Command, []string) error {
			if asJSON {
				return keysJSON(s.out)
			}
			return scenes.FormatKeys(s.out)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

func keysJSON(w io.Writer) error {
	type key struct {
		Key     string   `json:"key"`
		Allowed string   `json:"allowed"`
		Unit    *string  `json:"unit"`
		Units   []string `json:"units"`
		Default *string  `json:"default"`
		Text    string   `json:"text"`
		Later   bool     `json:"not_in_this_version"`
	}
	orNull := func(s string) *string {
		if s == "" {
			return nil
		}
		return &s
	}
	var all []key
	for _, k := range scenes.Keys() {
		units := k.Units
		if units == nil {
			units = []string{}
		}
		all = append(all, key{k.Path(), k.Allowed(), orNull(k.Unit), units, orNull(k.Default), k.Text, k.Later})
	}
	return writeJSON(w, struct {
		Keys []key `json:"keys"`
	}{all})
}
