package encode

import (
	"bytes"
	"errors"
	"io"
	"testing"

	"lampbook/engine/pixmap"
)

// encoders is every format. A new one takes its row here, a round-trip test by an outside reader and nothing else.
var encoders = []struct {
	name   string
	encode func(io.Writer, *pixmap.Image, Options) error
	bits   []int
}{
	{"png", PNG, []int{0, 8, 16}},
	{"exr", EXR, []int{0, 16, 32}},
}

var errFull = errors.New("the device is full")

// fullAfter takes n bytes and then no more.
type fullAfter struct{ n int }

func (f *fullAfter) Write(p []byte) (int, error) {
	if len(p) > f.n {
		n := f.n
		f.n = 0
		return n, errFull
	}
	f.n -= len(p)
	return len(p), nil
}

// TestConformance is what every encoder must do: the same bytes each time, an image left as it was, metadata that counts, an error
// from the writer handed on wherever it comes, and a clear refusal of what is no image.
func TestConformance(t *testing.T) {
	for _, e := range encoders {
		for _, bits := range e.bits {
			m := linearImage(50, 40)
			before := halved(m)
			copyOf := pixmap.New(m.Width, m.Height)
			for _, p := range m.Planes {
				copy(copyOf.Add(p.Name), p.Pix)
			}
			o := Options{Bits: bits, Text: []KeyValue{{"scene", "bowl.lua"}}, Numbers: []KeyNumber{{"exposure", 1}}}
			run := func(o Options) []byte {
				var b bytes.Buffer
				if err := e.encode(&b, m, o); err != nil {
					t.Fatalf("%s: %v", e.name, err)
				}
				return b.Bytes()
			}
			first := run(o)
			if !bytes.Equal(first, run(o)) {
				t.Errorf("%s, %d bits: two runs gave two files", e.name, bits)
			}
			sameBits(t, m, copyOf)
			sameBits(t, halved(m), before)
			if o.Text = []KeyValue{{"scene", "vase.lua"}}; bytes.Equal(first, run(o)) {
				t.Errorf("%s, %d bits: another text gave the same file", e.name, bits)
			}
			if o.Numbers = []KeyNumber{{"exposure", 2}}; bytes.Equal(first, run(o)) {
				t.Errorf("%s, %d bits: another number gave the same file", e.name, bits)
			}
			o.Text, o.Numbers = []KeyValue{{"scene", "bowl.lua"}}, []KeyNumber{{"exposure", 1}}
			for n := 0; n < len(first); n += max(1, len(first)/50) {
				if err := e.encode(&fullAfter{n}, m, o); !errors.Is(err, errFull) {
					t.Fatalf("%s, %d bits: after %d of %d bytes the writer was full, got %v", e.name, bits, n, len(first), err)
				}
			}
		}
		for _, bad := range []*pixmap.Image{pixmap.New(0, 0, "R", "G", "B"), {Width: 2, Height: 2}, {Width: -1, Height: 3}} {
			if err := e.encode(io.Discard, bad, Options{}); err == nil {
				t.Errorf("%s: took an image of %d × %d with %d planes", e.name, bad.Width, bad.Height, len(bad.Planes))
			}
		}
		if err := e.encode(io.Discard, linearImage(8, 8), Options{Bits: 12}); err == nil {
			t.Errorf("%s: took 12 bits", e.name)
		}
	}
}
