package encode

import (
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"image"
	"image/png"
	"io"
	"math"

	"lampbook/engine/pixmap"
)

// PNG writes a display image (planes "R", "G", "B", sRGB-encoded, straight, and perhaps "A", all in [0, 1]; other planes are
// left out) as a PNG of 8 or 16 bits a channel. Where every pixel is opaque, no alpha is written. Values outside [0, 1] go to the
// nearer end; a value that is no number is an error. Eight bits are dithered as Quantize8 does.
//
// The file says that it is sRGB (chunks sRGB, gAMA and cHRM) and carries o.Text and o.Numbers as iTXt.
// Format: PNG, W3C Recommendation, third edition (ISO/IEC 15948).
func PNG(w io.Writer, img *pixmap.Image, o Options) error {
	var pixels image.Image
	var err error
	switch o.Bits {
	case 0, 8:
		pixels, err = Quantize8(img)
	case 16:
		pixels, err = quantize16(img)
	default:
		return fmt.Errorf("png: bits a channel must be 8 or 16, got %d", o.Bits)
	}
	if err != nil {
		return err
	}
	return PNGImage(w, pixels, o)
}

// PNGImage writes ready codes, such as a contact sheet, with the same chunks as PNG. o.Bits does not count: the
// picture has the depth of its type.
func PNGImage(w io.Writer, img image.Image, o Options) error {
	chunks, err := headerChunks(o)
	if err != nil {
		return fmt.Errorf("png: %w", err)
	}
	if err := png.Encode(&splicer{w: w, at: ihdrEnd, insert: chunks}, img); err != nil {
		return fmt.Errorf("png: %w", err)
	}
	return nil
}

// Quantize8 gives a display image's 8-bit codes: each value times 255, plus a threshold of an ordered blue-noise matrix within ±1/2,
// rounded. So a smooth ramp shows no steps, a flat patch of an exact code k/255 keeps just that code, and neutral pixels stay neutral.
// Alpha is rounded without dither. A missing "A" means opaque.
func Quantize8(img *pixmap.Image) (*image.NRGBA, error) {
	d, err := displayOf(img)
	if err != nil {
		return nil, err
	}
	m := ditherMatrix()
	out := image.NewNRGBA(image.Rect(0, 0, img.Width, img.Height))
	for y := range img.Height {
		thresholds := m[y%ditherSide*ditherSide:][:ditherSide]
		for x := range img.Width {
			i := y*img.Width + x
			t := float64(thresholds[x%ditherSide]) + 0.5
			px := out.Pix[4*i : 4*i+4 : 4*i+4]
			px[0] = uint8(float64(float64(unit(d.r[i]))*255) + t)
			px[1] = uint8(float64(float64(unit(d.g[i]))*255) + t)
			px[2] = uint8(float64(float64(unit(d.b[i]))*255) + t)
			px[3] = 255
			if d.a != nil {
				px[3] = uint8(float64(float64(unit(d.a[i]))*255) + 0.5)
			}
		}
	}
	return out, nil
}

// quantize16 gives 16-bit codes, rounded.
func quantize16(img *pixmap.Image) (*image.NRGBA64, error) {
	d, err := displayOf(img)
	if err != nil {
		return nil, err
	}
	out := image.NewNRGBA64(image.Rect(0, 0, img.Width, img.Height))
	put := func(at []byte, v float32) {
		binary.BigEndian.PutUint16(at, uint16(float64(float64(unit(v))*65535)+0.5))
	}
	for i := range d.r {
		px := out.Pix[8*i : 8*i+8]
		put(px[0:], d.r[i])
		put(px[2:], d.g[i])
		put(px[4:], d.b[i])
		px[6], px[7] = 0xff, 0xff
		if d.a != nil {
			put(px[6:], d.a[i])
		}
	}
	return out, nil
}

// display is the planes of a display image; a is nil where there is no alpha.
type display struct{ r, g, b, a []float32 }

func displayOf(img *pixmap.Image) (display, error) {
	if err := checkSize(img); err != nil {
		return display{}, fmt.Errorf("png: %w", err)
	}
	d := display{img.Plane("R"), img.Plane("G"), img.Plane("B"), img.Plane("A")}
	if d.r == nil || d.g == nil || d.b == nil {
		return display{}, fmt.Errorf("png: the image needs planes R, G and B, it has %s", planeNames(img))
	}
	for _, name := range [...]string{"R", "G", "B", "A"} {
		for i, v := range img.Plane(name) {
			if math.IsNaN(float64(v)) {
				return display{}, fmt.Errorf("png: plane %s is not a number at pixel %d, %d", name, i%img.Width, i/img.Width)
			}
		}
	}
	return d, nil
}

// planeNames lists an image's planes for a message.
func planeNames(img *pixmap.Image) string {
	if len(img.Planes) == 0 {
		return "none"
	}
	s := ""
	for i, p := range img.Planes {
		if i > 0 {
			s += ", "
		}
		s += p.Name
	}
	return s
}

func unit(v float32) float32 { return min(max(v, 0), 1) }

// ihdrEnd is where the first chunk ends: the signature's 8 bytes, then IHDR's length, name, 13 bytes and checksum.
const ihdrEnd = 8 + 4 + 4 + 13 + 4

// splicer passes bytes on and puts insert in after the first at of them.
type splicer struct {
	w      io.Writer
	at     int // bytes still to pass before the insertion
	insert []byte
}

func (s *splicer) Write(p []byte) (int, error) {
	n := 0
	if s.insert != nil && len(p) >= s.at {
		k, err := s.w.Write(p[:s.at])
		n += k
		if err != nil {
			return n, err
		}
		if _, err := s.w.Write(s.insert); err != nil {
			return n, err
		}
		p, s.insert = p[s.at:], nil
	}
	k, err := s.w.Write(p)
	s.at -= k
	return n + k, err
}

// headerChunks returns the chunks that stand between IHDR and the pixels.
func headerChunks(o Options) ([]byte, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	var out []byte
	// Rec. 709 primaries and D65 in hundred-thousandths, and the gamma that the PNG specification gives for sRGB (section 11.3.2).
	chrm := make([]byte, 0, 32)
	for _, v := range [...]uint32{31270, 32900, 64000, 33000, 30000, 60000, 15000, 6000} {
		chrm = binary.BigEndian.AppendUint32(chrm, v)
	}
	out = appendChunk(out, "gAMA", binary.BigEndian.AppendUint32(nil, 45455))
	out = appendChunk(out, "cHRM", chrm)
	out = appendChunk(out, "sRGB", []byte{1}) // relative colorimetric: what can be shown is shown as it is
	for _, kv := range o.Text {
		out = appendChunk(out, "iTXt", textChunk(kv.Key, kv.Value))
	}
	for _, kn := range o.Numbers {
		out = appendChunk(out, "iTXt", textChunk(kn.Key, decimal(kn.Value)))
	}
	return out, nil
}

// textChunk lays out an uncompressed iTXt without language or translated keyword.
func textChunk(key, value string) []byte {
	data := append([]byte(key), 0, 0, 0, 0, 0)
	return append(data, value...)
}

func appendChunk(out []byte, name string, data []byte) []byte {
	out = binary.BigEndian.AppendUint32(out, uint32(len(data)))
	start := len(out)
	out = append(out, name...)
	out = append(out, data...)
	return binary.BigEndian.AppendUint32(out, crc32.ChecksumIEEE(out[start:]))
}
