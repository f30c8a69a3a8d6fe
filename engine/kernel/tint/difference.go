package tint

import "math"

// DeltaE2000 returns the CIEDE2000 colour difference with kL = kC = kH = 1; about 1 is just noticeable.
// Source: ISO/CIE 11664-6; notation and hue conventions of Sharma, Wu & Dalal 2005. For colours whose hues are opposite
// to the last bit, the mean hue has two values and both are right.
func DeltaE2000(x, y Lab) float64 {
	const pow25 = 6103515625 // 25^7
	pow7 := func(c float64) float64 { return c * c * c * c * c * c * c }
	rad := func(deg float64) float64 { return deg * math.Pi / 180 }

	// 1. Chroma and hue, with a* stretched near grey.
	meanC7 := pow7((x.Chroma() + y.Chroma()) / 2)
	stretch := 1.5 - 0.5*math.Sqrt(meanC7/(meanC7+pow25))
	ax, ay := x.A*stretch, y.A*stretch
	cx, cy := math.Hypot(ax, x.B), math.Hypot(ay, y.B)
	hx, hy := hue(ax, x.B), hue(ay, y.B)

	// 2. Differences; hues the short way round. A grey has no hue and takes the other's.
	dh, meanH := hy-hx, (hx+hy)/2
	switch {
	case cx*cy == 0:
		dh, meanH = 0, hx+hy
	case dh > 180:
		dh -= 360
	case dh < -180:
		dh += 360
	}
	if cx*cy != 0 && math.Abs(hx-hy) > 180 {
		if meanH < 180 {
			meanH += 180
		} else {
			meanH -= 180
		}
	}
	dL, dC := y.L-x.L, cy-cx
	dH := 2 * math.Sqrt(cx*cy) * math.Sin(rad(dh/2))

	// 3. Weights at the mean colour.
	meanL, meanC := (x.L+y.L)/2, (cx+cy)/2
	t := 1 - 0.17*math.Cos(rad(meanH-30)) + 0.24*math.Cos(rad(2*meanH)) +
		0.32*math.Cos(rad(3*meanH+6)) - 0.20*math.Cos(rad(4*meanH-63))
	l50 := (meanL - 50) * (meanL - 50)
	sL := 1 + 0.015*l50/math.Sqrt(20+l50)
	sC := 1 + 0.045*meanC
	sH := 1 + 0.015*meanC*t
	turn := (meanH - 275) / 25
	c7 := pow7(meanC)
	rT := -math.Sin(rad(60*math.Exp(-turn*turn))) * 2 * math.Sqrt(c7/(c7+pow25))

	l, c, h := dL/sL, dC/sC, dH/sH
	return math.Sqrt(max(0, l*l+c*c+h*h+rT*c*h))
}

// ContrastRatio returns the contrast of two colours within [0, 1], from 1 to 21, whichever is the lighter.
// Source: WCAG 2.2, "contrast ratio" and "relative luminance".
func ContrastRatio(a, b RGB) float64 {
	la, lb := float64(a.Luminance()), float64(b.Luminance())
	return (max(la, lb) + 0.05) / (min(la, lb) + 0.05)
}
