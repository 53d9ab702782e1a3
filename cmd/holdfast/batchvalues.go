package main

import (
	"fmt"
	"path/filepath"

	"holdfast/analysis/batch"
)

// An axes flag collects what a batch varies.
type axes struct{ list *[]batch.Axis }

func (a axes) String() string { return "" }

// Set reads one axis.
func (a axes) Set(text string) error {
	axis, err := batch.ParseAxis(text)
	if err == nil {
		*a.list = append(*a.list, axis)
	}
	return err
}

// Type names the value in help texts.
func (a axes) Type() string { return "name=values" }

// words writes the axes as they would be typed.
func (a axes) words() []string {
	var out []string
	for _, axis := range *a.list {
		out = append(out, "--vary", axis.Text)
	}
	return out
}

// A pointsFile flag names a file; records carry its name without the folder.
type pointsFile struct{ path *string }

func (p pointsFile) String() string {
	if p.path == nil {
		return ""
	}
	return *p.path
}

// Set takes the name.
func (p pointsFile) Set(path string) error {
	if *p.path != "" {
		return fmt.Errorf("%s is given already; put all points into one file", *p.path)
	}
	*p.path = path
	return nil
}

// Type names the value in help texts.
func (p pointsFile) Type() string { return "file" }

// words writes the option as it would be typed beside the file.
func (p pointsFile) words() []string {
	if p.String() == "" {
		return nil
	}
	return []string{"--points", filepath.Base(*p.path)}
}
