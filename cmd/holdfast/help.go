package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/pflag"
)

const overview = `holdfast tells how reliably a designed gene switch holds its state.

  holdfast COMMAND FILE [options]

`

const caution = `
The numbers are a model's estimates. They are no evidence that a containment or a
therapy is safe: biosafety rules and your institution's committee decide, and a
strain must be tested.
`

func commandNames() string {
	var names []string
	for _, c := range commands() {
		names = append(names, c.name)
	}
	return strings.Join(names, ", ")
}

func writeOverview(w io.Writer) {
	fmt.Fprint(w, overview)
	for _, c := range commands() {
		fmt.Fprintf(w, "  %-8s %s\n", c.name, c.summary)
	}
	fmt.Fprintf(w, "  %-8s %s\n", "help", "these lines, or, with a command's name, its options")
	fmt.Fprintf(w, "  %-8s %s\n", "version", "the release")
}

func help(t terminal, args []string) error {
	if len(args) == 0 {
		writeOverview(t.out)
		_, err := fmt.Fprint(t.out, caution)
		return err
	}
	for _, c := range commands() {
		if c.name == args[0] {
			return c.writeHelp(t.out)
		}
	}
	return misusef("there is no command %q; the commands are %s", args[0], commandNames())
}

func (c command) writeHelp(w io.Writer) error {
	flags := c.flagSet()
	c.setup(flags)
	fmt.Fprintf(w, "holdfast %s %s\n\n%s\n\nOptions\n", c.name, c.args, c.about)
	flags.VisitAll(func(f *pflag.Flag) { writeFlag(w, f) })
	_, err := fmt.Fprint(w, caution)
	return err
}

func writeFlag(w io.Writer, f *pflag.Flag) {
	value, usage := pflag.UnquoteUsage(f)
	left := "--" + f.Name
	if value != "" {
		left += " " + value
	}
	fmt.Fprintf(w, "  %-20s %s\n", left, strings.ReplaceAll(usage, "\n", "\n"+strings.Repeat(" ", 23)))
}
