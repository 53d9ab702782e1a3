package batch

import (
	"os"
	"strings"
	"testing"
)

// Forge changes the number of events in a part, under a digest that is right.
func Forge(t *testing.T, name string) {
	t.Helper()
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	digest := strings.TrimPrefix(string(data), partHead)[:digestLength]
	a, err := decodePart(digest, data)
	if err != nil {
		t.Fatal(err)
	}
	a.Events++
	if data, err = encodePart(digest, a); err == nil {
		err = os.WriteFile(name, data, 0o666)
	}
	if err != nil {
		t.Fatal(err)
	}
}
