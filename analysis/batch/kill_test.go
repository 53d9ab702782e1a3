package batch_test

import (
	"fmt"
	"math/rand"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
	"time"

	"holdfast/internal/race"
)

// A batch that is killed a hundred times at random moments, and begun anew each time,
// ends with the same bytes in every file as one in one go. Kills come at moments spread
// over more than the whole run, the writing of the tables included; once a batch has
// ended, another is begun.
func TestKills(t *testing.T) {
	kills := 100
	if race.Enabled {
		kills = 8
	}
	want := whole(t)
	for lane := range killLanes {
		t.Run("", func(t *testing.T) {
			t.Parallel() // most of a lane's time is waiting for the disk
			killed(t, want, kills/killLanes, int64(lane))
		})
	}
}

const killLanes = 4

// killed kills batches so often.
func killed(t *testing.T, want string, kills int, seed int64) {
	begun := time.Now()
	if err := child(t, filepath.Join(t.TempDir(), "measure")).Run(); err != nil {
		t.Fatal(err)
	}
	span := time.Since(begun)
	random := rand.New(rand.NewSource(seed))
	dir, batches := "", 0
	for kills > 0 {
		if dir == "" {
			batches++
			dir = filepath.Join(t.TempDir(), fmt.Sprint("killed", batches))
		}
		c := child(t, dir)
		if err := c.Start(); err != nil {
			t.Fatal(err)
		}
		wait := time.Duration(random.Float64() * 0.6 * float64(span))
		time.AfterFunc(wait, func() { _ = c.Process.Kill() }) // one that has ended cannot be killed
		err := c.Wait()
		switch {
		case err == nil:
			equalFolders(t, dir, want)
			dir = ""
		case c.ProcessState.Exited():
			t.Fatalf("the batch ended by itself: %v", err)
		default:
			kills--
		}
	}
	if dir != "" {
		run(t, quickJob(t, dir))
		equalFolders(t, dir, want)
	}
	t.Logf("%d batches of %v", batches, span)
}

// child is this binary making the quick batch in a folder.
func child(t *testing.T, dir string) *exec.Cmd {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	c := exec.Command(self, "-test.run=^$")
	c.Env = append(os.Environ(), childFolder+"="+dir)
	c.Stderr = os.Stderr
	return c
}
