package output

import (
	"archive/zip"
	"bufio"
	"bytes"
	"encoding/binary"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"path"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"annulet/app/files"
)

var (
	// ErrNoScene: a sound file, but no scene in it.
	ErrNoScene = errors.New("there is no scene in this file")
	// ErrKind: a file of a kind that Annulet does not write.
	ErrKind = errors.New("this is no file that Annulet writes: FITS, NPZ, PNG, TIFF, PDF, SVG, CSV, ECSV, JSON")
	// ErrDamaged: a file that ends early or contradicts itself.
	ErrDamaged = errors.New("the file is damaged")
)

// maxScene bounds a scene in a file, bytes: what package scenes takes.
const maxScene = 1 << 20

// Recover returns the text of the scene in a file that Annulet wrote. It
// reads no more than it must and holds no more than the scene and a little:
// sizes that the file claims are not believed. Errors wrap ErrNoScene, ErrKind
// or ErrDamaged, or what the system said.
func Recover(name string) (scene []byte, err error) {
	f, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s: %w", name, ErrKind)
	}
	scene, err = recoverFrom(f, info.Size())
	if err == nil && !utf8.Valid(scene) {
		err = fmt.Errorf("%w: its scene is not UTF-8", ErrDamaged)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return scene, nil
}

// source is a file in hand.
type source interface {
	io.ReaderAt
	io.ReadSeeker
}

func recoverFrom(f source, size int64) ([]byte, error) {
	var start [8]byte
	n, err := f.ReadAt(start[:], 0)
	if err != nil && !errors.Is(err, io.EOF) {
		return nil, err
	}
	head := string(start[:n])
	switch {
	case strings.HasPrefix(head, "\x89PNG"):
		return recoverPNG(f)
	case strings.HasPrefix(head, "SIMPLE  "):
		return recoverFITS(f, size)
	case strings.HasPrefix(head, "PK\x03\x04"):
		return recoverNPZ(f, size)
	case strings.HasPrefix(head, "II*\x00"):
		return recoverTIFF(f, size)
	case strings.HasPrefix(head, "# "):
		return recoverCSV(f)
	case strings.HasPrefix(head, "%PDF-"):
		return recoverPDF(f, size)
	case strings.HasPrefix(head, "<?xml"):
		return recoverSVG(f, size)
	case strings.HasPrefix(head, "{"):
		return recoverJSON(f)
	}
	return nil, ErrKind
}

func recoverPNG(f io.Reader) ([]byte, error) {
	texts, err := files.PNGTexts(bufio.NewReader(f), 2*maxScene)
	for _, t := range texts {
		if t.Keyword == sceneKeyword {
			return []byte(t.Value), nil
		}
	}
	return nil, orNoScene(err)
}

// orNoScene: a file that ended well has no scene, another one is damaged.
func orNoScene(err error) error {
	if err == nil {
		return ErrNoScene
	}
	return fmt.Errorf("%w: %v", ErrDamaged, err)
}

// recoverFITS walks from header to header.
func recoverFITS(f source, size int64) ([]byte, error) {
	const block, card = 2880, 80
	const maxUnits, maxBlocks = 1000, 100 // far more than Annulet writes
	at := int64(0)
	for range maxUnits {
		if at >= size {
			return nil, ErrNoScene
		}
		number := map[string]int64{}
		name, column, ended := "", "", false
		for blocks := 0; !ended; blocks++ {
			var lines [block]byte
			if _, err := f.ReadAt(lines[:], at); err != nil || blocks == maxBlocks {
				return nil, orNoScene(errors.Join(err, errors.New("a header without end")))
			}
			at += block
			for k := 0; k < block && !ended; k += card {
				line := string(lines[k : k+card])
				key := strings.TrimRight(line[:8], " ")
				value, _, _ := strings.Cut(strings.TrimPrefix(line[8:], "= "), "/")
				value = strings.TrimSpace(value)
				switch key {
				case "END":
					ended = true
				case "EXTNAME":
					name = strings.TrimSpace(strings.Trim(value, "'"))
				case "TTYPE1":
					column = strings.TrimSpace(strings.Trim(value, "'"))
				case "BITPIX", "NAXIS", "NAXIS1", "NAXIS2", "NAXIS3", "PCOUNT", "GCOUNT":
					n, err := strconv.ParseInt(value, 10, 64)
					if err != nil || n > size && key != "BITPIX" || n < -64 {
						return nil, orNoScene(fmt.Errorf("%s = %s", key, value))
					}
					number[key] = n
				}
			}
		}
		data := max(number["BITPIX"], -number["BITPIX"]) / 8
		for axis := int64(1); axis <= number["NAXIS"]; axis++ {
			n := number["NAXIS"+strconv.FormatInt(axis, 10)]
			if n != 0 && data > size/n {
				return nil, orNoScene(errors.New("a unit larger than the file"))
			}
			data *= n
		}
		if number["NAXIS"] == 0 {
			data = 0
		}
		if name == sceneUnit && column == "TEXT" && number["NAXIS2"] == 1 {
			if data > maxScene || at+data > size {
				return nil, orNoScene(errors.New("its scene is too long"))
			}
			scene := make([]byte, data)
			_, err := f.ReadAt(scene, at)
			return scene, err
		}
		at += (data + number["PCOUNT"] + block - 1) / block * block
	}
	return nil, orNoScene(errors.New("too many units"))
}

// recoverNPZ reads one member; what it unpacks to is bounded.
func recoverNPZ(f io.ReaderAt, size int64) ([]byte, error) {
	const directory = 1 << 20 // bytes, thousands of members; Annulet writes ten
	allowed := &allowance{f, directory}
	z, err := zip.NewReader(allowed, size)
	if err != nil {
		return nil, orNoScene(err)
	}
	allowed.left = 4 * maxScene
	for _, member := range z.File {
		if member.Name != sceneMember+".npy" {
			continue
		}
		r, err := member.Open()
		if err != nil {
			return nil, orNoScene(err)
		}
		defer r.Close()
		const header = 1 << 10
		text, err := io.ReadAll(io.LimitReader(r, maxScene+header+1))
		if err != nil {
			return nil, orNoScene(err)
		}
		const preamble = 10
		if len(text) < preamble || len(text) > maxScene+header || string(text[:8]) != "\x93NUMPY\x01\x00" {
			return nil, orNoScene(errors.New("the scene is no array of bytes"))
		}
		skip := preamble + int(binary.LittleEndian.Uint16(text[8:]))
		if skip > len(text) || !bytes.Contains(text[:skip], []byte("'|u1'")) {
			return nil, orNoScene(errors.New("the scene is no array of bytes"))
		}
		return text[skip:], nil
	}
	return nil, ErrNoScene
}

// allowance reads no more than it is given: a zip's directory is held whole,
// and a file may be nothing but directory.
type allowance struct {
	io.ReaderAt
	left int
}

func (a *allowance) ReadAt(p []byte, at int64) (int, error) {
	if a.left -= len(p); a.left < 0 {
		return 0, errors.New("its directory or its scene is too long")
	}
	return a.ReaderAt.ReadAt(p, at)
}

// recoverTIFF reads the description of the first picture.
func recoverTIFF(f io.ReaderAt, size int64) ([]byte, error) {
	order := binary.LittleEndian
	var start [8]byte
	if _, err := f.ReadAt(start[:], 0); err != nil {
		return nil, orNoScene(err)
	}
	at := int64(order.Uint32(start[4:]))
	var count [2]byte
	if _, err := f.ReadAt(count[:], at); err != nil {
		return nil, orNoScene(err)
	}
	entries := make([]byte, tiffEntry*int(order.Uint16(count[:])))
	if _, err := f.ReadAt(entries, at+2); err != nil {
		return nil, orNoScene(err)
	}
	for ; len(entries) >= tiffEntry; entries = entries[tiffEntry:] {
		if order.Uint16(entries) != tiffDescription || order.Uint16(entries[2:]) != tiffASCII {
			continue
		}
		length, offset := int64(order.Uint32(entries[4:])), int64(order.Uint32(entries[8:]))
		if length < 1 || length > maxScene+1 || offset+length > size {
			return nil, orNoScene(errors.New("its scene is too long"))
		}
		scene := make([]byte, length-1) // a zero ends it
		_, err := f.ReadAt(scene, offset)
		return scene, err
	}
	return nil, ErrNoScene
}

// scenePrefix begins each line of a scene in the head of a CSV file.
const scenePrefix = "#| "

// recoverCSV reads the comment lines at the head.
func recoverCSV(f io.Reader) ([]byte, error) {
	var scene []byte
	found := false
	lines := bufio.NewReader(io.LimitReader(f, 4*maxScene))
	for {
		line, err := lines.ReadString('\n')
		if text, ok := strings.CutPrefix(line, scenePrefix); ok {
			scene, found = append(scene, text...), true
		}
		if text, ok := strings.CutPrefix(line, ecsvScene); ok {
			var whole string
			if err := json.Unmarshal([]byte(text), &whole); err != nil {
				return nil, orNoScene(err)
			}
			return []byte(whole), nil
		}
		if err != nil || len(scene) > maxScene {
			if found { // the head is not whole, so the scene may not be
				return nil, orNoScene(errors.New("its head ends early"))
			}
			break
		}
		if !strings.HasPrefix(line, "#") {
			break
		}
	}
	if !found {
		return nil, ErrNoScene
	}
	return scene, nil
}

// SceneKey is the first key of a JSON document that a verb writes; its value
// is the scene.
const SceneKey = "scene"

// recoverJSON reads no further than the first key and its value.
func recoverJSON(f io.Reader) ([]byte, error) {
	document := json.NewDecoder(io.LimitReader(f, 8*maxScene)) // a byte takes up to six
	var tokens [3]json.Token
	for k := range tokens {
		var err error
		if tokens[k], err = document.Token(); err != nil {
			return nil, orNoScene(err)
		}
		if k == 1 && tokens[k] != SceneKey {
			return nil, ErrNoScene
		}
	}
	scene, ok := tokens[2].(string)
	if !ok || len(scene) > maxScene {
		return nil, orNoScene(errors.New("its scene is no text, or too long"))
	}
	return []byte(scene), nil
}

// Recoverable says by a name's extension whether Recover may know the file.
func Recoverable(name string) bool {
	return slices.Contains(Extensions, strings.ToLower(path.Ext(name)))
}

// Extensions are those of the files that Recover knows.
var Extensions = []string{".fits", ".npz", ".png", ".tif", ".tiff", ".pdf", ".svg", ".csv", ".ecsv", ".json"}
