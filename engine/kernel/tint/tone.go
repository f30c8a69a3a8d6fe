package tint

// The tone curves take exposed linear light, components >= 0, to display light in [0, 1]: sRGB encoding comes after.

// brightest limits what enters a curve, so that infinities come out white and not as NaN.
const brightest = 1e30

func (a RGB) limited() RGB {
	return RGB{limit(a.R), limit(a.G), limit(a.B)}
}

// limit returns x within [0, brightest], and 0 for NaN.
func limit(x float32) float32 {
	if !(x > 0) {
		return 0
	}
	return min(x, brightest)
}

// Clip cuts each component off at 1.
func Clip(c RGB) RGB {
	c = c.limited()
	return RGB{min(c.R, 1), min(c.G, 1), min(c.B, 1)}
}

// Shoulder leaves colours up to a peak of 0.8 as they are, so that matt cards show their own colour, and compresses what
// is brighter towards 1, paler the brighter it is: the compression of Neutral alone.
func Shoulder(c RGB) RGB { return compress(c.limited(), 0.8) }

// Neutral is made for surfaces that reflect 4 % at their top, as plastic and glass do: it takes that off, and then
// compresses as Shoulder does. Colours of surfaces without such a reflection come out deeper than they are: 18 % grey shows as 14 %.
// Source: Khronos PBR Neutral tone mapper, specification 1.0.
func Neutral(c RGB) RGB {
	const reflection = 0.04
	c = c.limited()
	x := min(c.R, c.G, c.B)
	offset := float32(reflection)
	if x < 2*reflection {
		offset = x - float32(x*x)/(4*reflection)
	}
	return compress(RGB{c.R - offset, c.G - offset, c.B - offset}, 0.8-reflection)
}

// compress brings colours whose largest component is above start, in (0, 1), smoothly below 1, and desaturates them by how much they
// were brought down. Source: Khronos PBR Neutral tone mapper, specification 1.0.
func compress(c RGB, start float32) RGB {
	const desaturation = 0.15
	peak := max(c.R, c.G, c.B)
	if peak < start {
		return c
	}
	d := 1 - start
	newPeak := 1 - float32(d*d)/(peak+(d-start))
	c = c.Scale(newPeak / peak)
	g := 1 / (float32(desaturation*(peak-newPeak)) + 1)
	return c.Scale(g).Add(Grey(float32(newPeak * (1 - g))))
}

// Reinhard compresses luminance by L(1 + L/white²)/(1 + L), so that luminance white becomes 1; white > 0. Hue and
// saturation stay, and strong colours are cut off at 1.
// Source: Reinhard, Stark, Shirley & Ferwerda 2002, "Photographic tone reproduction for digital images", eq. 4.
func Reinhard(c RGB, white float32) RGB {
	c = c.limited()
	l := c.Luminance()
	return Clip(c.Scale((1 + l/white/white) / (1 + l)))
}

// ACES is a curve on each component that follows the look of the Academy Color Encoding System's reference rendering,
// brighter by 1/0.6 as its author gives it. Source: K. Narkowicz 2015, "ACES filmic tone mapping curve".
func ACES(c RGB) RGB {
	f := func(x float32) float32 {
		x = min(x, 1e6) // its square must be finite
		return float32(x*(float32(2.51*x)+0.03)) / (float32(x*(float32(2.43*x)+0.59)) + 0.14)
	}
	c = c.limited()
	return Clip(RGB{f(c.R), f(c.G), f(c.B)})
}
