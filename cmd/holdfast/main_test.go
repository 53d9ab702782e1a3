package main

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"holdfast": main})
}

// TestScripts runs one script a command and a mistake. $DESIGNS is the folder of
// the demo designs.
func TestScripts(t *testing.T) {
	designs, err := filepath.Abs(filepath.Join("..", "..", "testdata", "designs"))
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir: filepath.Join("testdata", "script"),
		Setup: func(e *testscript.Env) error {
			e.Setenv("DESIGNS", designs)
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"nofiles": noFiles,
		},
		UpdateScripts: os.Getenv("UPDATE_SCRIPTS") != "",
	})
}

// noFiles fails if the folder exists and holds anything, hidden files too.
func noFiles(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: nofiles folder")
	}
	entries, err := os.ReadDir(ts.MkAbs(args[0]))
	if err != nil && !os.IsNotExist(err) {
		ts.Fatalf("%v", err)
	}
	for _, e := range entries {
		ts.Fatalf("%s holds %s", args[0], e.Name())
	}
}
