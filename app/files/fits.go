package files

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"sync"
)

// Source of all that follows: Pence et al., Definition of the Flexible Image
// Transport System, version 4.0 (2016, IAU FITS Working Group).

// ErrFITS marks headers that FITS cannot hold and data that does not fit.
var ErrFITS = errors.New("cannot be written as FITS")

// Card is one keyword of a FITS header. Value is a string, bool, int or
// float64; nil for COMMENT and HISTORY, whose text is Comment. What is not
// ASCII is folded to it.
type Card struct {
	Key     string // up to 8 of A-Z 0-9 _ -
	Value   any
	Comment string
}

// HDU is one header and data unit of a FITS file.
type HDU struct {
	Name    string // EXTNAME
	Version int    // EXTVER; 0 for none
	Cards   []Card
	// Columns and Rows of an image of float32 numbers; both 0 for none.
	Columns, Rows int
	// Bytes is the one cell of a table with one column of bytes, for texts
	// that FITS headers cannot hold. Not together with an image.
	Bytes  []byte
	Column string // its name
	// Fields makes Bytes the rows of a table with these columns, one after
	// another, big-endian; Column is not used then.
	Fields []FITSField
}

// FITSField is one column of a table.
type FITSField struct {
	Name string
	Form string // of TFORM: "D", "K", "12A"
	Size int    // bytes in a row
	Unit string // "" for none
	Text string // what it is, for people
}

// rowBytes is the length of a row of the table.
func (u HDU) rowBytes() int {
	if u.Fields == nil {
		return len(u.Bytes)
	}
	n := 0
	for _, f := range u.Fields {
		n += f.Size
	}
	return n
}

// FITS writes a file whose headers are known before its data, so that images
// of any size can be handed over in rows, in any order and from several
// goroutines. Close makes it a whole file, with checksums.
type FITS struct {
	w     io.WriterAt
	units []*fitsUnit
	size  int64
}

// fitsUnit is an HDU in its place.
type fitsUnit struct {
	HDU
	header  []byte // whole blocks
	at      int64  // of the header in the file
	dataSum int64  // where the DATASUM card stands in header
	check   int64  // where the CHECKSUM card stands in header
	bytes   int64  // of data, without padding

	mu      sync.Mutex
	sum     uint32 // of the data so far
	written int64
}

const (
	mostFields = 999 // what TFIELDS may be

	fitsBlock = 2880
	fitsCard  = 80
	fitsWord  = 4 // bytes of a float32, and of the words that checksums add
)

// NewFITS lays the units out, the first of which is the primary one, and
// writes tables and headers.
func NewFITS(w io.WriterAt, units ...HDU) (*FITS, error) {
	f := &FITS{w: w}
	for k, unit := range units {
		u := &fitsUnit{HDU: unit, at: f.size, bytes: int64(len(unit.Bytes))}
		if unit.Bytes == nil {
			u.bytes = fitsWord * int64(unit.Columns) * int64(unit.Rows)
		} else if k == 0 || unit.Columns != 0 || unit.Column == "" && unit.Fields == nil {
			return nil, fmt.Errorf("unit %d: a table must be an extension of its own with a named column: %w", k+1, ErrFITS)
		} else if n := unit.rowBytes(); unit.Fields != nil && (n == 0 || len(unit.Bytes)%n != 0 || len(unit.Fields) > mostFields) {
			return nil, fmt.Errorf("unit %d: %d bytes in rows of %d, %d columns: %w", k+1, len(unit.Bytes), n, len(unit.Fields), ErrFITS)
		}
		if err := u.lay(k == 0, len(units) > 1); err != nil {
			return nil, fmt.Errorf("unit %d %s: %w", k+1, unit.Name, err)
		}
		f.size += int64(len(u.header)) + padded(u.bytes)
		f.units = append(f.units, u)
	}
	for k, u := range f.units {
		if u.Bytes != nil {
			if err := f.put(k, u.Bytes, 0); err != nil {
				return nil, err
			}
		}
	}
	return f, nil
}

func padded(n int64) int64 { return (n + fitsBlock - 1) / fitsBlock * fitsBlock }

// lay makes the header, with empty checksums.
func (u *fitsUnit) lay(primary, extended bool) error {
	var cards []Card
	add := func(key string, value any, comment string) { cards = append(cards, Card{key, value, comment}) }
	switch {
	case primary:
		add("SIMPLE", true, "file conforms to FITS standard 4.0")
	case u.Bytes != nil:
		add("XTENSION", "BINTABLE", "binary table extension")
	default:
		add("XTENSION", "IMAGE   ", "image extension")
	}
	switch {
	case u.Bytes != nil:
		add("BITPIX", 8, "bytes")
		add("NAXIS", 2, "")
		add("NAXIS1", u.rowBytes(), "bytes in the row")
		add("NAXIS2", len(u.Bytes)/max(1, u.rowBytes()), "rows")
	case u.Columns > 0:
		add("BITPIX", -32, "IEEE float32")
		add("NAXIS", 2, "")
		add("NAXIS1", u.Columns, "columns")
		add("NAXIS2", u.Rows, "rows; the first one is at the bottom")
	default:
		add("BITPIX", 8, "")
		add("NAXIS", 0, "no data here")
	}
	if primary {
		if extended {
			add("EXTEND", true, "extensions follow")
		}
	} else {
		add("PCOUNT", 0, "")
		add("GCOUNT", 1, "")
	}
	if u.Fields != nil {
		add("TFIELDS", len(u.Fields), "")
		for k, f := range u.Fields {
			n := strconv.Itoa(k + 1)
			add("TTYPE"+n, f.Name, f.Text)
			add("TFORM"+n, f.Form, "")
			if f.Unit != "" {
				add("TUNIT"+n, f.Unit, "")
			}
		}
	} else if u.Bytes != nil {
		add("TFIELDS", 1, "")
		add("TTYPE1", u.Column, "UTF-8 text")
		add("TFORM1", strconv.Itoa(len(u.Bytes))+"B", "")
	}
	if u.Name != "" {
		add("EXTNAME", u.Name, "")
	}
	if u.Version > 0 {
		add("EXTVER", u.Version, "")
	}
	if slices.ContainsFunc(u.Cards, Card.long) {
		add("LONGSTRN", "OGIP 1.0", "long texts go on in CONTINUE lines")
	}
	cards = append(cards, u.Cards...)
	var header []byte
	for _, c := range cards {
		lines, err := c.lines()
		if err != nil {
			return err
		}
		header = append(header, lines...)
	}
	place := func(key, value, comment string) int64 {
		at := int64(len(header))
		header = append(header, stringCard(key, value, comment)...)
		return at
	}
	u.dataSum = place("DATASUM", "0", "data unit checksum")
	u.check = place("CHECKSUM", emptyCheck, "HDU checksum")
	header = append(header, fmt.Sprintf("%-80s", "END")...)
	for len(header)%fitsBlock != 0 {
		header = append(header, ' ')
	}
	u.header = header
	return nil
}

const emptyCheck = "0000000000000000"

// lines writes a card as one line of 80 bytes or, where a text is long, more.
func (c Card) lines() ([]byte, error) {
	if c.Value == nil {
		if c.Key != "COMMENT" && c.Key != "HISTORY" {
			return nil, fmt.Errorf("keyword %q has no value: %w", c.Key, ErrFITS)
		}
		var lines []byte
		for _, part := range cut(ascii(c.Comment), fitsCard-8) {
			lines = fmt.Appendf(lines, "%-8s%-72s", c.Key, part)
		}
		return lines, nil
	}
	if !goodKey(c.Key) {
		return nil, fmt.Errorf("keyword %q: %w", c.Key, ErrFITS)
	}
	var value string
	switch v := c.Value.(type) {
	case string:
		return longString(c.Key, v, ascii(c.Comment)), nil
	case bool:
		value = map[bool]string{true: "T", false: "F"}[v]
	case int:
		value = strconv.Itoa(v)
	case float64:
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("keyword %s = %g: not finite: %w", c.Key, v, ErrFITS)
		}
		value = strings.ToUpper(strconv.FormatFloat(v, 'g', -1, 64))
		if !strings.ContainsAny(value, ".E") {
			value += "."
		}
	default:
		return nil, fmt.Errorf("keyword %s has a value of type %T: %w", c.Key, v, ErrFITS)
	}
	line := fmt.Sprintf("%-8s= %20s", c.Key, value)
	return fit(line, ascii(c.Comment)), nil
}

// fit adds as much of a comment as the line holds.
func fit(line, comment string) []byte {
	if comment != "" && len(line)+4 < fitsCard {
		line += " / " + comment
	}
	if len(line) > fitsCard {
		line = line[:fitsCard]
	}
	return fmt.Appendf(nil, "%-80s", line)
}

func stringCard(key, value, comment string) []byte {
	return fit(fmt.Sprintf("%-8s= %-20s", key, fmt.Sprintf("'%-8s'", value)), comment)
}

// stringRoom is what one line holds of a text with its quotes doubled.
const stringRoom = fitsCard - len("KEYWORD = ''")

func quotedText(value string) string { return strings.ReplaceAll(ascii(value), "'", "''") }

// long says whether the text of a card takes more than one line.
func (c Card) long() bool {
	v, ok := c.Value.(string)
	return ok && len(quotedText(v)) > stringRoom
}

// longString writes a text in one card, or by the CONTINUE convention of
// section 4.2.1.2 in several.
func longString(key, value, comment string) []byte {
	quoted := quotedText(value)
	if len(quoted) <= stringRoom {
		return stringCard(key, quoted, comment)
	}
	var lines []byte
	for first := true; ; first = false {
		n := min(len(quoted), stringRoom-1) // the & takes one
		if n < len(quoted) {
			for n > 0 && strings.Count(quoted[:n], "'")%2 == 1 { // do not cut a doubled quote
				n--
			}
		}
		part, more := quoted[:n], len(quoted) > n
		quoted = quoted[n:]
		if more {
			part += "&"
		}
		head := "CONTINUE  '"
		if first {
			head = fmt.Sprintf("%-8s= '", key)
		}
		lines = append(lines, fit(head+part+"'", "")...)
		if !more {
			return lines
		}
	}
}

func goodKey(key string) bool {
	if key == "" || len(key) > 8 {
		return false
	}
	return strings.Trim(key, "ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_-") == ""
}

// cut splits a text into parts of at most n bytes, at least one.
func cut(text string, n int) []string {
	var parts []string
	for len(text) > n {
		parts = append(parts, text[:n])
		text = text[n:]
	}
	return append(parts, text)
}

// ASCII is a text as FITS headers and tables hold it.
func ASCII(text string) string { return ascii(text) }

// ascii folds what FITS headers may not hold.
func ascii(text string) string {
	folded := strings.NewReplacer("µ", "u", "μ", "u", "☉", "sun", "−", "-", "×", "x", "°", "deg", "±", "+-", "\n", " ").Replace(text)
	return strings.Map(func(c rune) rune {
		if c < ' ' || c > '~' {
			return '?'
		}
		return c
	}, folded)
}

// Rows hands over rows of the image of a unit, counted from 0 for the primary
// one; firstRow 0 is the bottom. The length of values is a multiple of
// Columns. It may be called from several goroutines; every row must come once.
func (f *FITS) Rows(unit, firstRow int, values []float32) error {
	if unit < 0 || unit >= len(f.units) {
		return fmt.Errorf("unit %d of %d: %w", unit, len(f.units), ErrFITS)
	}
	u := f.units[unit]
	if u.Columns == 0 || len(values)%u.Columns != 0 || firstRow < 0 || firstRow+len(values)/u.Columns > u.Rows {
		return fmt.Errorf("%d values from row %d on for %d x %d pixels: %w", len(values), firstRow, u.Columns, u.Rows, ErrFITS)
	}
	block := make([]byte, min(len(values)*fitsWord, 1<<18))
	at := int64(firstRow) * int64(u.Columns) * fitsWord
	for len(values) > 0 {
		n := min(len(values), len(block)/fitsWord)
		for k, v := range values[:n] {
			binary.BigEndian.PutUint32(block[fitsWord*k:], math.Float32bits(v))
		}
		if err := f.put(unit, block[:n*fitsWord], at); err != nil {
			return err
		}
		values, at = values[n:], at+int64(n)*fitsWord
	}
	return nil
}

// put writes data of a unit at an offset that is a multiple of a word.
func (f *FITS) put(unit int, data []byte, offset int64) error {
	u := f.units[unit]
	if _, err := f.w.WriteAt(data, u.at+int64(len(u.header))+offset); err != nil {
		return err
	}
	u.mu.Lock()
	defer u.mu.Unlock()
	u.sum = onesSum(u.sum, data)
	u.written += int64(len(data))
	return nil
}

// Close writes headers and padding. It fails if data is missing.
func (f *FITS) Close() error {
	for k, u := range f.units {
		if u.written != u.bytes {
			return fmt.Errorf("unit %d %s: %d of %d bytes were written: %w", k+1, u.Name, u.written, u.bytes, ErrFITS)
		}
		copy(u.header[u.dataSum:], stringCard("DATASUM", strconv.FormatUint(uint64(u.sum), 10), "data unit checksum"))
		all := onesSum(u.sum, u.header)
		copy(u.header[u.check:], stringCard("CHECKSUM", checkText(^all), "HDU checksum"))
		if _, err := f.w.WriteAt(u.header, u.at); err != nil {
			return err
		}
		if rest := padded(u.bytes) - u.bytes; rest > 0 {
			if _, err := f.w.WriteAt(make([]byte, rest), u.at+int64(len(u.header))+u.bytes); err != nil {
				return err
			}
		}
	}
	return nil
}

// onesSum adds big-endian words to a sum in ones' complement, appendix J of
// the standard; the order of the words does not matter. A last word that is
// short is filled up with zeros.
func onesSum(sum uint32, data []byte) uint32 {
	total := uint64(sum)
	for len(data) >= fitsWord {
		total += uint64(binary.BigEndian.Uint32(data))
		data = data[fitsWord:]
	}
	if len(data) > 0 {
		var last [fitsWord]byte
		copy(last[:], data)
		total += uint64(binary.BigEndian.Uint32(last[:]))
	}
	for total>>32 != 0 {
		total = total>>32 + total&0xffffffff
	}
	return uint32(total)
}

// checkText writes a sum as the 16 letters and digits of appendix J.
func checkText(sum uint32) string {
	var text [16]byte
	for k := range 4 {
		b := int(sum >> (24 - 8*k) & 0xff)
		quarter, rest := b/4+'0', b%4
		part := [4]int{quarter + rest, quarter, quarter, quarter}
		for again := true; again; { // no punctuation: shift pairs apart
			again = false
			for i := 0; i < 4; i += 2 {
				if strings.IndexByte(checkExcluded, byte(part[i])) >= 0 || strings.IndexByte(checkExcluded, byte(part[i+1])) >= 0 {
					part[i]++
					part[i+1]--
					again = true
				}
			}
		}
		for i := range 4 {
			text[4*i+k] = byte(part[i])
		}
	}
	// rotated right by one, so that the text lies on words in the card
	return string(text[15:]) + string(text[:15])
}

// checkExcluded are the characters between digits and letters.
const checkExcluded = ":;<=>?@[\\]^_`"

// Set replaces the value of a card that the unit's header has already, before
// Close: what is only known when all rows are written. Texts that take more
// than one line cannot be set.
func (f *FITS) Set(unit int, c Card) error {
	lines, err := c.lines()
	if err != nil {
		return err
	}
	u := f.units[unit]
	for at := 0; at < len(u.header); at += fitsCard {
		if strings.TrimRight(string(u.header[at:at+8]), " ") == c.Key && len(lines) == fitsCard {
			copy(u.header[at:], lines)
			return nil
		}
	}
	return fmt.Errorf("keyword %s is not in the header, or its text too long: %w", c.Key, ErrFITS)
}
