package sizing_test

import (
	"context"
	"fmt"
	"log"

	"holdfast/analysis/sizing"
	"holdfast/model"
)

// How many molecules does the latch need to hold its high state for 5 generations?
func Example() {
	draft, err := model.Load("../../testdata/designs/latch.toml")
	if err != nil {
		log.Fatal(err)
	}
	network, err := draft.Bind(15, nil)
	if err != nil {
		log.Fatal(err)
	}
	specs, err := sizing.ParseSpecs([]string{"high >= 5 generations"}, network)
	if err != nil {
		log.Fatal(err)
	}
	report, err := sizing.Run(context.Background(), network, sizing.Options{Specs: specs})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(report.Outcome, report.Answer.Setting, "copies")
	for _, at := range []sizing.Evaluation{*report.At(report.Answer.Short), *report.At(report.Answer.Setting)} {
		fmt.Printf("%.0f: %.2f generations\n", at.Setting, at.Checks[0].Found)
	}
	// Output:
	// met 25 copies
	// 24: 4.73 generations
	// 25: 5.12 generations
}
