package main

import (
	"github.com/spf13/pflag"

	"holdfast/model"
)

// A designChoice is a design file with the values that the command line sets.
type designChoice struct {
	copies float64
	set    map[string]float64
}

func designFlags(f *pflag.FlagSet) *designChoice {
	d := &designChoice{set: map[string]float64{}}
	positiveFlag(f, &d.copies, "copies", "molecules in one unit of amount, instead of the file's")
	f.Var(settings{d.set}, "with", "set a constant for this run; may be repeated")
	return d
}

func (d *designChoice) load(path string) (*model.Network, error) {
	draft, err := model.Load(path)
	if err != nil {
		return nil, err
	}
	network, err := draft.Bind(d.copies, d.set)
	if err != nil && (d.copies != 0 || len(d.set) > 0) {
		return nil, misusef("%v", err)
	}
	return network, err
}
