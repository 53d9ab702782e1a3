package main

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"holdfast/internal/race"
)

// unavailable is the exit status of nodes.sh where there can be no Slurm.
const unavailable = 69

// A batch as an array of four tasks with a dependent join, on a real Slurm of two nodes,
// one of which is killed meanwhile: the tables are those of one machine. The test installs
// Slurm where it is missing and may be installed; in CI it must run, elsewhere it is
// skipped with what was missing.
func TestSlurm(t *testing.T) {
	if testing.Short() || race.Enabled {
		t.Skip("a cluster takes a minute; left to the plain run")
	}
	scripts, err := filepath.Abs(filepath.Join("testdata", "slurm"))
	if err != nil {
		t.Fatal(err)
	}
	design, err := filepath.Abs(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
	if err != nil {
		t.Fatal(err)
	}
	c := exec.Command("bash", filepath.Join(scripts, "nodes.sh"), "--install", "bash", filepath.Join(scripts, "trial.sh"), design)
	c.Dir = t.TempDir()
	c.Env = append(os.Environ(), "PATH="+programFolder(t)+string(os.PathListSeparator)+os.Getenv("PATH"))
	var said bytes.Buffer
	c.Stdout, c.Stderr = &said, &said
	err = c.Run()
	var exit *exec.ExitError
	switch {
	case errors.As(err, &exit) && exit.ExitCode() == unavailable, errors.Is(err, exec.ErrNotFound):
		if os.Getenv("CI") == "" {
			t.Skipf("no Slurm here: %s", said.String())
		}
		t.Fatalf("in CI a Slurm is needed: %s", said.String())
	case err != nil:
		t.Fatalf("%v\n%s", err, said.String())
	}
	t.Log(said.String())
}

// programFolder builds the program and gives its folder.
func programFolder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	out, err := exec.Command("go", "build", "-o", filepath.Join(dir, "holdfast"), ".").CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	return dir
}
