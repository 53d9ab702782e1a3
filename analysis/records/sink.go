package records

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
)

const bufferBytes = 256 << 10

// A WriteError is a record that could not be written. Nothing of the run has been
// put in place.
type WriteError struct {
	Name string // the file or folder, under its final name
	Op   string // what was being done: "create", "write", "sync", …
	Err  error
}

// Error states the file, the step and the system's reason.
func (e *WriteError) Error() string {
	return fmt.Sprintf("%s: could not %s it: %v; no records were left behind", e.Name, e.Op, e.Err)
}

// Unwrap gives the system's error.
func (e *WriteError) Unwrap() error { return e.Err }

// A sink is a file under a temporary name, with the digest of what went into it. Its
// first error stays: everything after it does nothing and gives it again.
type sink struct {
	fs    fileSystem
	name  string // final
	temp  string
	file  file
	buf   *bufio.Writer
	hash  hash.Hash
	bytes int64
	err   error
}

func newSink(fs fileSystem, name, temp string) (*sink, error) {
	f, err := fs.Create(temp)
	if err != nil {
		return nil, &WriteError{name, "create", err}
	}
	s := &sink{fs: fs, name: name, temp: temp, file: f, hash: sha256.New()}
	s.buf = bufio.NewWriterSize(tee{s}, bufferBytes)
	return s, nil
}

// tee is the way from the buffer to the file.
type tee struct{ *sink }

func (t tee) Write(p []byte) (int, error) {
	n, err := t.file.Write(p)
	if err == nil && n < len(p) {
		err = io.ErrShortWrite
	}
	t.hash.Write(p[:max(n, 0)])
	t.bytes += int64(n)
	return n, err
}

// Write takes bytes into the buffer.
func (s *sink) Write(p []byte) (int, error) {
	if s.err != nil {
		return 0, s.err
	}
	n, err := s.buf.Write(p)
	s.keep("write", err)
	return n, s.err
}

func (s *sink) keep(op string, err error) {
	if err == nil || s.err != nil {
		return
	}
	var known *WriteError
	if errors.As(err, &known) {
		s.err = err
		return
	}
	s.err = &WriteError{s.name, op, err}
}

// finish makes the temporary file whole: flushed, synced and closed. On an error it
// is removed.
func (s *sink) finish() error {
	if s.err == nil {
		s.keep("write", s.buf.Flush())
	}
	if s.err == nil {
		s.keep("sync", s.file.Sync())
	}
	s.close()
	if s.err != nil {
		s.remove()
	}
	return s.err
}

func (s *sink) close() {
	if s.file == nil {
		return
	}
	s.keep("close", s.file.Close())
	s.file = nil
}

// abandon closes and removes the temporary file.
func (s *sink) abandon() {
	s.close()
	s.remove()
}

// remove takes the temporary file away, once; it is tried again if it fails, as it
// may after a full disk.
func (s *sink) remove() {
	if s.temp == "" {
		return
	}
	if s.fs.Remove(s.temp) != nil {
		_ = s.fs.Remove(s.temp) // the error that led here is the one to report
	}
	s.temp = ""
}

func (s *sink) digest() string { return hex.EncodeToString(s.hash.Sum(nil)) }
