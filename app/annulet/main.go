// Annulet opens its window on a scene:
//
//	annulet                  the built-in scene @first-light
//	annulet @first-light     a built-in scene
//	annulet scene.toml       a scene file
//
// With a verb it works without a window, as annulet-batch does; annulet help
// lists the verbs. Exit codes: 0 done, 1 could not (no display, for example),
// 2 bad usage or scene.
package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"

	"annulet/app/desk"
	"annulet/app/verbs"
	"annulet/scenes"
)

const (
	exitCouldNot = 1
	exitUsage    = 2
)

func main() {
	args := os.Args[1:]
	if len(args) > 0 && verbs.IsVerb(args[0]) {
		os.Exit(verbs.Run(args, os.Stdin, os.Stdout, os.Stderr))
	}
	os.Exit(open(args))
}

// open opens the window and returns the exit code.
func open(args []string) int {
	name := scenes.BuiltIn()[0].Name
	switch {
	case len(args) > 1 || len(args) == 1 && args[0] == "":
		fmt.Fprintln(os.Stderr, "annulet: the window opens one scene: annulet [SCENE]; annulet help lists the verbs")
		return exitUsage
	case len(args) == 1:
		name = args[0]
	}
	doc, called, err := desk.Load(name)
	if err != nil {
		hint := ""
		if errors.Is(err, fs.ErrNotExist) {
			hint = "; it is no verb either (annulet help lists them)"
		}
		fmt.Fprintf(os.Stderr, "annulet: %v%s\n", err, hint)
		return exitUsage
	}
	if err := desk.HasDisplay(); err != nil {
		fmt.Fprintf(os.Stderr, "annulet: %v, so there can be no window; without one: annulet render %s -o image.png\n", err, name)
		return exitCouldNot
	}
	desk.Run(doc, called, os.Stderr)
	return 0
}
