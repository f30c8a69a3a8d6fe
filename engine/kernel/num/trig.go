package num

import "math"

// Coefficients of sin r / r and cos r in r², and of atan t / t in t²: interpolation at the Chebyshev nodes of
// [0, (π/4)²] and [0, tan²(π/8)], which is close to the best polynomial. Relative errors before rounding: 4e-18, 5e-20
// and 4e-17.
const (
	sin1 = -0x1.5555555555543p-3
	sin2 = 0x1.111111110f3dcp-7
	sin3 = -0x1.a01a019ba956dp-13
	sin4 = 0x1.71de3530aa14dp-19
	sin5 = -0x1.ae5e37e850d20p-26
	sin6 = 0x1.5d87699eb6a31p-33

	cos1 = -0.5
	cos2 = 0x1.5555555555536p-5
	cos3 = -0x1.6c16c16c13a05p-10
	cos4 = 0x1.a01a019b1e24dp-16
	cos5 = -0x1.27e4f727f10b7p-22
	cos6 = 0x1.1ee96d0192650p-29
	cos7 = -0x1.8f762711e61e0p-37

	// The same with fewer terms, exact at 0, for results in float32: relative errors 2e-11 and 3e-10.
	shortSin1 = -0x1.555555545e0acp-3
	shortSin2 = 0x1.11110def2e1c9p-7
	shortSin3 = -0x1.a013a793b98cep-13
	shortSin4 = 0x1.6dbe0838a06e9p-19

	shortCos1 = -0x1.fffffffab1da6p-2
	shortCos2 = 0x1.55554cbb440f1p-5
	shortCos3 = -0x1.6c0e087f57eebp-10
	shortCos4 = 0x1.9a6f2bb019f50p-16

	atan1  = -0x1.55555555551e4p-2
	atan2  = 0x1.9999999934e50p-3
	atan3  = -0x1.2492490095732p-3
	atan4  = 0x1.c71c648aca6a2p-4
	atan5  = -0x1.745baa2843f92p-4
	atan6  = 0x1.3afb01bbe7601p-4
	atan7  = -0x1.0ffbe63b09941p-4
	atan8  = 0x1.d1fd545f28ae3p-5
	atan9  = -0x1.64314395b2626p-5
	atan10 = 0x1.5a482e20112ecp-6
)

const (
	halfPiHigh = 0x1.921fb544p+0         // the first 33 bits of π/2: times an integer below 2^20 it is exact
	halfPiLow  = 0x1.0b4611a626331p-34   // what they leave
	roundUnit  = 0x1.8p52                // as round6, for integers
	tanPi8     = math.Sqrt2 - 1          // tan(π/8)
	bigAngle   = float64(1<<20) * 1.5707 // reduction in two parts is exact below
)

// SinCos returns the sine and the cosine of x, in radians. Accurate to 0.51 ulp for |x| < 1.6e6; beyond, where
// neighbouring float32 lie an eighth of a radian apart, errors grow as |x|·1e-16. NaN for infinite x.
func SinCos(x float32) (sin, cos float32) {
	r, q := quarterTurns(float64(x))
	s, c := SinCosOctant(r)
	s, c = turn(s, c, q)
	return float32(s), float32(c)
}

// SinCosOctant returns the sine and the cosine of r, |r| <= π/4, with relative errors below 3e-10: what is needed for
// float32 results. It is inlined, so r is rounded here, in case it is a product.
func SinCosOctant(r float64) (sin, cos float64) {
	r2 := r * r
	r4 := r2 * r2
	sin = float64(r) + float64(float64(r*r2)*(shortSin1+float64(r2*shortSin2)+float64(r4*(shortSin3+float64(r2*shortSin4)))))
	cos = 1 + float64(r2*(shortCos1+float64(r2*shortCos2)+float64(r4*(shortCos3+float64(r2*shortCos4)))))
	return sin, cos
}

// SinCosWide is SinCos in float64, accurate to 2e-16 for |x| < 1.6e6, as long as x is exact.
func SinCosWide(x float64) (sin, cos float64) {
	r, q := quarterTurns(x)
	r2 := r * r
	r4 := r2 * r2
	s := r + float64(float64(r*r2)*(sin1+float64(r2*sin2)+float64(r4*(sin3+float64(r2*sin4)+float64(r4*(sin5+float64(r2*sin6)))))))
	c := 1 + float64(r2*cos1) + float64(r4*(cos2+float64(r2*cos3)+float64(r4*(cos4+float64(r2*cos5)+float64(r4*(cos6+float64(r2*cos7)))))))
	return turn(s, c, q)
}

// quarterTurns returns the rest r, |r| <= π/4, and the number q of quarter turns, modulo 4 in its low bits, of x.
func quarterTurns(x float64) (r float64, q uint64) {
	if !(x > -bigAngle && x < bigAngle) {
		x = math.Mod(x, 2*math.Pi)
	}
	k := float64(x*(2/math.Pi)) + roundUnit
	q = math.Float64bits(k)
	k -= roundUnit
	return x - float64(k*halfPiHigh) - float64(k*halfPiLow), q
}

// turn adds q quarter turns to the angle of sine s and cosine c, without branches: odd ones swap, the second bit turns
// the sign.
func turn(s, c float64, q uint64) (sin, cos float64) {
	sb, cb := math.Float64bits(s), math.Float64bits(c)
	swap := (sb ^ cb) & -(q & 1)
	sb ^= swap ^ (q&2)<<62
	cb ^= swap ^ ((q+1)&2)<<62
	return math.Float64frombits(sb), math.Float64frombits(cb)
}

// Atan2 returns the angle of the point (x, y), in [-π, π]. Signs of zero count as in IEEE 754. Accurate to 0.501 ulp.
func Atan2(y, x float32) float32 { return float32(Atan2Wide(float64(y), float64(x))) }

// Atan2Wide is Atan2 in float64, accurate to 7e-16 relative.
func Atan2Wide(y, x float64) float64 {
	ay, ax := math.Abs(y), math.Abs(x)
	num, den := ay, ax
	steep := ay > ax
	if steep {
		num, den = ax, ay
	}
	var a float64
	switch {
	case den == 0:
		a = 0
	case math.IsInf(den, 1):
		if math.IsInf(num, 1) {
			a = math.Pi / 4
		}
	case num > float64(tanPi8*den):
		a = math.Pi/4 + atanSmall((num-den)/(num+den))
	default:
		a = atanSmall(num / den)
	}
	if steep {
		a = math.Pi/2 - a
	}
	if math.Signbit(x) {
		a = math.Pi - a
	}
	if x != x || y != y {
		return math.NaN()
	}
	return math.Copysign(a, y)
}

// atanSmall is atan t for |t| <= tan(π/8).
func atanSmall(t float64) float64 {
	s := t * t
	s2 := s * s
	s4 := s2 * s2
	lo := atan1 + float64(s*atan2) + float64(s2*(atan3+float64(s*atan4)))
	mid := atan5 + float64(s*atan6) + float64(s2*(atan7+float64(s*atan8)))
	hi := atan9 + float64(s*atan10)
	return t + float64(float64(t*s)*(lo+float64(s4*(mid+float64(s4*hi)))))
}

// Acos returns the angle in [0, π] whose cosine is x in [-1, 1]; NaN outside. Accurate to 0.501 ulp.
func Acos(x float32) float32 { return float32(AcosWide(float64(x))) }

// AcosWide is Acos in float64, accurate to 1e-15 relative.
func AcosWide(x float64) float64 { return Atan2Wide(math.Sqrt((1-x)*(1+x)), x) }

// Asin returns the angle in [-π/2, π/2] whose sine is x in [-1, 1]; NaN outside. Accurate to 0.501 ulp.
func Asin(x float32) float32 { return float32(AsinWide(float64(x))) }

// AsinWide is Asin in float64, accurate to 1e-15 relative.
func AsinWide(x float64) float64 { return Atan2Wide(x, math.Sqrt((1-x)*(1+x))) }
