package sizing_test

import (
	"errors"
	"strings"
	"testing"

	"holdfast/analysis/sizing"
	"holdfast/model"
)

func TestParseSpec(t *testing.T) {
	n := demo(t, "latch", 0) // min, a generation of 45
	for text, want := range map[string]sizing.Spec{
		"high>=1000 generations":                       {State: "high", Amount: 1000, Unit: "generations", Time: 45000},
		"  low ≥ 5e5 min ":                             {State: "low", Amount: 5e5, Unit: "min", Time: 5e5},
		"every >= 1 generation":                        {State: "every", Amount: 1, Unit: "generations", Time: 45},
		"high>=.5min":                                  {State: "high", Amount: 0.5, Unit: "min", Time: 0.5},
		"high holds 200 generations with chance 0.999": {State: "high", Amount: 200, Unit: "generations", Time: 9000, Chance: 0.999},
		"every  holds\t90 min   with   chance 1e-3":    {State: "every", Amount: 90, Unit: "min", Time: 90, Chance: 0.001},
		"level12_on >= 1.25E+2 min":                    {State: "level12_on", Amount: 125, Unit: "min", Time: 125},
	} {
		got, err := sizing.ParseSpec(text, n)
		if err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		if got.State != want.State || got.Amount != want.Amount || got.Unit != want.Unit || got.Time != want.Time || got.Chance != want.Chance {
			t.Errorf("%q: %+v", text, got)
		}
		again, err := sizing.ParseSpec(got.String(), n)
		if err != nil || again.String() != got.String() || again.Time != got.Time || again.Chance != got.Chance {
			t.Errorf("%q is written %q, which reads %+v, %v", text, got, again, err)
		}
	}
}

// Each mistake is told at its place, with what to type.
func TestSpecMistakes(t *testing.T) {
	n := demo(t, "latch", 0)
	for _, c := range []struct {
		text          string
		column        int
		message, hint string
	}{
		{"", 1, "name of a state is missing", "STATE >= NUMBER UNIT"},
		{">= 100 min", 1, "name of a state is missing", "STATE >= NUMBER UNIT"},
		{"any >= 100 min", 1, `"any" is no state`, "write every"},
		{"All>= 100 min", 1, `"All" is no state`, "write every"},
		{"high", 5, "what the state must do is missing", "holds NUMBER UNIT"},
		{"high > 100 min", 6, `">" is neither`, "write >="},
		{"high = 100 min", 6, `"=" is neither`, "write >="},
		{"high <= 100 min", 6, `"<=" is neither`, "only the least"},
		{"high ≤ 100 min", 6, `"≤" is neither`, "only the least"},
		{"high lasts 100 min", 6, `"lasts" is neither`, "STATE holds"},
		{"high >=", 8, "a number is missing", "high >= 1000 generations"},
		{"high >= generations", 9, `not "generations"`, "high >= 1000 generations"},
		{"high >= -5 min", 9, `not "-5"`, "high >= 1000 generations"},
		{"high >= 0 min", 9, "0 is not a finite number above 0", "high >= 1000"},
		{"high >= 1e999 min", 9, "1e999 is not a finite", "high >= 1000"},
		{"high >= 1.2.3 min", 9, "1.2.3 is not a finite", "high >= 1000"},
		{"high >= 1e308 generations", 15, "beyond numbers of double precision", ""},
		{"high >= 100", 12, "the unit of time is missing", "generations or min"},
		{"high >= 100 generatoins", 13, `"generatoins" is no unit`, `did you mean "generations"?`},
		{"high >= 100 hours", 13, `"hours" is no unit`, "generations, min"},
		{"high >= 100 minutes", 13, `"minutes" is no unit`, "generations, min"},
		{"high >= 100 min, low >= 3 min", 16, `", low >= 3 min" is more`, "one --spec each"},
		{"high >= 100 min with chance 0.9", 17, "is more than", "high holds 100 min with chance"},
		{"high holds 200 generations", 27, "with chance is missing", "with chance P"},
		{"high holds 200 generations at chance 0.9", 28, "with chance is missing", "with chance P"},
		{"high holds 200 generations with 0.9", 33, "with chance is missing", "with chance P"},
		{"high holds 200 generations with chance", 39, "a number is missing", "between 0 and 1"},
		{"high holds 200 generations with chance 1", 40, "a chance of 1", "between 0 and 1"},
		{"high holds 200 generations with chance 0", 40, "0 is not a finite", "between 0 and 1"},
		{"high holds 200 generations with chance 99.9%", 44, `"%" is more`, "0.999"},
	} {
		_, err := sizing.ParseSpec(c.text, n)
		var spec *sizing.SpecError
		if !errors.As(err, &spec) {
			t.Errorf("%q: %v, want a SpecError", c.text, err)
			continue
		}
		if spec.Column != c.column || !strings.Contains(spec.Message, c.message) || !strings.Contains(spec.Hint, c.hint) {
			t.Errorf("%q: column %d, want %d\n%v", c.text, spec.Column, c.column, err)
		}
	}
}

// The caret stands under the place, counted in characters.
func TestSpecErrorText(t *testing.T) {
	n := demo(t, "latch", 0)
	_, err := sizing.ParseSpec("high ≥ 100 hours", n)
	want := "spec: \"hours\" is no unit of time of this design\n    high ≥ 100 hours\n               ^\n    Allowed here: generations, min"
	if err == nil || !strings.EqualFold(err.Error(), want) {
		t.Errorf("got\n%v\nwant\n%s", err, want)
	}
}

func TestDesignWithoutGeneration(t *testing.T) {
	n := *demo(t, "latch", 0)
	n.Generation = 0
	_, err := sizing.ParseSpec("high >= 10 generations", &n)
	if err == nil || !strings.Contains(err.Error(), "does not say how long a generation is") || !strings.Contains(err.Error(), "or ask in min") {
		t.Errorf("%v", err)
	}
	if _, err := sizing.ParseSpec("high >= 10 hours", &n); err == nil || strings.Contains(err.Error(), "generations") {
		t.Errorf("%v", err)
	}
}

func FuzzParseSpec(f *testing.F) {
	for _, text := range []string{"high>=1000 generations", "every holds 3 min with chance 0.5", "≥≥", "a holds", "x >= 1e", "\xff >= 3 min"} {
		f.Add(text)
	}
	draft, err := model.Load("../../testdata/designs/latch.toml")
	if err != nil {
		f.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, text string) {
		spec, err := sizing.ParseSpec(text, n)
		if err != nil {
			_ = err.Error()
			return
		}
		if again, err := sizing.ParseSpec(spec.String(), n); err != nil || again.Time != spec.Time {
			t.Errorf("%q reads %q, which reads %v, %v", text, spec, again, err)
		}
	})
}
