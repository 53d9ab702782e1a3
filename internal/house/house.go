// Package house states the rules of the code base as data; its tests hold every
// package to them.
package house

import "strings"

// A Layer is one storey of the house: the packages at and below Path may import
// the project's own packages at and below May, and nothing else of the project.
type Layer struct {
	Path string
	May  []string
}

// Layers lists the storeys, longest path first where one lies in another.
// Imports run one way: cmd, analysis, the three engines, model.
func Layers() []Layer {
	return []Layer{
		{"cmd", []string{"analysis", "model", "internal/version"}},
		{"analysis/dwell", nil},
		{"analysis/records", []string{"model"}},
		{"analysis", []string{"analysis", "ssa", "sde", "deterministic", "model", "internal/stream", "internal/variation", "internal/version"}},
		{"ssa", []string{"model", "internal/stream", "internal/variation"}},
		{"sde", []string{"model", "internal/stream", "internal/variation"}},
		{"deterministic", []string{"deterministic", "model"}},
		{"model", nil},
		{"internal/stream", nil},
		{"internal/variation", []string{"model", "internal/stream"}},
		{"internal/race", nil},
		{"internal/version", nil},
		{"internal/zoo", []string{"model"}},
		{"internal/house", nil},
	}
}

// Importers lists libraries that only the named packages may import.
func Importers() map[string][]string {
	return map[string][]string{
		"golang.org/x/exp/rand":             {"internal/stream"},
		"github.com/apache/arrow-go/v18":    {"analysis/records"},
		"github.com/spf13/pflag":            {"cmd/holdfast"},
		"github.com/pelletier/go-toml/v2":   {"model"},
		"github.com/expr-lang/expr":         {"model"},
		"github.com/schollz/progressbar/v3": {"cmd/holdfast"},
		"github.com/rogpeppe/go-internal":   {"cmd/holdfast"},
		"math/rand":                         {},
		"net":                               {},
		"os/exec":                           {},
		"C":                                 {},
	}
}

// LayerOf gives the storey that the package belongs to; ok is false where no
// rule names it.
func LayerOf(pkg string) (l Layer, ok bool) {
	for _, l := range Layers() {
		if Within(pkg, l.Path) {
			return l, true
		}
	}
	return Layer{}, false
}

// Within tells whether pkg is path or lies below it.
func Within(pkg, path string) bool {
	return pkg == path || strings.HasPrefix(pkg, path+"/")
}
