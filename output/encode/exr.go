package encode

import (
	"bytes"
	"cmp"
	"compress/zlib"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"slices"

	"github.com/x448/float16"

	"lampbook/engine/pixmap"
)

// Parts of the OpenEXR format. Source: "OpenEXR File Layout" and "Technical Introduction to OpenEXR" (openexr.com).
const (
	exrMagic      = 20000630
	exrVersion    = 2
	exrLongNames  = 0x400 // version flag: names of 32 to 255 bytes
	exrHalf       = 1     // pixel type
	exrFloat      = 2
	exrZIP        = 3  // compression: zlib over blocks of scanlines
	exrBlockLines = 16 // scanlines in a ZIP block
	exrMaxName    = 255
	exrMaxHalf    = 65504
)

// EXR writes every plane of an image as a channel of a single-part OpenEXR file of scanlines: float, or half where o.Bits is 16.
// Values are written as they are: linear light, premultiplied by alpha. Finite values beyond a half's range become ±65504, which is nearer to
// the truth than infinity; infinities and NaN stay. Primaries are Rec. 709 with a D65 white. o.Text and o.Numbers become string and float
// attributes. Channels stand sorted by name, as the format demands.
func EXR(w io.Writer, img *pixmap.Image, o Options) error {
	e := exrWriter{img: img, pixelType: exrFloat, pixelSize: 4}
	switch o.Bits {
	case 0, 32:
	case 16:
		e.pixelType, e.pixelSize = exrHalf, 2
	default:
		return fmt.Errorf("exr: bits a channel must be 16 or 32, got %d", o.Bits)
	}
	if err := e.prepare(); err != nil {
		return fmt.Errorf("exr: %w", err)
	}
	header, err := e.header(o)
	if err != nil {
		return fmt.Errorf("exr: %w", err)
	}
	blocks, err := e.blocks()
	if err != nil {
		return fmt.Errorf("exr: %w", err)
	}
	// The offsets of the blocks stand before them.
	offset := uint64(len(header) + 8*len(blocks))
	for _, b := range blocks {
		header = binary.LittleEndian.AppendUint64(header, offset)
		offset += uint64(len(b))
	}
	for _, part := range append([][]byte{header}, blocks...) {
		if _, err := w.Write(part); err != nil {
			return fmt.Errorf("exr: %w", err)
		}
	}
	return nil
}

type exrWriter struct {
	img       *pixmap.Image
	planes    []pixmap.Plane // sorted by name
	longNames bool
	pixelType int
	pixelSize int // bytes
}

// prepare sorts the planes and checks what the format cannot hold.
func (e *exrWriter) prepare() error {
	if err := checkSize(e.img); err != nil {
		return err
	}
	if len(e.img.Planes) == 0 {
		return fmt.Errorf("the image has no planes")
	}
	e.planes = slices.Clone(e.img.Planes)
	slices.SortFunc(e.planes, func(a, b pixmap.Plane) int { return cmp.Compare(a.Name, b.Name) })
	for i, p := range e.planes {
		switch {
		case p.Name == "" || len(p.Name) > exrMaxName || bytes.IndexByte([]byte(p.Name), 0) >= 0:
			return fmt.Errorf("plane name %q: 1 to %d bytes are accepted, none zero", p.Name, exrMaxName)
		case i > 0 && p.Name == e.planes[i-1].Name:
			return fmt.Errorf("plane %q is there twice", p.Name)
		}
		e.longNames = e.longNames || len(p.Name) > maxKey
	}
	return nil
}

// header lays out the magic number, the version and the attributes.
func (e *exrWriter) header(o Options) ([]byte, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	le := binary.LittleEndian
	h := le.AppendUint32(nil, exrMagic)
	version := uint32(exrVersion)
	if e.longNames {
		version |= exrLongNames
	}
	h = le.AppendUint32(h, version)
	used := map[string]bool{}
	attribute := func(name, kind string, data []byte) {
		used[name] = true
		h = append(append(h, name...), 0)
		h = append(append(h, kind...), 0)
		h = le.AppendUint32(h, uint32(len(data)))
		h = append(h, data...)
	}
	var channels []byte
	for _, p := range e.planes {
		channels = append(append(channels, p.Name...), 0)
		channels = le.AppendUint32(channels, uint32(e.pixelType))
		channels = append(channels, 0, 0, 0, 0) // linear light; reserved
		channels = le.AppendUint32(channels, 1) // sampled at every pixel, both ways
		channels = le.AppendUint32(channels, 1)
	}
	channels = append(channels, 0)
	var window []byte
	for _, v := range [...]int{0, 0, e.img.Width - 1, e.img.Height - 1} {
		window = le.AppendUint32(window, uint32(v))
	}
	attribute("channels", "chlist", channels)
	attribute("chromaticities", "chromaticities", floats(0.64, 0.33, 0.30, 0.60, 0.15, 0.06, 0.3127, 0.3290)) // Rec. ITU-R BT.709-6, items 1.3 and 1.4
	attribute("compression", "compression", []byte{exrZIP})
	attribute("dataWindow", "box2i", window)
	attribute("displayWindow", "box2i", window)
	attribute("lineOrder", "lineOrder", []byte{0}) // downwards
	attribute("pixelAspectRatio", "float", floats(1))
	attribute("screenWindowCenter", "v2f", floats(0, 0))
	attribute("screenWindowWidth", "float", floats(1))
	for _, kv := range o.Text {
		if used[kv.Key] || kv.Key == "name" || kv.Key == "type" {
			return nil, fmt.Errorf("metadata key %q means something of its own in the format: choose another", kv.Key)
		}
		attribute(kv.Key, "string", []byte(kv.Value))
	}
	for _, kn := range o.Numbers {
		if used[kn.Key] || kn.Key == "name" || kn.Key == "type" {
			return nil, fmt.Errorf("metadata key %q means something of its own in the format: choose another", kn.Key)
		}
		attribute(kn.Key, "float", floats(kn.Value))
	}
	return append(h, 0), nil
}

func floats(values ...float32) []byte {
	var b []byte
	for _, v := range values {
		b = binary.LittleEndian.AppendUint32(b, math.Float32bits(v))
	}
	return b
}

// blocks lays out and compresses the scanlines, sixteen at a time. Within a scanline each channel's values stand together.
func (e *exrWriter) blocks() ([][]byte, error) {
	width, height := e.img.Width, e.img.Height
	var blocks [][]byte
	var packed bytes.Buffer
	z := zlib.NewWriter(&packed)
	raw := make([]byte, 0, exrBlockLines*width*len(e.planes)*e.pixelSize)
	split := make([]byte, cap(raw))
	for y0 := 0; y0 < height; y0 += exrBlockLines {
		raw = raw[:0]
		for y := y0; y < min(y0+exrBlockLines, height); y++ {
			for _, p := range e.planes {
				raw = e.appendValues(raw, p.Pix[y*width:][:width])
			}
		}
		packed.Reset()
		z.Reset(&packed)
		if _, err := z.Write(predict(split[:len(raw)], raw)); err != nil {
			return nil, err
		}
		if err := z.Close(); err != nil {
			return nil, err
		}
		data := packed.Bytes()
		if len(data) >= len(raw) {
			data = raw // a block that compression would not shrink stands as it is; readers tell by the size
		}
		b := make([]byte, 0, 8+len(data))
		b = binary.LittleEndian.AppendUint32(b, uint32(y0))
		b = binary.LittleEndian.AppendUint32(b, uint32(len(data)))
		blocks = append(blocks, append(b, data...))
	}
	return blocks, nil
}

func (e *exrWriter) appendValues(out []byte, values []float32) []byte {
	if e.pixelType == exrFloat {
		for _, v := range values {
			out = binary.LittleEndian.AppendUint32(out, math.Float32bits(v))
		}
		return out
	}
	for _, v := range values {
		out = binary.LittleEndian.AppendUint16(out, halfOf(v))
	}
	return out
}

// halfOf rounds to the nearest half, ties to even; finite values stay finite.
func halfOf(v float32) uint16 {
	if v > exrMaxHalf && v <= math.MaxFloat32 {
		v = exrMaxHalf
	} else if v < -exrMaxHalf && v >= -math.MaxFloat32 {
		v = -exrMaxHalf
	}
	return float16.Fromfloat32(v).Bits()
}

// predict writes the bytes of raw into out as the format's ZIP wants them: first those at even places, then those at odd ones (so
// that like bytes of neighbouring values meet), and each but the first as its difference from the one before, plus 128.
func predict(out, raw []byte) []byte {
	half := (len(raw) + 1) / 2
	for i, b := range raw {
		if i%2 == 0 {
			out[i/2] = b
		} else {
			out[half+i/2] = b
		}
	}
	for i := len(out) - 1; i > 0; i-- {
		out[i] = out[i] - out[i-1] + 128
	}
	return out
}
