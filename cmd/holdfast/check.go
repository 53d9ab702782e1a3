package main

import (
	"context"
	"fmt"
	"io"

	"github.com/spf13/pflag"
)

const checkAbout = `Reads the design file and prints the network as holdfast understands it: units, species,
constants, each reaction with its law, conserved totals, absorbing states and warnings.
Every error of the file is shown with its line, its column and what to type.`

func checkCommand() command {
	return command{name: "check", args: "FILE", summary: "is my file right? the network as it is understood", about: checkAbout, setup: setupCheck}
}

func setupCheck(f *pflag.FlagSet) work {
	design := designFlags(f)
	return func(_ context.Context, t terminal, args []string) error {
		path, err := oneFile("check", args)
		if err != nil {
			return err
		}
		network, err := design.load(path)
		if err != nil {
			return err
		}
		return network.Describe(t.out)
	}
}

// writeWarnings prints warnings, a line each.
func writeWarnings(w io.Writer, texts []string) {
	for _, text := range texts {
		fmt.Fprintf(w, "warning: %s\n", text)
	}
}
