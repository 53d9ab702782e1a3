package records

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// FormatVersion is the version of the layout of folders that this package writes. A
// reader refuses a folder with a higher one.
const FormatVersion = 1

const program = "holdfast"

// Keys of the metadata of schemas.
const (
	keyTable   = "table"
	keyDigest  = "design_sha256"
	keySeed    = "seed"
	keyCommand = "command"
)

// A Provenance says what a run was made from. All of it stands in the metadata of
// every table and in the manifest.
type Provenance struct {
	Title      string  // of the design
	Design     string  // the design file's text
	Seed       uint64  // of the random streams
	Version    string  // of the program
	Command    string  // everything that decides the results, see Command
	TimeUnit   string  // unit of all times
	Generation float64 // one cell generation in that unit; 0: not given
	Copies     float64 // molecules in one unit of amount, as run
}

// Digest gives the SHA-256 of the design's text in lower-case hex.
func (p Provenance) Digest() string {
	sum := sha256.Sum256([]byte(p.Design))
	return hex.EncodeToString(sum[:])
}

func (p Provenance) check() error {
	for _, s := range []struct{ what, text string }{
		{"the design's title", p.Title},
		{"the design's text", p.Design},
		{"the program's version", p.Version},
		{"the command", p.Command},
		{"the unit of time", p.TimeUnit},
	} {
		if !utf8.ValidString(s.text) {
			return fmt.Errorf("%s is not UTF-8 text", s.what)
		}
	}
	if !(p.Generation >= 0) || math.IsInf(p.Generation, 0) {
		return fmt.Errorf("generation = %v: must be a positive number, or 0 if there is none", p.Generation)
	}
	if !(p.Copies >= 0) || math.IsInf(p.Copies, 0) {
		return fmt.Errorf("copies = %v: must be a finite number, not below 0", p.Copies)
	}
	return nil
}

// metadata gives what a table's schema carries. The generation is left out if there
// is none.
func (p Provenance) metadata() map[string]string {
	m := map[string]string{
		"program":        program,
		"format_version": strconv.Itoa(FormatVersion),
		"version":        p.Version,
		"title":          p.Title,
		"design":         p.Design,
		keyDigest:        p.Digest(),
		keySeed:          strconv.FormatUint(p.Seed, 10),
		keyCommand:       p.Command,
		"time_unit":      p.TimeUnit,
		"copies":         number(p.Copies),
	}
	if p.Generation > 0 {
		m["generation"] = number(p.Generation)
	}
	return m
}

func number(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// Command puts the words of a command together, each quoted for a POSIX shell where
// it needs that, so that the line can be pasted back.
//
// For Provenance the words are those that decide the results: the program, the
// command, the design and its options with their values as used, in a fixed order.
// Left out are the number of threads, the output folder and how things are shown:
// with them the same results would not have the same bytes.
func Command(words ...string) string {
	quoted := make([]string, len(words))
	for i, w := range words {
		quoted[i] = quote(w)
	}
	return strings.Join(quoted, " ")
}

func quote(w string) string {
	plain := func(r rune) bool {
		return r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || strings.ContainsRune("_-./=:,+@%", r)
	}
	if w != "" && strings.IndexFunc(w, func(r rune) bool { return !plain(r) }) < 0 {
		return w
	}
	return "'" + strings.ReplaceAll(w, "'", `'\''`) + "'"
}
