package tint

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// TestLab checks rows SRGB-LAB: Rec. 709 primaries and D65 from chromaticities, CIE 15; standard formulas.
func TestLab(t *testing.T) {
	for _, c := range []struct {
		id   string
		rgb  RGB
		xyz  XYZ
		want Lab
	}{
		{"SRGB-LAB-red", RGB{1, 0, 0}, XYZ{0.4123907992659595, 0.21263900587151036, 0.01933081871559185}, Lab{53.23711559542937, 80.0901135231038, 67.20326351172214}},
		{"SRGB-LAB-blue", RGB{0, 0, 1}, XYZ{0.1804807884018343, 0.07219231536073371, 0.9505321522496606}, Lab{32.300872903980185, 79.19527030740417, -107.85546553974265}},
		{"SRGB-LAB-white", RGB{1, 1, 1}, XYZ{0.9504559270516717, 0.9999999999999999, 1.0890577507598784}, Lab{100.0, 0.0, 0.0}},
		{"SRGB-LAB-0.18grey", RGB{0.18, 0.18, 0.18}, XYZ{0.17108206686930091, 0.18, 0.1960303951367781}, Lab{49.496107610119594, 0.0, 0.0}},
	} {
		x := ToXYZ(c.rgb)
		if math.Abs(x.X-c.xyz.X) > 1e-7 || math.Abs(x.Y-c.xyz.Y) > 1e-7 || math.Abs(x.Z-c.xyz.Z) > 1e-7 {
			t.Errorf("%s: XYZ %v, want %v", c.id, x, c.xyz)
		}
		l := ToLab(c.rgb)
		if math.Abs(l.L-c.want.L) > 1e-4 || math.Abs(l.A-c.want.A) > 1e-4 || math.Abs(l.B-c.want.B) > 1e-4 {
			t.Errorf("%s: Lab %v, want %v", c.id, l, c.want)
		}
	}
	// LUMA-WEIGHTS: Rec. ITU-R BT.709-6 prints the second row to four decimals; Luminance uses those.
	y := xyzFromRGB[1]
	for i, w := range [3]float64{0.21263900587151036, 0.7151686787677559, 0.07219231536073371} {
		if math.Abs(y[i]-w) > 1e-12 {
			t.Errorf("luminance weight %d is %v, want %v", i, y[i], w)
		}
		if printed := []float32{RGB{R: 1}.Luminance(), RGB{G: 1}.Luminance(), RGB{B: 1}.Luminance()}[i]; math.Abs(float64(printed)-w) > 5e-5 {
			t.Errorf("Luminance weight %d is %v, want %v", i, printed, w)
		}
	}
	// SRGB-GREY18, SRGB-MIDCODE: L* of 18 % grey, and the grey of L* = 50.
	if got := ToLab(Grey(0.18)).L; math.Abs(got-49.49610761011958) > 1e-5 {
		t.Errorf("L* of 0.18 is %v", got)
	}
	if got := FromLab(50, 0, 0); math.Abs(float64(got.G)-0.18418651851244414) > 1e-7 || Hex(got) != "#777777" {
		t.Errorf("L* = 50 is %v, %s; want code 119", got, Hex(got))
	}
}

func TestLabRound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.Float32Range(0, 1)
		c := RGB{n.Draw(t, "r"), n.Draw(t, "g"), n.Draw(t, "b")}
		l := ToLab(c)
		back := FromLab(l.L, l.A, l.B)
		if d := max(math.Abs(float64(back.R-c.R)), math.Abs(float64(back.G-c.G)), math.Abs(float64(back.B-c.B))); !(d < 3e-7) {
			t.Fatalf("%v comes back as %v", c, back)
		}
		h := FromLCh(l.L, l.Chroma(), l.Hue())
		if math.Abs(h.A-l.A) > 1e-9 || math.Abs(h.B-l.B) > 1e-9 || !(l.Hue() >= 0 && l.Hue() <= 360) {
			t.Fatalf("%v by chroma and hue is %v", l, h)
		}
	})
}

// TestPlanck checks the black body against sums at 1 nm. Source: rows PLANCK, CIE 1931 observer, CODATA 2018.
func TestPlanck(t *testing.T) {
	for _, c := range []struct {
		kelvin, x, y float64
		rgb          [3]float64 // at luminance 1, negative where outside Rec. 709
	}{
		{1000, 0.652750697975, 0.34446165529, [3]float64{4.600180782, 0.03959875174, -0.09000480571}},
		{1667, 0.565044052754, 0.402741691151, [3]float64{2.969794639, 0.519448673, -0.04138391682}},
		{2000, 0.526677486567, 0.413297000335, [3]float64{2.520271572, 0.6468648509, 0.02042430207}},
		{2500, 0.476994540869, 0.413675359803, [3]float64{2.067887889, 0.7693492467, 0.1395147227}},
		{2700, 0.459859027023, 0.410599038094, [3]float64{1.93510007, 0.8035531212, 0.1917963243}},
		{2856, 0.447535144228, 0.407428289704, [3]float64{1.845129016, 0.8261052349, 0.2333906444}},
		{3000, 0.436931045416, 0.404073968554, [3]float64{1.770931334, 0.8442613736, 0.2720737026}},
		{3200, 0.423359585207, 0.398951626003, [3]float64{1.679794206, 0.865933478, 0.3258203946}},
		{3500, 0.405303531574, 0.390715670974, [3]float64{1.5642829, 0.8922305707, 0.4055428987}},
		{4000, 0.380439532495, 0.376746823584, [3]float64{1.413998292, 0.924006029, 0.5334174105}},
		{5000, 0.345101174472, 0.351608042087, [3]float64{1.213516601, 0.9605053596, 0.7623482777}},
		{5500, 0.332434364741, 0.341035186869, [3]float64{1.144446217, 0.9709556058, 0.8622670731}},
		{6000, 0.322083223113, 0.331753383211, [3]float64{1.088848524, 0.9783360387, 0.9529136146}},
		{7000, 0.306373631599, 0.316512561317, [3]float64{1.005690391, 0.9872833189, 1.109216235}},
		{8000, 0.29518702785, 0.304765205884, [3]float64{0.9472316964, 0.9917322438, 1.237330522}},
	} {
		x, y := planckXY(c.kelvin)
		if math.Abs(x-c.x) > 5e-4 || math.Abs(y-c.y) > 5e-4 {
			t.Errorf("%v K: x, y = %.5f, %.5f, want %.5f, %.5f", c.kelvin, x, y, c.x, c.y)
		}
		got := Kelvin(c.kelvin)
		if l := got.Luminance(); math.Abs(float64(l)-1) > 1e-6 {
			t.Errorf("%v K: luminance %v, want 1", c.kelvin, l)
		}
		if c.rgb[2] < 0 {
			if got.B != 0 {
				t.Errorf("%v K: blue is %v, want 0 outside the gamut", c.kelvin, got.B)
			}
			continue
		}
		for i, v := range [3]float32{got.R, got.G, got.B} {
			if math.Abs(float64(v)-c.rgb[i]) > 2e-3 {
				t.Errorf("%v K: component %d is %v, want %v", c.kelvin, i, v, c.rgb[i])
			}
		}
	}
}

// TestDaylight checks rows DAYLIGHT (CIE 15, from memory) and that D65 is neutral.
func TestDaylight(t *testing.T) {
	for _, c := range []struct{ nominal, x, y float64 }{
		{5000, 0.34565944678321503, 0.3586012528163923},
		{6500, 0.3127202732603744, 0.3291252763331448},
		{7500, 0.29904319427948894, 0.3149734714474929},
	} {
		// The nominal temperatures are by the old c2 = 1.4380; CIE 15 multiplies by 1.4388/1.4380.
		x, y := daylightXY(c.nominal * 1.4388 / 1.4380)
		if math.Abs(x-c.x) > 2e-4 || math.Abs(y-c.y) > 2e-4 {
			t.Errorf("D at %v K: x, y = %.5f, %.5f, want %.5f, %.5f", c.nominal, x, y, c.x, c.y)
		}
	}
	if c := Daylight(6504); math.Abs(float64(c.R)-1) > 2e-3 || math.Abs(float64(c.G)-1) > 2e-3 || math.Abs(float64(c.B)-1) > 2e-3 {
		t.Errorf("Daylight(6504) = %v, want white: the working white is D65", c)
	}
	lo, hi := Daylight(7000), Daylight(math.Nextafter(7000, 8000))
	if d := math.Abs(float64(lo.B - hi.B)); d > 1e-3 {
		t.Errorf("the two branches differ by %v at 7000 K", d)
	}
}

// TestKelvinOrder: hotter is bluer and less red.
func TestKelvinOrder(t *testing.T) {
	last := Kelvin(1000)
	for k := 1100.0; k <= 40000; k += 100 {
		c := Kelvin(k)
		if c.R >= last.R || c.B < last.B {
			t.Fatalf("%v K is %v after %v", k, c, last)
		}
		last = c
	}
}
