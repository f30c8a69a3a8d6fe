package encode

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"fmt"
	"io"
	"math"

	"github.com/x448/float16"

	"lampbook/engine/pixmap"
)

// exrFile is what readEXR finds.
type exrFile struct {
	attributes map[string][]byte
	kinds      map[string]string
	order      []string // attribute names as they stand
	image      *pixmap.Image
	half       bool
}

// readEXR reads what EXR writes (scanlines, ZIP) and single uncompressed tiles, as exrmaketiled makes them. Written from the
// format's description, apart from the writer; for tests.
func readEXR(data []byte) (f exrFile, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("broken file: %v", r)
		}
	}()
	le := binary.LittleEndian
	if le.Uint32(data) != 20000630 {
		return f, fmt.Errorf("magic number %d", le.Uint32(data))
	}
	version := le.Uint32(data[4:])
	tiled := version&0x200 != 0
	pos := 8
	text := func() string {
		n := bytes.IndexByte(data[pos:], 0)
		s := string(data[pos : pos+n])
		pos += n + 1
		return s
	}
	f.attributes, f.kinds = map[string][]byte{}, map[string]string{}
	for {
		name := text()
		if name == "" {
			break
		}
		f.kinds[name] = text()
		n := int(le.Uint32(data[pos:]))
		f.attributes[name] = data[pos+4 : pos+4+n]
		f.order = append(f.order, name)
		pos += 4 + n
	}
	w := f.attributes["dataWindow"]
	width, height := int(int32(le.Uint32(w[8:]))-int32(le.Uint32(w)))+1, int(int32(le.Uint32(w[12:]))-int32(le.Uint32(w[4:])))+1
	f.image = &pixmap.Image{Width: width, Height: height}
	size := 4
	for ch := f.attributes["channels"]; ch[0] != 0; {
		n := bytes.IndexByte(ch, 0)
		f.image.Add(string(ch[:n]))
		if f.half = le.Uint32(ch[n+1:]) == 1; f.half {
			size = 2
		}
		ch = ch[n+1+16:]
	}
	line := width * size * len(f.image.Planes)
	scanlines := func(y0 int, raw []byte) {
		for k := 0; k*line < len(raw); k++ {
			for c := range f.image.Planes {
				at := raw[k*line+c*width*size:]
				for x := range width {
					v := &f.image.Planes[c].Pix[(y0+k)*width+x]
					if size == 2 {
						*v = float16.Frombits(le.Uint16(at[2*x:])).Float32()
					} else {
						*v = math.Float32frombits(le.Uint32(at[4*x:]))
					}
				}
			}
		}
	}
	compression := f.attributes["compression"][0]
	if tiled {
		if compression != 0 {
			return f, fmt.Errorf("tiles with compression %d", compression)
		}
		at := data[le.Uint64(data[pos:]):]
		scanlines(0, at[20:20+int(le.Uint32(at[16:]))])
		return f, nil
	}
	if compression != 3 {
		return f, fmt.Errorf("scanlines with compression %d", compression)
	}
	for b := 0; b*16 < height; b++ {
		at := data[le.Uint64(data[pos+8*b:]):]
		y0 := int(le.Uint32(at))
		if y0 != b*16 {
			return f, fmt.Errorf("block %d begins at line %d", b, y0)
		}
		packed := at[8 : 8+int(le.Uint32(at[4:]))]
		want := min(16, height-y0) * line
		if len(packed) == want {
			scanlines(y0, packed)
			continue
		}
		z, err := zlib.NewReader(bytes.NewReader(packed))
		if err != nil {
			return f, err
		}
		deltas, err := io.ReadAll(z)
		if err != nil || len(deltas) != want {
			return f, fmt.Errorf("block %d: %d bytes, want %d: %v", b, len(deltas), want, err)
		}
		for i := 1; i < want; i++ {
			deltas[i] += deltas[i-1] - 128
		}
		raw := make([]byte, want)
		for i := range raw {
			if i%2 == 0 {
				raw[i] = deltas[i/2]
			} else {
				raw[i] = deltas[(want+1)/2+i/2]
			}
		}
		scanlines(y0, raw)
	}
	return f, nil
}
