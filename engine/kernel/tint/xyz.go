package tint

import (
	"math"

	"lampbook/engine/kernel/num"
)

// XYZ holds CIE 1931 tristimulus values, Y = 1 for white.
type XYZ struct{ X, Y, Z float64 }

// matrix is a linear map of three values, row by row.
type matrix [3][3]float64

// Rec. ITU-R BT.709-6, items 1.3 and 1.4: chromaticities of the primaries and of D65 white.
const (
	redX, redY     = 0.640, 0.330
	greenX, greenY = 0.300, 0.600
	blueX, blueY   = 0.150, 0.060
	whiteX, whiteY = 0.3127, 0.3290
)

// white is D65 at Y = 1.
var white = XYZ{X: whiteX / whiteY, Y: 1, Z: (1 - whiteX - whiteY) / whiteY}

var (
	xyzFromRGB = primaries()
	rgbFromXYZ = xyzFromRGB.inverse()
)

// primaries derives the matrix from the chromaticities: columns are the primaries, scaled so that (1, 1, 1) is white.
// Source: SMPTE RP 177-1993, section 3.3.
func primaries() matrix {
	m := matrix{
		{redX / redY, greenX / greenY, blueX / blueY},
		{1, 1, 1},
		{(1 - redX - redY) / redY, (1 - greenX - greenY) / greenY, (1 - blueX - blueY) / blueY},
	}
	scale := m.inverse().apply([3]float64{white.X, white.Y, white.Z})
	for i := range m {
		for j := range m[i] {
			m[i][j] *= scale[j]
		}
	}
	return m
}

func (m matrix) apply(v [3]float64) (out [3]float64) {
	for i := range m {
		out[i] = float64(m[i][0]*v[0]) + float64(m[i][1]*v[1]) + float64(m[i][2]*v[2])
	}
	return out
}

// inverse returns the inverse of a matrix whose determinant is not 0, by cofactors.
func (m matrix) inverse() (out matrix) {
	minor := func(i, j int) float64 {
		i1, i2, j1, j2 := (i+1)%3, (i+2)%3, (j+1)%3, (j+2)%3
		return float64(m[i1][j1]*m[i2][j2]) - float64(m[i1][j2]*m[i2][j1])
	}
	det := float64(m[0][0]*minor(0, 0)) + float64(m[0][1]*minor(0, 1)) + float64(m[0][2]*minor(0, 2))
	for i := range out {
		for j := range out[i] {
			out[i][j] = minor(j, i) / det
		}
	}
	return out
}

// ToXYZ returns the tristimulus values of a linear colour.
func ToXYZ(c RGB) XYZ {
	v := xyzFromRGB.apply([3]float64{float64(c.R), float64(c.G), float64(c.B)})
	return XYZ{v[0], v[1], v[2]}
}

// FromXYZ returns the linear colour; components lie outside [0, 1] for what Rec. 709 cannot show.
func FromXYZ(t XYZ) RGB {
	v := rgbFromXYZ.apply([3]float64{t.X, t.Y, t.Z})
	return RGB{float32(v[0]), float32(v[1]), float32(v[2])}
}

// Lab is CIE 1976 L*a*b* under D65: L in [0, 100], a towards red, b towards yellow.
type Lab struct{ L, A, B float64 }

// labKnee is where the cube root gives way to its tangent: (6/29)³. Source: CIE 15; ISO/CIE 11664-4.
const labKnee = 216.0 / 24389

// ToLab returns the colour in L*a*b*. For numbers that people read: unlike pixels, its last bit may differ by machine.
func ToLab(c RGB) Lab {
	f := func(t float64) float64 {
		if t > labKnee {
			return math.Cbrt(t)
		}
		return (float64(24389.0/27*t) + 16) / 116
	}
	t := ToXYZ(c)
	fx, fy, fz := f(t.X/white.X), f(t.Y), f(t.Z/white.Z)
	return Lab{L: float64(116*fy) - 16, A: 500 * (fx - fy), B: 200 * (fy - fz)}
}

// FromLab returns the linear colour of L*, a*, b* under D65; components lie outside [0, 1] for what Rec. 709 cannot show.
func FromLab(l, a, b float64) RGB {
	g := func(f float64) float64 {
		if f > 6.0/29 {
			return f * f * f
		}
		return (float64(116*f) - 16) * (27.0 / 24389)
	}
	fy := (l + 16) / 116
	return FromXYZ(XYZ{float64(g(fy+a/500) * white.X), g(fy), float64(g(fy-b/200) * white.Z)})
}

// Chroma returns C*ab, the distance from grey.
func (c Lab) Chroma() float64 { return math.Hypot(c.A, c.B) }

// Hue returns h_ab in degrees, [0, 360): 0 red, 90 yellow. It is 0 for greys.
func (c Lab) Hue() float64 { return hue(c.A, c.B) }

func hue(a, b float64) float64 {
	h := math.Atan2(b, a) * 180 / math.Pi
	if h < 0 {
		h += 360
	}
	return h
}

// FromLCh returns the Lab colour of lightness, chroma and hue in degrees.
func FromLCh(l, chroma, hueDeg float64) Lab {
	sin, cos := num.SinCosWide(hueDeg * math.Pi / 180)
	return Lab{L: l, A: chroma * cos, B: chroma * sin}
}
