package verbs

import (
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

func newMan(s streams) *cobra.Command {
	return &cobra.Command{
		Use:   "man DIR",
		Short: "write the manual pages into a directory",
		Long:  "Writes one manual page a verb into DIR, which is made if it is not there.",
		Args:  takes(1, "one directory"),
		RunE: func(cmd *cobra.Command, args []string) error {
			dir := args[0]
			if err := os.MkdirAll(dir, 0o777); err != nil {
				return usage{err}
			}
			pages := manPages(cmd.Root())
			for _, c := range pages {
				path := filepath.Join(dir, manName(c)+".1")
				if err := checkWritable(path); err != nil {
					return err
				}
			}
			for _, c := range pages {
				path := filepath.Join(dir, manName(c)+".1")
				err := writeFile(cmd.Context(), path, func(w io.Writer) error {
					_, err := io.WriteString(w, manPage(c))
					return err
				})
				if err != nil {
					return err
				}
				if _, err := fmt.Fprintln(s.out, path); err != nil {
					return err
				}
			}
			return nil
		},
	}
}

// manPages lists a command and all below it.
func manPages(c *cobra.Command) []*cobra.Command {
	pages := []*cobra.Command{c}
	for _, sub := range c.Commands() {
		if sub.IsAvailableCommand() && sub.Name() != "help" {
			pages = append(pages, manPages(sub)...)
		}
	}
	return pages
}

// manName is annulet-batch-scene-check for the command annulet-batch scene check.
func manName(c *cobra.Command) string { return strings.ReplaceAll(c.CommandPath(), " ", "-") }

// manPage writes one page in the man macros, see man(7). It has no date: the
// same program writes the same page.
func manPage(c *cobra.Command) string {
	var b strings.Builder
	macro := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	macro(`.TH %s 1 "" "Annulet %s" "Annulet"`, troffWord(strings.ToUpper(manName(c))), Version)
	macro(".SH NAME")
	macro("%s", troff(manName(c)+" - ")+troff(c.Short))
	macro(".SH SYNOPSIS")
	macro(".B %s", troff(c.UseLine()))
	if c.Long != "" {
		macro(".SH DESCRIPTION")
		for paragraph := range strings.SplitSeq(c.Long, "\n\n") {
			macro(".PP")
			macro("%s", troff(strings.ReplaceAll(paragraph, "\n", " ")))
		}
	}
	if flags := c.LocalFlags(); flags.HasAvailableFlags() {
		macro(".SH OPTIONS")
		flags.VisitAll(func(f *pflag.Flag) {
			if f.Hidden {
				return
			}
			name := "--" + f.Name
			if f.Shorthand != "" {
				name = "-" + f.Shorthand + ", " + name
			}
			kind, text := pflag.UnquoteUsage(f)
			if f.DefValue != "" && f.DefValue != "false" && f.DefValue != "[]" {
				text += " (default " + f.DefValue + ")"
			}
			macro(".TP")
			macro(`\fB%s\fR \fI%s\fR`, troff(name), troff(kind))
			macro("%s", troff(text))
		})
	}
	if c.Example != "" {
		macro(".SH EXAMPLES")
		macro(".nf")
		macro("%s", troff(c.Example))
		macro(".fi")
	}
	macro(".SH EXIT STATUS")
	macro("0 done, 1 could not, 2 bad usage or scene.")
	var also []string
	if c.HasParent() {
		also = append(also, manName(c.Parent()))
	}
	for _, sub := range c.Commands() {
		if sub.IsAvailableCommand() && sub.Name() != "help" {
			also = append(also, manName(sub))
		}
	}
	if len(also) > 0 {
		macro(".SH SEE ALSO")
		for k, name := range also {
			comma := ","
			if k == len(also)-1 {
				comma = ""
			}
			macro(".BR %s (1)%s", troff(name), comma)
		}
	}
	return b.String()
}

// troff escapes text: a backslash, a hyphen that must stay one, and lines
// that would be requests.
func troff(text string) string {
	text = strings.NewReplacer(`\`, `\e`, "-", `\-`).Replace(text)
	lines := strings.Split(text, "\n")
	for k, line := range lines {
		if strings.HasPrefix(line, ".") || strings.HasPrefix(line, "'") {
			lines[k] = `\&` + line
		}
	}
	return strings.Join(lines, "\n")
}

// troffWord is troff for a macro's argument.
func troffWord(text string) string { return `"` + strings.ReplaceAll(text, `"`, `\(dq`) + `"` }
