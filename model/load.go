package model

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"
	"unicode/utf8"
)

// largestFile is the largest design file that is read, in bytes.
const largestFile = 64 << 20

// Load reads a design file. Errors of the file's content are Problems, all in one
// go; others say that the file cannot be read.
func Load(path string) (*Draft, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("cannot read the design: %w", err)
	}
	defer f.Close()
	text, err := io.ReadAll(io.LimitReader(f, largestFile+1))
	if err != nil {
		return nil, fmt.Errorf("cannot read the design: %w", err)
	}
	return Parse(path, text)
}

// Parse reads the text of a design file; name stands in messages. The error, if
// any, is Problems: everything that is wrong with the file, in its order. What is
// only worth a look is in the draft's Notes.
func Parse(name string, text []byte) (*Draft, error) {
	body := bytes.TrimPrefix(text, []byte("\xef\xbb\xbf"))
	r := &reporter{src: newSource(name, string(body))}
	if !readable(r, body) {
		return nil, r.err()
	}
	doc := readTOML(r)
	d := newDesigner(doc)
	d.read(doc.root)
	if err := r.err(); err != nil {
		return nil, err
	}
	sortByPlace(r.notes)
	sum := sha256.Sum256(text)
	d.draft.Notes = r.notes
	d.draft.File, d.draft.Text, d.draft.Digest = name, string(text), hex.EncodeToString(sum[:])
	return d.draft, nil
}

// readable refuses what is no text in UTF-8 at all.
func readable(r *reporter, text []byte) bool {
	switch {
	case len(text) > largestFile:
		r.src = newSource(r.src.name, "")
		r.errorf(0, "a design file is a short text; is this the right file?", "the file is larger than %d MiB", largestFile>>20)
	case bytes.HasPrefix(text, []byte("\xff\xfe")), bytes.HasPrefix(text, []byte("\xfe\xff")):
		r.src = newSource(r.src.name, "")
		r.errorf(0, "save it again as UTF-8", "the file is in UTF-16, not UTF-8")
	case bytes.IndexByte(text, 0) >= 0:
		r.src = newSource(r.src.name, "")
		r.errorf(0, "a design file is plain text in TOML; is this the right file?", "the file holds zero bytes: it is no text")
	case len(bytes.TrimSpace(text)) == 0:
		r.errorf(0, "a design needs time, [species] and at least one [[reaction]]", "the file is empty")
	case !utf8.Valid(text):
		at := invalidAt(text)
		r.errorf(at, "save the file as UTF-8", "a character here is not UTF-8")
	default:
		return true
	}
	return false
}

// invalidAt is the offset of the first byte that is not UTF-8.
func invalidAt(text []byte) int {
	at := 0
	for at < len(text) {
		c, size := utf8.DecodeRune(text[at:])
		if c == utf8.RuneError && size == 1 {
			return at
		}
		at += size
	}
	return at
}
