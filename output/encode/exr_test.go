package encode

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/x448/float16"
	"pgregory.net/rapid"

	"lampbook/engine/pixmap"
)

// tool returns the path of an outside program, or skips the test.
func tool(t *testing.T, name, debian string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		t.Skipf("NOT CHECKED by an outside reader: %s is not installed (Debian package %s)", name, debian)
	}
	return path
}

// linearImage is a picture with passes: ramps, negative and huge values, planes out of the format's order.
func linearImage(width, height int) *pixmap.Image {
	m := pixmap.New(width, height, "R", "G", "B", "A", "normal.X", "normal.Y", "normal.Z", "depth.Z", "diffuse.R", "diffuse.G", "diffuse.B")
	for c, p := range m.Planes {
		for i := range p.Pix {
			x, y := i%width, i/width
			p.Pix[i] = float32(c+1)*float32(x+1)/float32(width) - float32(y%7)*0.25
		}
	}
	copy(m.Planes[0].Pix, []float32{0, 1e9, -1e9, 6e-8, 65504, 65519, 0.18})
	return m
}

func encodeEXR(t testing.TB, m *pixmap.Image, o Options) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := EXR(&b, m, o); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// sameBits compares planes by name, bit for bit.
func sameBits(t testing.TB, got, want *pixmap.Image) {
	t.Helper()
	if got.Width != want.Width || got.Height != want.Height || len(got.Planes) != len(want.Planes) {
		t.Fatalf("got %d × %d with %d planes, want %d × %d with %d", got.Width, got.Height, len(got.Planes), want.Width, want.Height, len(want.Planes))
	}
	for _, p := range want.Planes {
		g := got.Plane(p.Name)
		if g == nil {
			t.Fatalf("no plane %q", p.Name)
		}
		for i := range g {
			if math.Float32bits(g[i]) != math.Float32bits(p.Pix[i]) {
				t.Fatalf("plane %s pixel %d: got %x %v, want %x %v", p.Name, i, math.Float32bits(g[i]), g[i], math.Float32bits(p.Pix[i]), p.Pix[i])
			}
		}
	}
}

// halved is the image as halves would hold it.
func halved(m *pixmap.Image) *pixmap.Image {
	out := &pixmap.Image{Width: m.Width, Height: m.Height}
	for _, p := range m.Planes {
		pix := out.Add(p.Name)
		for i, v := range p.Pix {
			if math.Abs(float64(v)) > 65504 && !math.IsInf(float64(v), 0) {
				v = float32(math.Copysign(65504, float64(v)))
			}
			pix[i] = float16.Fromfloat32(v).Float32()
		}
	}
	return out
}

func TestEXRRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := pixmap.New(rapid.IntRange(1, 40).Draw(t, "width"), rapid.IntRange(1, 40).Draw(t, "height"))
		for _, n := range rapid.SliceOfNDistinct(rapid.StringMatching(`[a-zA-Z.]{1,40}`), 1, 4, rapid.ID).Draw(t, "planes") {
			pix := m.Add(n)
			noisy := rapid.Bool().Draw(t, "noisy") // noise does not compress: blocks that stand as they are
			seed := rapid.Uint32().Draw(t, "seed")
			for i := range pix {
				if noisy || i == 0 {
					seed = seed*1664525 + 1013904223
				}
				pix[i] = math.Float32frombits(seed>>1) * 1e-10
			}
		}
		half := rapid.Bool().Draw(t, "half")
		o, want := Options{}, m
		if half {
			o.Bits, want = 16, halved(m)
		}
		var b bytes.Buffer
		if err := EXR(&b, m, o); err != nil {
			t.Fatal(err)
		}
		f, err := readEXR(b.Bytes())
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range want.Planes {
			g := f.image.Plane(p.Name)
			for i := range g {
				if math.Float32bits(g[i]) != math.Float32bits(p.Pix[i]) && p.Pix[i] == p.Pix[i] {
					t.Fatalf("plane %s pixel %d: got %v, want %v", p.Name, i, g[i], p.Pix[i])
				}
			}
		}
		if !slices.IsSortedFunc(f.image.Planes, func(a, b pixmap.Plane) int { return strings.Compare(a.Name, b.Name) }) {
			t.Fatal("channels are not sorted by name")
		}
	})
}

// TestEXROutsideReader has the format's own library read the whole file and write it as one plain tile, and compares every bit.
func TestEXROutsideReader(t *testing.T) {
	convert := tool(t, "exrmaketiled", "openexr")
	for _, size := range [][2]int{{8, 1}, {37, 16}, {64, 33}, {300, 50}} {
		for _, bits := range []int{32, 16} {
			t.Run(fmt.Sprintf("%dx%d/%d", size[0], size[1], bits), func(t *testing.T) {
				m := linearImage(size[0], size[1])
				from, to := filepath.Join(t.TempDir(), "in.exr"), filepath.Join(t.TempDir(), "out.exr")
				data := encodeEXR(t, m, Options{Bits: bits, Text: []KeyValue{{"scene", "bowl.lua"}}})
				if err := os.WriteFile(from, data, 0o666); err != nil {
					t.Fatal(err)
				}
				out, err := exec.Command(convert, "-z", "none", "-t", fmt.Sprint(m.Width), fmt.Sprint(m.Height), from, to).CombinedOutput()
				if err != nil {
					t.Fatalf("%v: %s", err, out)
				}
				back, err := os.ReadFile(to)
				if err != nil {
					t.Fatal(err)
				}
				f, err := readEXR(back)
				if err != nil {
					t.Fatal(err)
				}
				want := m
				if bits == 16 {
					want = halved(m)
				}
				if f.half != (bits == 16) {
					t.Fatalf("half is %v", f.half)
				}
				sameBits(t, f.image, want)
			})
		}
	}
}

func TestEXRHeaderOutsideReader(t *testing.T) {
	header := tool(t, "exrheader", "openexr")
	path := filepath.Join(t.TempDir(), "a.exr")
	data := encodeEXR(t, linearImage(40, 30), Options{
		Text:    []KeyValue{{"lampbook.scene", "scenes/bowl.lua"}, {"lampbook.tags", "glaze=céladon"}},
		Numbers: []KeyNumber{{"exposure", -1.5}},
	})
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(header, path).CombinedOutput()
	if err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	for _, want := range []string{
		`exposure (type float): -1.5`, `lampbook.scene (type string): "scenes/bowl.lua"`, `lampbook.tags (type string): "glaze=céladon"`,
		`dataWindow (type box2i): (0 0) - (39 29)`, `displayWindow (type box2i): (0 0) - (39 29)`, `zip, multi-scanline blocks`,
		`red   (0.64 0.33)`, `white (0.3127 0.329)`, `depth.Z, 32-bit floating-point, sampling 1 1`, `pixelAspectRatio (type float): 1`,
	} {
		if !strings.Contains(string(out), want) {
			t.Errorf("the header has no %q:\n%s", want, out)
		}
	}
	if info, err := exec.LookPath("exrinfo"); err == nil {
		if out, err := exec.Command(info, "-s", path).CombinedOutput(); err != nil {
			t.Errorf("exrinfo, strict: %v: %s", err, out)
		}
	}
}

// TestEXRAllHalves writes each pattern of 16 bits and reads it back.
func TestEXRAllHalves(t *testing.T) {
	m := pixmap.New(256, 256, "G")
	for i := range m.Planes[0].Pix {
		m.Planes[0].Pix[i] = float16.Frombits(uint16(i)).Float32()
	}
	data := encodeEXR(t, m, Options{Bits: 16})
	f, err := readEXR(data)
	if err != nil {
		t.Fatal(err)
	}
	var finite, nan, inf int
	for i, v := range f.image.Planes[0].Pix {
		switch w := m.Planes[0].Pix[i]; {
		case v != v:
			nan++
		case math.IsInf(float64(v), 0):
			inf++
		default:
			finite++
			if math.Float32bits(v) != math.Float32bits(w) {
				t.Errorf("pattern %04x: got %v, want %v", i, v, w)
			}
		}
	}
	// EXR-HALF of the reference table: openexr-images AllHalfValues.exr; IEEE 754 binary16 has 2·1023 NaN patterns and 2 infinities.
	if finite != 63488 || nan != 2046 || inf != 2 {
		t.Errorf("got %d finite, %d NaN and %d infinite values, want 63488, 2046 and 2", finite, nan, inf)
	}
}

// TestEXRReferencePicture reads the published picture of all halves through the format's library, writes it with EXR and has
// the library read that: the two must agree bit for bit.
func TestEXRReferencePicture(t *testing.T) {
	reference := filepath.Join("..", "..", "..", "shared", "reference", "open", "exr", "TestImages", "AllHalfValues.exr")
	if _, err := os.Stat(reference); err != nil {
		t.Skip("NOT CHECKED against AllHalfValues.exr: the reference pictures are not beside the checkout")
	}
	convert := tool(t, "exrmaketiled", "openexr")
	plain := func(from string) exrFile {
		to := filepath.Join(t.TempDir(), "tile.exr")
		if out, err := exec.Command(convert, "-z", "none", "-t", "256", "256", from, to).CombinedOutput(); err != nil {
			t.Fatalf("%v: %s", err, out)
		}
		data, err := os.ReadFile(to)
		if err != nil {
			t.Fatal(err)
		}
		f, err := readEXR(data)
		if err != nil {
			t.Fatal(err)
		}
		return f
	}
	want := plain(reference)
	ours := filepath.Join(t.TempDir(), "ours.exr")
	if err := os.WriteFile(ours, encodeEXR(t, want.image, Options{Bits: 16}), 0o666); err != nil {
		t.Fatal(err)
	}
	got := plain(ours)
	if !want.half || want.image.Width != 256 {
		t.Fatalf("the reference picture is not what the table says: half %v, %d wide", want.half, want.image.Width)
	}
	for _, p := range want.image.Planes {
		for i, v := range got.image.Plane(p.Name) {
			if w := p.Pix[i]; math.Float32bits(v) != math.Float32bits(w) && w == w {
				t.Fatalf("%s %d: got %v, want %v", p.Name, i, v, w)
			}
		}
	}
}

var halfTests = []struct {
	in     float32
	want   uint16
	source string
}{
	{1, 0x3c00, "IEEE 754 binary16"},
	{65504, 0x7bff, "IEEE 754 binary16: the largest finite value"},
	{65519, 0x7bff, "nearest"},
	{65520, 0x7bff, "would round to infinity: the largest instead"},
	{1e30, 0x7bff, "likewise"},
	{-1e30, 0xfbff, "likewise"},
	{float32(math.Inf(1)), 0x7c00, "infinity stays"},
	{5.9604645e-8, 0x0001, "IEEE 754 binary16: the smallest subnormal, 2^-24"},
	{2.9802322e-8, 0x0000, "half of it, tie to even"},
	{1 + 1.0/2048, 0x3c00, "tie to even"},
	{1 + 3.0/2048, 0x3c02, "tie to even"},
	{float32(math.Copysign(0, -1)), 0x8000, "IEEE 754 binary16"},
}

func TestHalfOf(t *testing.T) {
	for _, c := range halfTests {
		if got := halfOf(c.in); got != c.want {
			t.Errorf("halfOf(%v) = %04x, want %04x (%s)", c.in, got, c.want, c.source)
		}
	}
}

func TestEXRRefuses(t *testing.T) {
	good := pixmap.New(2, 2, "R")
	short := pixmap.New(2, 2, "R")
	short.Planes[0].Pix = short.Planes[0].Pix[:3]
	twice := pixmap.New(2, 2, "R")
	twice.Planes = append(twice.Planes, twice.Planes[0])
	for _, c := range []struct {
		img  *pixmap.Image
		o    Options
		want string
	}{
		{good, Options{Bits: 8}, "bits a channel must be 16 or 32, got 8"},
		{pixmap.New(2, 2), Options{}, "no planes"},
		{pixmap.New(0, 2, "R"), Options{}, "0 × 2"},
		{short, Options{}, "has 3 values"},
		{twice, Options{}, `plane "R" is there twice`},
		{pixmap.New(1, 1, strings.Repeat("x", 256)), Options{}, "1 to 255 bytes"},
		{good, Options{Text: []KeyValue{{"channels", "x"}}}, "something of its own"},
		{good, Options{Numbers: []KeyNumber{{"compression", 1}}}, "something of its own"},
		{good, Options{Text: []KeyValue{{"a", "x"}}, Numbers: []KeyNumber{{"a", 1}}}, "given twice"},
	} {
		err := EXR(&bytes.Buffer{}, c.img, c.o)
		if err == nil || !strings.HasPrefix(err.Error(), "exr: ") || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want an error with %q", err, c.want)
		}
	}
}

// TestEXRLongNames checks the flag that the format wants for names of more than 31 bytes, and only then.
func TestEXRLongNames(t *testing.T) {
	for length, want := range map[int]uint32{31: 2, 32: 2 | 0x400} {
		data := encodeEXR(t, pixmap.New(1, 1, strings.Repeat("n", length)), Options{})
		if got := binary.LittleEndian.Uint32(data[4:]); got != want {
			t.Errorf("version field %x for a name of %d bytes, want %x", got, length, want)
		}
	}
}

func BenchmarkEXR(b *testing.B) {
	m := linearImage(480, 360)
	for _, bits := range []int{16, 32} {
		b.Run(fmt.Sprintf("planes=11/480x360/bits=%d", bits), func(b *testing.B) {
			b.SetBytes(int64(480 * 360 * len(m.Planes) * bits / 8))
			for b.Loop() {
				encodeEXR(b, m, Options{Bits: bits})
			}
		})
	}
}
