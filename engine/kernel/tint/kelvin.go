package tint

import "lampbook/engine/kernel/num"

// Kelvin returns the colour of a black body at a temperature in kelvin, [1000, 40000], at luminance 1: a light of that
// colour keeps its intensity. Below about 1900 K the colour lies outside Rec. 709; blue is then 0, and the luminance
// still 1. About 6500 K comes nearest to neutral, a trace towards magenta; the daylight of that temperature is neutral, see
// Daylight.
func Kelvin(t float64) RGB { return lightColor(planckXY(t)) }

// Daylight returns the colour of the CIE daylight of a correlated colour temperature in kelvin, [4000, 25000], at
// luminance 1. Daylight(6504) is D65, neutral.
func Daylight(t float64) RGB { return lightColor(daylightXY(t)) }

// lightColor returns the colour of a chromaticity at luminance 1, without negative components.
func lightColor(x, y float64) RGB {
	c := FromXYZ(XYZ{x / y, 1, (1 - x - y) / y})
	c = RGB{max(c.R, 0), max(c.G, 0), max(c.B, 0)}
	return c.Scale(1 / c.Luminance())
}

// planckXY returns the chromaticity of a black body: Planck's law, summed with the colour-matching functions at 5 nm.
// Against 1 nm from 360 to 830 nm, x and y move by less than 3e-4 between 1000 K and 25000 K.
func planckXY(t float64) (x, y float64) {
	const c2 = 1.438776877e-2 // second radiation constant in m·K, CODATA 2018
	var sum [3]float64
	for i, bar := range cmf {
		lambda := float64(cmfFirst+cmfStep*i) * 1e-9
		e := float64(num.Exp2Wide(c2 / (lambda * t) * (1 / ln2)))
		// λ in units of 555 nm, as only ratios count
		l := lambda / 555e-9
		power := 1 / (l * l * l * l * l * (e - 1))
		for j := range sum {
			sum[j] += float64(power * bar[j])
		}
	}
	total := sum[0] + sum[1] + sum[2]
	return sum[0] / total, sum[1] / total
}

const ln2 = 0.693147180559945309417232121458176568

// daylightXY returns the chromaticity of a CIE daylight. Source: CIE 15, equations for illuminants D.
func daylightXY(t float64) (x, y float64) {
	k := 1000 / t
	if t <= 7000 {
		x = 0.244063 + float64(k*(0.09911+float64(k*(2.9678-float64(4.6070*k)))))
	} else {
		x = 0.237040 + float64(k*(0.24748+float64(k*(1.9018-float64(2.0064*k)))))
	}
	return x, float64(x*(2.870-float64(3.000*x))) - 0.275
}
