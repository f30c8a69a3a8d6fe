package tint

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Source of both tables: rows SRGB-ENC and SRGB-DEC, IEC 61966-2-1:1999 with amendment 1, computed with 30 digits.
func TestEncodeSRGB(t *testing.T) {
	for _, c := range []struct {
		linear float32
		want   float64
		code8  uint8
	}{
		{0.0, 0.0, 0},
		{0.001, 0.01292, 3},
		{0.0185, 0.14509704716870633, 37},
		{0.05, 0.24780052799263166, 63},
		{0.1, 0.34919021262829386, 89},
		{0.18, 0.46135612950044164, 118},
		{0.2140411405, 0.5000000000191961, 128},
		{0.73535698, 0.8731682697334224, 223},
		{1.0, 1.0, 255},
	} {
		if got := EncodeSRGB(c.linear); math.Abs(float64(got)-c.want) > 1e-7 {
			t.Errorf("EncodeSRGB(%v) = %v, want %v", c.linear, got, c.want)
		}
		if got := code8(c.linear); got != c.code8 {
			t.Errorf("8-bit code of %v = %d, want %d", c.linear, got, c.code8)
		}
	}
}

func TestDecodeSRGB(t *testing.T) {
	for _, c := range []struct {
		code8 int
		want  float64
	}{
		{1, 0.0003035269835488375},
		{5, 0.0015176349177441874},
		{10, 0.003035269835488375},
		{11, 0.0033465357638991586},
		{12, 0.003676507324047435},
		{55, 0.03820437159534648},
		{64, 0.051269458374043224},
		{119, 0.1844749945004409},
		{127, 0.2122307574140551},
		{128, 0.21586050011389915},
		{188, 0.5028864580325684},
		{200, 0.5775804404296505},
		{254, 0.9911020971138297},
		{255, 1.0},
	} {
		if got := DecodeSRGB(float32(c.code8) / 255); math.Abs(float64(got)/c.want-1) > 3e-7 {
			t.Errorf("DecodeSRGB(%d/255) = %v, want %v", c.code8, got, c.want)
		}
	}
}

// TestSRGBRound checks SRGB-ROUNDTRIP, all 256 codes, and that 16-bit codes survive as well.
func TestSRGBRound(t *testing.T) {
	for i := range 256 {
		s := fmt.Sprintf("#%02x%02x%02x", i, 255-i, i/2)
		if got := Hex(hex(t, s)); got != s {
			t.Errorf("%s comes back as %s", s, got)
		}
	}
	last := float32(-1)
	for i := range 65536 {
		v := EncodeSRGB(DecodeSRGB(float32(i) / 65535))
		if got := int(v*65535 + 0.5); got != i {
			t.Fatalf("16-bit code %d comes back as %d", i, got)
		}
		if !(v > last) {
			t.Fatalf("codes %d and %d are not in order", i-1, i)
		}
		last = v
	}
}

// TestEncodeAccuracy compares with the formula in float64.
func TestEncodeAccuracy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float32Range(0, 1).Draw(t, "linear")
		want := 12.92 * float64(x)
		if x > 0.0031308 {
			want = 1.055*math.Pow(float64(x), 1/2.4) - 0.055
		}
		if got := EncodeSRGB(x); math.Abs(float64(got)-want) > 1e-7 {
			t.Fatalf("EncodeSRGB(%v) = %v, want %v", x, got, want)
		}
	})
}

func TestParseHex(t *testing.T) {
	if got, want := hex(t, "#b5651d"), FromSRGB(0xb5/255.0, 0x65/255.0, 0x1d/255.0); got != want {
		t.Errorf("#b5651d is %v, want %v", got, want)
	}
	if got, want := hex(t, "#Fa0"), hex(t, "#ffaa00"); got != want {
		t.Errorf("#Fa0 is %v, want %v", got, want)
	}
	for _, bad := range []string{"", "#", "b5651d", "#12345", "#1234567", "#12", "#ggg", "#12 456", "#é12", "red"} {
		if _, err := ParseHex(bad); err == nil || !strings.Contains(err.Error(), "#rrggbb") {
			t.Errorf("ParseHex(%q): error %v, want one that shows the accepted form", bad, err)
		}
	}
	for c, want := range map[RGB]string{
		{-1, 2, float32(math.NaN())}: "#00ff00", {float32(math.Inf(1)), 0, 1}: "#ff00ff",
	} {
		if got := Hex(c); got != want {
			t.Errorf("Hex(%v) = %s, want %s", c, got, want)
		}
	}
}

func FuzzParseHex(f *testing.F) {
	for _, s := range []string{"#b5651d", "#FFF", "#12345", "", "#\x00\xff0", "#ééé"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		c, err := ParseHex(s)
		if err != nil {
			return
		}
		for _, v := range []float32{c.R, c.G, c.B} {
			if !(v >= 0 && v <= 1) {
				t.Fatalf("%q gives %v", s, c)
			}
		}
		want := strings.ToLower(s)
		if len(want) == 4 {
			want = string([]byte{'#', want[1], want[1], want[2], want[2], want[3], want[3]})
		}
		if got := Hex(c); got != want {
			t.Fatalf("%q comes back as %s", s, got)
		}
	})
}

var sink float32

func BenchmarkEncodeSRGB(b *testing.B) {
	for i := 0; b.Loop(); i++ {
		sink += EncodeSRGB(float32(i&1023) / 1023)
	}
}
