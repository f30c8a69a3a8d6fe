package encode

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/pixmap"
)

func flat(width, height int, v float32) *pixmap.Image {
	m := pixmap.New(width, height, "R", "G", "B", "A")
	for _, p := range m.Planes {
		for i := range p.Pix {
			p.Pix[i] = v
		}
	}
	for i := range m.Plane("A") {
		m.Plane("A")[i] = 1
	}
	return m
}

func quantize(t testing.TB, m *pixmap.Image) *image.NRGBA {
	t.Helper()
	q, err := Quantize8(m)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

// TestDitherKeepsExactCodes: a flat patch of k/255 is k everywhere, for every k.
func TestDitherKeepsExactCodes(t *testing.T) {
	for k := range 256 {
		q := quantize(t, flat(ditherSide, ditherSide, float32(k)/255))
		for i, v := range q.Pix {
			if i%4 < 3 && int(v) != k {
				t.Fatalf("code %d became %d at pixel %d", k, v, i/4)
			}
		}
	}
}

// TestDitherMean: over the whole matrix, a patch between two codes has its value as its mean, within one step of the matrix, and only
// the two neighbouring codes are used.
func TestDitherMean(t *testing.T) {
	for _, v := range []float32{0.001, 0.1, 0.25, 0.5, 0.77777, 0.999} {
		q := quantize(t, flat(ditherSide, ditherSide, v))
		var sum float64
		for i := 0; i < len(q.Pix); i += 4 {
			c := float64(q.Pix[i])
			if math.Abs(c-float64(v)*255) >= 1 {
				t.Fatalf("value %v: code %v", v, c)
			}
			sum += c
		}
		mean := sum / (ditherSide * ditherSide)
		if d := math.Abs(mean - float64(v)*255); d > 1.0/(ditherSide*ditherSide) {
			t.Errorf("value %v: mean code %v, off by %v", v, mean, d)
		}
	}
}

// TestDitherMatrix: every threshold once, so that the mean is exact; and no low frequencies: averaged over 8 × 8 blocks the dither of a
// flat half tone deviates much less than white noise would (standard deviation 0.5/8 = 0.0625).
func TestDitherMatrix(t *testing.T) {
	rank := voidAndCluster()
	sorted := slices.Clone(rank)
	slices.Sort(sorted)
	for i, r := range sorted {
		if i != r {
			t.Fatalf("rank %d is missing or doubled", i)
		}
	}
	for _, v := range []float32{0.5, 128.25 / 255, 128.1 / 255} {
		q := quantize(t, flat(ditherSide, ditherSide, v))
		var s, s2, n float64
		for by := 0; by < ditherSide; by += 8 {
			for bx := 0; bx < ditherSide; bx += 8 {
				var m float64
				for y := by; y < by+8; y++ {
					for x := bx; x < bx+8; x++ {
						m += float64(q.Pix[q.PixOffset(x, y)]) / 64
					}
				}
				s, s2, n = s+m, s2+m*m, n+1
			}
		}
		if sd := math.Sqrt(s2/n - s/n*s/n); sd > 0.02 {
			t.Errorf("value %v: means of 8 × 8 blocks deviate by %.4f codes, want at most 0.02", v, sd)
		}
	}
}

func TestQuantizeProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := pixmap.New(rapid.IntRange(1, 90).Draw(t, "width"), rapid.IntRange(1, 20).Draw(t, "height"), "R", "G", "B", "A")
		value := rapid.Float32Range(-0.5, 1.5)
		grey, alpha := value.Draw(t, "grey"), value.Draw(t, "alpha")
		for i := range m.Planes[0].Pix {
			v := grey + float32(i)*1e-3
			for c := range 3 {
				m.Planes[c].Pix[i] = v
			}
			m.Planes[3].Pix[i] = alpha
		}
		q, err := Quantize8(m)
		if err != nil {
			t.Fatal(err)
		}
		for i := 0; i < len(q.Pix); i += 4 {
			v := min(max(float64(m.Planes[0].Pix[i/4]), 0), 1) * 255
			if q.Pix[i] != q.Pix[i+1] || q.Pix[i] != q.Pix[i+2] {
				t.Fatalf("a neutral pixel became %v", q.Pix[i:i+3])
			}
			if math.Abs(float64(q.Pix[i])-v) >= 1 {
				t.Fatalf("%v became %d", v, q.Pix[i])
			}
			if want := uint8(math.Floor(min(max(float64(alpha), 0), 1)*255 + 0.5)); q.Pix[i+3] != want {
				t.Fatalf("alpha %v became %d, want %d", alpha, q.Pix[i+3], want)
			}
		}
	})
}

func TestPNGDepths(t *testing.T) {
	m := pixmap.New(3, 1, "R", "G", "B", "A", "depth.Z")
	copy(m.Plane("R"), []float32{0, 0.5, 1})
	copy(m.Plane("G"), []float32{1, 1.0 / 65535, -3})
	copy(m.Plane("B"), []float32{118.0 / 255, 2, 0.25})
	copy(m.Plane("A"), []float32{1, 1, 1})
	for _, c := range []struct {
		bits  int
		alpha float32
		model color.Model // of the decoded file
	}{
		{8, 1, color.RGBAModel}, {8, 0.5, color.NRGBAModel}, {16, 1, color.RGBA64Model}, {16, 0.5, color.NRGBA64Model}, {0, 1, color.RGBAModel},
	} {
		m.Plane("A")[1] = c.alpha
		var b bytes.Buffer
		if err := PNG(&b, m, Options{Bits: c.bits}); err != nil {
			t.Fatal(err)
		}
		got, err := png.Decode(&b)
		if err != nil {
			t.Fatal(err)
		}
		if got.ColorModel() != c.model {
			t.Errorf("%d bits, alpha %v: got %T", c.bits, c.alpha, got)
		}
		at := color.NRGBA64Model.Convert(got.At(1, 0)).(color.NRGBA64)
		if c.bits == 16 && c.alpha == 1 && (at != color.NRGBA64{32768, 1, 65535, 65535}) {
			t.Errorf("16 bits: got %v", at)
		}
		if at := color.NRGBAModel.Convert(got.At(0, 0)).(color.NRGBA); c.bits == 8 && (at != color.NRGBA{0, 255, 118, 255}) {
			t.Errorf("8 bits: got %v", at)
		}
	}
}

// chunk is one part of a PNG.
type chunk struct {
	name string
	data []byte
}

// chunksOf walks a PNG and checks every checksum.
func chunksOf(t testing.TB, data []byte) []chunk {
	t.Helper()
	var all []chunk
	for p := 8; p < len(data); {
		n := int(binary.BigEndian.Uint32(data[p:]))
		body := data[p+4 : p+8+n]
		if crc32.ChecksumIEEE(body) != binary.BigEndian.Uint32(data[p+8+n:]) {
			t.Fatalf("chunk %s has a wrong checksum", body[:4])
		}
		all = append(all, chunk{string(body[:4]), body[4:]})
		p += 12 + n
	}
	return all
}

func TestPNGChunks(t *testing.T) {
	o := Options{
		Text:    []KeyValue{{"Scene", "scenes/bowl.lua"}, {"Tags", "glaze=céladon, gloss=16"}, {"Empty", ""}},
		Numbers: []KeyNumber{{"Exposure", -0.1}},
	}
	var b bytes.Buffer
	if err := PNG(&b, flat(5, 4, 0.3), o); err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, c := range chunksOf(t, b.Bytes()) {
		names = append(names, c.name)
		switch c.name {
		case "gAMA": // PNG third edition, 11.3.2.5: the values that go with sRGB
			if got := binary.BigEndian.Uint32(c.data); got != 45455 {
				t.Errorf("gAMA %d, want 45455", got)
			}
		case "cHRM":
			for i, want := range []uint32{31270, 32900, 64000, 33000, 30000, 60000, 15000, 6000} {
				if got := binary.BigEndian.Uint32(c.data[4*i:]); got != want {
					t.Errorf("cHRM %d: %d, want %d", i, got, want)
				}
			}
		case "sRGB":
			if len(c.data) != 1 || c.data[0] > 3 {
				t.Errorf("sRGB %v", c.data)
			}
		}
	}
	if want := "IHDR gAMA cHRM sRGB iTXt iTXt iTXt iTXt IDAT IEND"; strings.Join(names, " ") != want {
		t.Errorf("chunks %v, want %s", names, want)
	}
	texts, err := PNGText(bytes.NewReader(b.Bytes()))
	if err != nil {
		t.Fatal(err)
	}
	if want := append(slices.Clone(o.Text), KeyValue{"Exposure", "-0.1"}); !slices.Equal(texts, want) {
		t.Errorf("texts %v, want %v", texts, want)
	}
}

// saved writes a picture to a new file and returns its path.
func saved(t *testing.T, m *pixmap.Image, o Options) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.png")
	if err := WriteFile(path, func(w io.Writer) error { return PNG(w, m, o) }); err != nil {
		t.Fatal(err)
	}
	return path
}

// TestPNGOutsideReader has another program read size, depth, colour space and pixels.
func TestPNGOutsideReader(t *testing.T) {
	identify := tool(t, "identify", "imagemagick")
	for _, bits := range []int{8, 16} {
		m := flat(7, 5, 118.0/255)
		m.Plane("A")[3] = 0.5
		path := saved(t, m, Options{Bits: bits, Text: []KeyValue{{"Scene", "scenes/bowl.lua"}}})
		out, err := exec.Command(identify, "-format", "%w %h %z %[colorspace] %[pixel:p{1,1}] %[pixel:p{3,0}]", path).CombinedOutput()
		if err != nil {
			t.Fatalf("%v: %s", err, out)
		}
		if want := fmt.Sprintf("7 5 %d sRGB srgba(118,118,118,1) srgba(118,118,118,%s)", bits, map[int]string{8: "0.501961", 16: "0.500008"}[bits]); string(out) != want {
			t.Errorf("identify says %q, want %q", out, want)
		}
	}
}

// TestPNGTextOutsideReader has another program read the texts.
func TestPNGTextOutsideReader(t *testing.T) {
	exiftool := tool(t, "exiftool", "libimage-exiftool-perl")
	path := saved(t, flat(7, 5, 0.5), Options{Text: []KeyValue{{"Scene", "scenes/bowl.lua"}, {"Tags", "glaze=céladon"}}, Numbers: []KeyNumber{{"Exposure", 0.25}}})
	out, err := exec.Command(exiftool, "-s", path).CombinedOutput()
	if err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	for _, want := range []string{"scenes/bowl.lua", "glaze=céladon", "0.25"} {
		if !strings.Contains(string(out), want) {
			t.Errorf("exiftool shows no %q:\n%s", want, out)
		}
	}
}

func TestPNGRefuses(t *testing.T) {
	good := flat(2, 2, 0.5)
	nan := flat(2, 2, 0.5)
	nan.Plane("G")[3] = float32(math.NaN())
	for _, c := range []struct {
		img  *pixmap.Image
		o    Options
		want string
	}{
		{good, Options{Bits: 32}, "must be 8 or 16, got 32"},
		{nan, Options{}, "plane G is not a number at pixel 1, 1"},
		{nan, Options{Bits: 16}, "plane G is not a number at pixel 1, 1"},
		{pixmap.New(2, 2, "R", "depth.Z"), Options{}, "it has R, depth.Z"},
		{pixmap.New(2, 0, "R", "G", "B"), Options{}, "2 × 0"},
		{good, Options{Text: []KeyValue{{"", "x"}}}, "1 to 31"},
		{good, Options{Text: []KeyValue{{" a", "x"}}}, "1 to 31"},
		{good, Options{Text: []KeyValue{{"a  b", "x"}}}, "1 to 31"},
		{good, Options{Text: []KeyValue{{"é", "x"}}}, "1 to 31"},
		{good, Options{Text: []KeyValue{{strings.Repeat("k", 32), "x"}}}, "1 to 31"},
		{good, Options{Text: []KeyValue{{"a", "x\x00y"}}}, "zero byte"},
		{good, Options{Text: []KeyValue{{"a", "x"}, {"a", "y"}}}, "given twice"},
	} {
		err := PNG(&bytes.Buffer{}, c.img, c.o)
		if err == nil || !strings.HasPrefix(err.Error(), "png: ") || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want an error with %q", err, c.want)
		}
	}
}

func TestPNGTextRefuses(t *testing.T) {
	var b bytes.Buffer
	if err := PNG(&b, flat(2, 2, 0.5), Options{Text: []KeyValue{{"Scene", "bowl.lua"}}}); err != nil {
		t.Fatal(err)
	}
	whole := b.Bytes()
	broken := bytes.Replace(whole, []byte("bowl"), []byte("howl"), 1)
	for _, c := range []struct {
		data []byte
		want string
	}{
		{nil, "no PNG signature"}, {[]byte("GIF89a..."), "no PNG signature"},
		{whole[:45], "ends inside a chunk"}, {whole[:33], "ends before its pixels"}, {broken, `"iTXt" has a wrong checksum`},
	} {
		if _, err := PNGText(bytes.NewReader(c.data)); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want an error with %q", err, c.want)
		}
	}
}

func FuzzPNGText(f *testing.F) {
	var b bytes.Buffer
	if err := PNG(&b, flat(1, 1, 0.5), Options{Text: []KeyValue{{"Scene", "bowl.lua"}}}); err != nil {
		f.Fatal(err)
	}
	f.Add(b.Bytes())
	f.Add(b.Bytes()[:60])
	f.Add([]byte("\x89PNG\r\n\x1a\n\xff\xff\xff\xffiTXt"))
	f.Fuzz(func(t *testing.T, data []byte) {
		texts, err := PNGText(bytes.NewReader(data))
		size := 0
		for _, kv := range texts {
			size += len(kv.Key) + len(kv.Value)
		}
		if err == nil && size > len(data) {
			t.Errorf("%d bytes of text from %d bytes of file", size, len(data))
		}
	})
}

func BenchmarkPNG(b *testing.B) {
	m := linearImage(480, 360)
	for _, bits := range []int{8, 16} {
		b.Run(fmt.Sprintf("ramps/480x360/bits=%d", bits), func(b *testing.B) {
			b.SetBytes(int64(480 * 360 * 4 * bits / 8))
			for b.Loop() {
				if err := PNG(discard{}, m, Options{Bits: bits}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

type discard struct{}

func (discard) Write(p []byte) (int, error) { return len(p), nil }
