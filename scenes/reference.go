package scenes

import (
	"bufio"
	"fmt"
	"io"
	"strings"
)

// FormatKeys writes the readable reference of every table and key: what it
// is, what it accepts, its default, and what is not in this version.
func FormatKeys(w io.Writer) error {
	out := bufio.NewWriter(w)
	fmt.Fprintf(out, "The scene file: TOML, schema = %d. A quantity is text with a unit, \"60 deg\", or a bare number.\n", schema)
	for _, s := range sections {
		header := "[" + s.name + "]"
		switch {
		case s.name == "":
			header = "(top)"
		case s.many:
			header = "[" + header + "]"
		}
		fmt.Fprintf(out, "\n%s  %s%s\n", header, s.text, pick(s.later, " ("+notInVersion+")", ""))
		for _, k := range keyTable {
			if k.Section == s.name {
				k.describe(out)
				for _, f := range k.Fields {
					f.Name = k.Name + "." + f.Name
					f.describe(out)
				}
			}
		}
	}
	return out.Flush()
}

// describe writes the lines of one key.
func (k Key) describe(w io.Writer) {
	fmt.Fprintf(w, "  %-18s %s\n", k.Name, k.Text)
	line := func(what, text string) {
		if text != "" {
			fmt.Fprintf(w, "  %-18s %s: %s\n", "", what, text)
		}
	}
	if k.Later {
		fmt.Fprintf(w, "  %-18s %s\n", "", notInVersion)
		return
	}
	line("allowed", k.Allowed()+pick(k.Error, `; "+- error" may follow the number`, ""))
	line("only for", strings.Join(k.Kinds, ", "))
	line("only with profile", strings.Join(k.Profiles, ", "))
	line("only with light", strings.Join(k.Lights, ", "))
	line("default", k.Default+pick(k.Required, "none, the key is required", ""))
	later := append([]string{}, k.LaterChoices...)
	line(notInVersion, strings.Join(later, ", "))
}
