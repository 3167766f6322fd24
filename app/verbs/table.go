package verbs

import (
	"bufio"
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"
)

// table reads CSV with a header, strictly: every column must be known, none
// twice, and every row complete.
type table struct {
	name    string // of the file, for errors
	columns []string
	at      map[string]int // column of each name that is there
	reader  *csv.Reader
	closer  io.Closer
	rows    int // read so far
}

// openTable opens a CSV file, or stdin for "-", and reads the header.
func openTable(path string, stdin io.Reader, required, optional []string) (*table, error) {
	t := &table{name: path, at: map[string]int{}}
	source := stdin
	if path == "-" {
		t.name = "standard input"
	} else {
		f, err := os.Open(path)
		if err != nil {
			return nil, usage{err}
		}
		if info, err := f.Stat(); err != nil || info.IsDir() {
			f.Close()
			return nil, refuse("%s is a directory, not a table", path)
		}
		source, t.closer = f, f
	}
	text := bufio.NewReaderSize(source, longestHeader)
	if err := t.looksLikeText(text); err != nil {
		t.close()
		return nil, err
	}
	t.reader = csv.NewReader(text)
	t.reader.TrimLeadingSpace = true
	if err := t.header(required, optional); err != nil {
		t.close()
		return nil, err
	}
	return t, nil
}

// longestHeader bounds the first line, in bytes. Taste: a header has some
// fifty; what has none so near is not a table, however long it may be.
const longestHeader = 1 << 16

// mostRows bounds a table, which is held in memory. Taste.
const mostRows = 10_000_000

// looksLikeText refuses, from its first bytes, what is no table.
func (t *table) looksLikeText(text *bufio.Reader) error {
	start, err := text.Peek(longestHeader)
	if err != nil && !errors.Is(err, io.EOF) {
		return fmt.Errorf("reading %s: %w", t.name, err)
	}
	if bytes.IndexByte(start, 0) >= 0 || len(start) == longestHeader && bytes.IndexByte(start, '\n') < 0 {
		return refuse("%s is not a CSV table: no text, or no line ends within %d bytes", t.name, longestHeader)
	}
	return nil
}

func (t *table) header(required, optional []string) error {
	allowed := slices.Concat(required, optional)
	names, err := t.reader.Read()
	if errors.Is(err, io.EOF) {
		return refuse("%s is empty; its first line must name the columns %s", t.name, strings.Join(allowed, ","))
	}
	if err != nil {
		return t.broken(err)
	}
	for k, name := range names {
		if k == 0 {
			name = strings.TrimPrefix(name, "\ufeff") // a byte order mark
		}
		name = strings.TrimSpace(name)
		if !slices.Contains(allowed, name) {
			return refuse("%s:1: unknown column %q; allowed: %s", t.name, name, strings.Join(allowed, ","))
		}
		if _, twice := t.at[name]; twice {
			return refuse("%s:1: column %q comes twice", t.name, name)
		}
		t.at[name] = k
		t.columns = append(t.columns, name)
	}
	for _, name := range required {
		if _, ok := t.at[name]; !ok {
			return refuse("%s:1: column %q is missing; there must be %s", t.name, name, strings.Join(required, ","))
		}
	}
	return nil
}

// next returns the next row and its line. At the end it returns io.EOF.
func (t *table) next() (fields []string, line int, err error) {
	fields, err = t.reader.Read()
	if errors.Is(err, io.EOF) {
		return nil, 0, io.EOF
	}
	if err != nil {
		return nil, 0, t.broken(err)
	}
	if t.rows++; t.rows > mostRows {
		return nil, 0, refuse("%s has more than %d rows; split it", t.name, mostRows)
	}
	line, _ = t.reader.FieldPos(0)
	for k := range fields {
		fields[k] = strings.TrimSpace(fields[k])
	}
	return fields, line, nil
}

// field returns the text of a column, empty if there is no such column.
func (t *table) field(fields []string, column string) string {
	if k, ok := t.at[column]; ok {
		return fields[k]
	}
	return ""
}

// wrong names a place in the table in front of an error.
func (t *table) wrong(line int, column string, err error) error {
	return usage{fmt.Errorf("%s:%d: %s: %w", t.name, line, column, err)}
}

func (t *table) broken(err error) error {
	var syntax *csv.ParseError
	if errors.As(err, &syntax) {
		if errors.Is(syntax.Err, csv.ErrFieldCount) {
			return refuse("%s:%d: the row has not as many fields as the header, %d", t.name, syntax.Line, len(t.columns))
		}
		return refuse("%s:%d:%d: %v", t.name, syntax.Line, syntax.Column, syntax.Err)
	}
	return fmt.Errorf("reading %s: %w", t.name, err)
}

func (t *table) close() {
	if t.closer != nil {
		t.closer.Close()
	}
}
