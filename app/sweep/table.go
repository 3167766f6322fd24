package sweep

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
)

// ErrTable is what is wrong with a table of cases; every error about one
// wraps it.
var ErrTable = errors.New("allowed is CSV whose header names keys of the scene, with one row a case")

// ReadCases reads a table of cases: the header names keys, every row is a
// case, an empty field leaves the key as the scene has it. Lines that begin
// with # are comments.
func ReadCases(name string, r io.Reader) ([][]Setting, error) {
	in := csv.NewReader(r)
	in.Comment = '#'
	in.TrimLeadingSpace = true
	keys, err := in.Read()
	if err != nil {
		return nil, fmt.Errorf("%s: no header (%v): %w", name, err, ErrTable)
	}
	seen := map[string]bool{}
	for k, key := range keys {
		key = strings.TrimSpace(key)
		if keys[k] = key; key == "" || seen[key] {
			line, _ := in.FieldPos(k)
			return nil, fmt.Errorf("%s:%d: column %d is named %q, which is empty or stands twice: %w", name, line, k+1, key, ErrTable)
		}
		seen[key] = true
	}
	var sets [][]Setting
	for {
		row, err := in.Read()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %v: %w", name, err, ErrTable) // it tells the line
		}
		if len(sets) == maxValues {
			return nil, fmt.Errorf("%s: more than %d rows: %w", name, maxValues, ErrTable)
		}
		set := []Setting{}
		for k, value := range row {
			if value = strings.TrimSpace(value); value != "" {
				set = append(set, Setting{keys[k], value})
			}
		}
		sets = append(sets, set)
	}
	if len(sets) == 0 {
		return nil, fmt.Errorf("%s: no rows: %w", name, ErrTable)
	}
	return sets, nil
}
