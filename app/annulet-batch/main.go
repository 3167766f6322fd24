// Annulet-batch is Annulet without its window: the verbs alone. It needs no C
// compiler to build and no library to run.
package main

import (
	"os"

	"annulet/app/verbs"
)

func main() { os.Exit(verbs.Run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) }
