package shade

import (
	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
	"lampbook/engine/kernel/tint"
)

// BlinnPhong is the four-component surface (Blinn 1977, "Models of light reflection for computer synthesized pictures").
type BlinnPhong struct {
	Diffuse, Specular, Ambient tint.RGB // Cd, Cs, Ca: reflectances, [0, 1]
	Emission                   tint.RGB // Ce, nit
	Lobe                       Lobe
}

// Lobe is the shape of a highlight, apart from its colour. Lobes compare with ==.
type Lobe struct {
	Shininess  float32 // S, [0, 100000]
	Normalized bool    // times (S + 8) / 8 · N·L, which keeps the energy steady as S changes
}

// At is the specular factor of one light direction: (N·H)^S, for N·L > 0; nh in [-1, 1], nl in (0, 1].
// To be multiplied by Cs and E0/π. At N·H = 0 a Shininess of 0 gives 1, by the convention 0^0 = 1.
func (l Lobe) At(nh, nl float32) float32 { return l.AtLog(LogHalf(nh), nl) }

// LogHalf is log2 N·H, the part of a lobe that all shininesses share; -Inf where N·H <= 0.
func LogHalf(nh float32) float64 { return num.Log2Wide(min(max(nh, 0), 1)) }

// AtLog is At with N·H given by LogHalf.
func (l Lobe) AtLog(logNH float64, nl float32) float32 {
	f := float32(1)
	if l.Shininess != 0 {
		f = num.Exp2Wide(float64(float64(l.Shininess) * logNH))
	}
	if l.Normalized {
		f *= (l.Shininess + 8) / 8 * nl
	}
	return f
}

// HalfCosine is N·H with H = (L + V) / |L + V|, clamped to [0, 1]; 0 where L and V are opposite.
func HalfCosine(n, wi, wo geom.Vec3) float32 {
	h := wi.Add(wo)
	l := h.Len()
	if l == 0 {
		return 0
	}
	return min(max(n.Dot(h)/l, 0), 1)
}

// Reflect is the light that the surface sends along wo for one light of irradiance e0 (on a surface that faces it) from wi: diffuse
// and specular parts, nit for lux, without shadow. n, wi, wo unit.
func (m *BlinnPhong) Reflect(n, wi, wo geom.Vec3, e0 tint.RGB) (diffuse, specular tint.RGB) {
	const perPi = 0.31830988618379067 // 1/π
	nl := n.Dot(wi)
	if !(nl > 0) {
		return tint.RGB{}, tint.RGB{}
	}
	e := e0.Scale(perPi)
	return m.Diffuse.Mul(e).Scale(nl), m.Specular.Mul(e).Scale(m.Lobe.At(HalfCosine(n, wi, wo), nl))
}
