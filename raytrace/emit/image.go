package emit

import (
	"bufio"
	"errors"
	"fmt"
	"image"
	_ "image/jpeg" // formats of sky images
	_ "image/png"
	"io"
	"math"
	"os"
	"sync"
	"time"

	_ "golang.org/x/image/tiff"
)

// MaxImagePixels bounds the images of skies. Method: one takes 5.3 bytes a
// pixel while it is in use and up to 8 more while it is read.
const MaxImagePixels = 1 << 27

// ErrImageSize says that an image is empty or has more than MaxImagePixels.
var ErrImageSize = errors.New("size of the image")

// LoadImage reads an equirectangular PNG, JPEG or TIFF image as a sky. Its
// brightness is the linear luminance, 1 for white. The last image read is
// kept, so that many scenes with the same sky read it once.
func LoadImage(path string) (*Picture, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, fmt.Errorf("sky image: %w", err)
	}
	lastImage.Lock()
	defer lastImage.Unlock()
	if lastImage.picture != nil && lastImage.path == path && lastImage.size == info.Size() && lastImage.modified.Equal(info.ModTime()) {
		return lastImage.picture, nil
	}
	file, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("sky image: %w", err)
	}
	defer file.Close()
	picture, err := DecodeImage(file)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	lastImage.path, lastImage.size, lastImage.modified, lastImage.picture = path, info.Size(), info.ModTime(), picture
	return picture, nil
}

var lastImage struct {
	sync.Mutex
	path     string
	size     int64
	modified time.Time
	picture  *Picture
}

// DecodeImage is LoadImage from a reader. It looks at the size before it
// decodes; its errors may wrap ErrImageSize or image.ErrFormat.
func DecodeImage(r io.ReadSeeker) (*Picture, error) {
	config, _, err := image.DecodeConfig(bufio.NewReader(r))
	if err != nil {
		return nil, fmt.Errorf("sky image: %w: want PNG, JPEG or TIFF", err)
	}
	columns, rows := config.Width, config.Height
	if columns <= 0 || rows <= 0 || rows > MaxImagePixels/columns {
		return nil, fmt.Errorf("sky image: %w: %d x %d pixels, want 1 to %d in all", ErrImageSize, columns, rows, MaxImagePixels)
	}
	if _, err := r.Seek(0, io.SeekStart); err != nil {
		return nil, fmt.Errorf("sky image: %w", err)
	}
	img, _, err := image.Decode(bufio.NewReader(r))
	if err != nil {
		return nil, fmt.Errorf("sky image: %w", err)
	}
	return fromImage(img)
}

// fromImage turns an image into linear luminance. Where it is transparent it
// is black.
func fromImage(img image.Image) (*Picture, error) {
	bounds := img.Bounds()
	columns, rows := bounds.Dx(), bounds.Dy()
	fast, ok := img.(image.RGBA64Image)
	if !ok {
		return nil, fmt.Errorf("sky image: pixels of type %T are not read", img)
	}
	linear := linearTable()
	values := make([]float32, columns*rows)
	for y := range rows {
		for x := range columns {
			c := fast.RGBA64At(bounds.Min.X+x, bounds.Min.Y+y)
			values[y*columns+x] = redShare*linear[c.R] + greenShare*linear[c.G] + blueShare*linear[c.B]
		}
	}
	return newPicture(columns, rows, values), nil
}

// Shares of the primaries in luminance: ITU-R BT.709, the primaries of sRGB.
const redShare, greenShare, blueShare = 0.2126, 0.7152, 0.0722

// linearTable is the decoding of sRGB, IEC 61966-2-1 (1999), for 16 bits.
var linearTable = sync.OnceValue(func() *[1 << 16]float32 {
	var table [1 << 16]float32
	for i := range table {
		v := float64(i) / 0xffff
		if v <= 0.04045 {
			v /= 12.92
		} else {
			v = math.Pow((v+0.055)/1.055, 2.4)
		}
		table[i] = float32(v)
	}
	return &table
})
