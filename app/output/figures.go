package output

import (
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"errors"
	"io"
	"regexp"
	"strconv"
)

// SceneFile is the name of the scene attached to a PDF.
const SceneFile = "scene.toml"

// The scene in the metadata of an SVG stands between these, in base64.
const (
	SVGSceneBegin = `<annulet:scene xmlns:annulet="urn:annulet:scene" encoding="base64">`
	SVGSceneEnd   = `</annulet:scene>`
)

// find returns where a text first begins at or after a place, -1 if nowhere.
// It holds no more than two pieces of the file.
func find(f io.ReaderAt, from, size int64, text string) (int64, error) {
	const piece = 1 << 16
	buffer := make([]byte, piece+len(text)-1)
	for at := from; at < size; at += piece {
		n, err := f.ReadAt(buffer[:min(int64(len(buffer)), size-at)], at)
		if err != nil && !errors.Is(err, io.EOF) {
			return -1, err
		}
		if k := bytes.Index(buffer[:n], []byte(text)); k >= 0 {
			return at + int64(k), nil
		}
	}
	return -1, nil
}

// embedded is the head of an attachment as the library for PDF writes it.
var embedded = regexp.MustCompile(`^/Type /EmbeddedFile /Length (\d+) /Filter /FlateDecode [^\n]*>>\s+stream\r?\n`)

// recoverPDF reads the first attachment.
func recoverPDF(f io.ReaderAt, size int64) ([]byte, error) {
	at, err := find(f, 0, size, "/Type /EmbeddedFile ")
	if err != nil {
		return nil, err
	}
	if at < 0 {
		return nil, ErrNoScene
	}
	const longest = 400 // of the head
	head := make([]byte, min(longest, size-at))
	if _, err := f.ReadAt(head, at); err != nil && !errors.Is(err, io.EOF) {
		return nil, orNoScene(err)
	}
	found := embedded.FindSubmatchIndex(head)
	if found == nil {
		return nil, orNoScene(errors.New("an attachment of another kind than Annulet writes"))
	}
	length, err := strconv.ParseInt(string(head[found[2]:found[3]]), 10, 64)
	if err != nil || length > 2*maxScene || at+int64(found[1])+length > size {
		return nil, orNoScene(errors.New("its scene is too long"))
	}
	z, err := zlib.NewReader(io.NewSectionReader(f, at+int64(found[1]), length))
	if err != nil {
		return nil, orNoScene(err)
	}
	defer z.Close()
	scene, err := io.ReadAll(io.LimitReader(z, maxScene+1))
	if err != nil {
		return nil, orNoScene(err)
	}
	if len(scene) > maxScene {
		return nil, orNoScene(errors.New("its scene is too long"))
	}
	return scene, nil
}

// recoverSVG reads the metadata.
func recoverSVG(f io.ReaderAt, size int64) ([]byte, error) {
	at, err := find(f, 0, size, SVGSceneBegin)
	if err != nil {
		return nil, err
	}
	if at < 0 {
		return nil, ErrNoScene
	}
	at += int64(len(SVGSceneBegin))
	end, err := find(f, at, min(size, at+2*maxScene), SVGSceneEnd)
	if err != nil {
		return nil, err
	}
	if end < 0 {
		return nil, orNoScene(errors.New("its scene has no end, or is too long"))
	}
	text := make([]byte, end-at)
	if _, err := f.ReadAt(text, at); err != nil {
		return nil, orNoScene(err)
	}
	scene, err := base64.StdEncoding.DecodeString(string(text))
	if err != nil {
		return nil, orNoScene(err)
	}
	return scene, nil
}
