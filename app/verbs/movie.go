package verbs

import (
	"context"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"time"

	"annulet/raytrace"
	"annulet/scenes"
)

// frameNumber is where the number of a movie's frame stands in a file's name.
var frameNumber = regexp.MustCompile(`%(?:0[1-9])?d`)

// isMovie says whether -o asks for a file a frame: all of them or none.
func isMovie(paths []string) (bool, error) {
	patterns := 0
	for _, path := range paths {
		switch len(frameNumber.FindAllString(path, -1)) {
		case 0:
		case 1:
			patterns++
		default:
			return false, refuse("-o %s: allowed: the number of the frame once, as in frame-%%04d.png", path)
		}
	}
	if patterns > 0 && patterns < len(paths) {
		return false, refuse("-o: some names have a frame's number and some have none; allowed: all of them, or none")
	}
	return patterns > 0, nil
}

// framePaths are the names of the files of a frame.
func framePaths(patterns []string, frame int) []string {
	paths := make([]string, len(patterns))
	for k, pattern := range patterns {
		paths[k] = frameNumber.ReplaceAllStringFunc(pattern, func(verb string) string { return fmt.Sprintf(verb, frame) })
	}
	return paths
}

// atTime is the scene of one frame: the document with that time alone, so
// that a frame's file brings its own scene back.
func atTime(d *scenes.Document, t float64) (*scenes.Document, error) {
	one, err := scenes.Parse(d.Name(), d.Text())
	if err != nil {
		return nil, err
	}
	assignments := []scenes.Assignment{{Path: "time.start", Value: strconv.FormatFloat(t, 'g', -1, 64) + " M"}}
	for _, key := range []string{"time.end", "time.step"} {
		if _, given := one.Written(key); given {
			assignments = append(assignments, scenes.Assignment{Path: key, Unset: true})
		}
	}
	return one, one.SetAll(assignments...)
}

// The colours of a movie have the limits of small pilots of some of its
// frames, so that frames are comparable. Taste.
const (
	pilotFrames    = 25
	pilotFrameSide = 160 // pixels
)

// fixTone settles the limits for all frames.
func (j *renderJob) fixTone(ctx context.Context, times []float64) error {
	o := j.options
	o.Layers = j.picture.layers()
	f := j.view.Field
	coarse := (max(f.Columns, f.Rows) + pilotFrameSide - 1) / pilotFrameSide
	var values []float32
	stride := (len(times) + pilotFrames - 1) / pilotFrames
	for k := 0; k < len(times); k += stride {
		view, _, err := j.frame(times[k])
		if err != nil {
			return err
		}
		plate, err := view.Coarsened(coarse).Render(ctx, o)
		if err != nil {
			return err
		}
		values = append(values, j.picture.values(plate)...)
	}
	j.picture.tone = j.picture.tone.Fixed(values)
	return nil
}

// frame is what a time shows; orbits are shared with the first view.
func (j *renderJob) frame(t float64) (*raytrace.View, *scenes.Document, error) {
	d, err := atTime(j.document, t)
	if err != nil {
		return nil, nil, err
	}
	view, err := raytrace.NewViewIn(d.Scene(), d.Dir())
	if err != nil {
		return nil, nil, err
	}
	view.Follow(j.view)
	return view, d, nil
}

// writeMovie writes the files of every frame, numbered from 0, and returns
// their names; the plate tells the counts of all frames and the worst bounds.
func (j *renderJob) writeMovie(ctx context.Context, patterns []string) (*raytrace.Plate, []string, error) {
	times := j.document.Scene().Time.Frames()
	if err := j.fixTone(ctx, times); err != nil {
		return nil, nil, err
	}
	all := raytrace.Plate{Columns: j.view.Field.Columns, Rows: j.view.Field.Rows}
	var written []string
	begun := time.Now()
	for k, t := range times {
		one := *j
		var err error
		if one.view, one.document, err = j.frame(t); err != nil {
			return nil, nil, err
		}
		one.options.Layers = slices.Clone(j.options.Layers)
		paths := framePaths(patterns, k)
		plate, err := one.write(ctx, paths)
		if err != nil {
			return nil, nil, fmt.Errorf("frame %d of %d, at %g M: %w", k, len(times), t, err)
		}
		written = append(written, paths...)
		all.Tally(plate)
	}
	j.s.note("render: %d frames from %g to %g M, %.2f s a frame", len(times), times[0], times[len(times)-1],
		time.Since(begun).Seconds()/float64(len(times)))
	return &all, written, nil
}
