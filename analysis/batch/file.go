package batch

import (
	"bufio"
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"holdfast/analysis/records"
)

// A File is points from a file: a row each, a column for copies or a constant.
type File struct {
	Name  string // of the file, without folders
	Names []string
	Rows  int
	flat  []float64 // row by row
}

// ReadFile reads points from an Arrow IPC file, or from a CSV file whose first row has
// the names. Errors give the row and the column.
func ReadFile(path string) (*File, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("cannot read the points: %w", err)
	}
	defer func() { _ = f.Close() }() // opened for reading
	r := bufio.NewReader(f)
	head, err := r.Peek(headLength)
	if err != nil && !errors.Is(err, io.EOF) {
		return nil, fmt.Errorf("cannot read the points: %w", err)
	}
	switch {
	case bytes.HasPrefix(head, []byte("ARROW1")):
		return readArrow(path)
	case !plain(head):
		return nil, fmt.Errorf("%s is neither a CSV file (plain text in UTF-8) nor an Arrow IPC file; save it as one of them", path)
	}
	return readCSV(path, r)
}

// headLength is how much of a file is looked at to tell what it is.
const headLength = 512

// plain tells whether a file that begins like this is text in UTF-8.
func plain(head []byte) bool {
	for len(head) > 0 {
		r, size := utf8.DecodeRune(head)
		cut := len(head) < utf8.UTFMax && !utf8.FullRune(head) // the head ends within a character
		if r == utf8.RuneError && size == 1 && !cut || unicode.IsControl(r) && !strings.ContainsRune("\t\r\n", r) {
			return false
		}
		head = head[size:]
	}
	return true
}

func readArrow(path string) (*File, error) {
	t, err := records.ReadNumbers(path, MostPoints)
	if err != nil {
		return nil, err
	}
	f := &File{Name: filepath.Base(path), Names: t.Names}
	if err := f.checkNames(path); err != nil {
		return nil, err
	}
	f.Rows = len(t.Columns[0])
	for row := range f.Rows {
		for i, name := range f.Names {
			v := t.Columns[i][row]
			if err := checkValue(name, v); err != nil {
				return nil, fmt.Errorf("%s, row %d: %w", path, row+1, err)
			}
			f.flat = append(f.flat, v)
		}
	}
	return f, f.checkRows(path)
}

func readCSV(path string, in io.Reader) (*File, error) {
	r := csv.NewReader(in)
	r.FieldsPerRecord = -1
	r.TrimLeadingSpace = true
	head, err := r.Read()
	if errors.Is(err, io.EOF) {
		return nil, fmt.Errorf("%s is empty: its first row has the names, such as copies,a", path)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	f := &File{Name: filepath.Base(path)}
	for i, name := range head {
		if i == 0 {
			name = strings.TrimPrefix(name, "\ufeff")
		}
		f.Names = append(f.Names, strings.TrimSpace(name))
	}
	if len(head) == 1 && strings.ContainsAny(head[0], ";\t") {
		return nil, fmt.Errorf("%s: columns are set apart by commas, and the first row has none: %q", path, head[0])
	}
	if strings.Contains(strings.Join(head, ""), "\r") {
		return nil, fmt.Errorf("%s: its lines end in carriage returns alone; save it with line feeds", path)
	}
	if err := f.checkNames(path); err != nil {
		return nil, err
	}
	for {
		cells, err := r.Read()
		if errors.Is(err, io.EOF) {
			return f, f.checkRows(path)
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
		line, _ := r.FieldPos(0)
		if err := f.take(cells); err != nil {
			return nil, fmt.Errorf("%s, line %d: %w", path, line, err)
		}
	}
}

// take appends a row of cells.
func (f *File) take(cells []string) error {
	if len(cells) != len(f.Names) {
		return fmt.Errorf("%d cells, but %d columns (%s)", len(cells), len(f.Names), strings.Join(f.Names, ", "))
	}
	if f.Rows++; f.Rows > MostPoints {
		return fmt.Errorf("there are more than %d rows", MostPoints)
	}
	for i, cell := range cells {
		v, err := parseValue(f.Names[i], cell)
		if err != nil {
			return fmt.Errorf("column %w", err)
		}
		f.flat = append(f.flat, v)
	}
	return nil
}

func (f *File) checkNames(path string) error {
	for i, name := range f.Names {
		if name == "" {
			return fmt.Errorf("%s: column %d has no name; the first row names copies or constants", path, i+1)
		}
		if slices.Contains(f.Names[:i], name) {
			return fmt.Errorf("%s: column %s stands twice", path, name)
		}
	}
	if len(f.Names) == 0 {
		return fmt.Errorf("%s has no columns", path)
	}
	return nil
}

func (f *File) checkRows(path string) error {
	if f.Rows == 0 {
		return fmt.Errorf("%s has no points: a first row of names and no other", path)
	}
	return nil
}

// row gives the values of a row, by column.
func (f *File) row(i int) []float64 { return f.flat[i*len(f.Names) : (i+1)*len(f.Names)] }

// digest is the SHA-256 of the names and values, however they are written.
func (f *File) digest() string {
	h := sha256.New()
	_, _ = io.WriteString(h, strings.Join(f.Names, ",")+"\n") // a hash takes everything
	for _, v := range f.flat {
		var b [8]byte
		binary.LittleEndian.PutUint64(b[:], math.Float64bits(v))
		h.Write(b[:])
	}
	return hex.EncodeToString(h.Sum(nil))
}
