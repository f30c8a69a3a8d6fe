package tint

// RGB is linear light in Rec. 709 primaries with a D65 white, unless a name says otherwise. Reflectances lie in
// [0, 1]; radiances are not bounded above.
type RGB struct{ R, G, B float32 }

// Grey returns the neutral colour with every component y.
func Grey(y float32) RGB { return RGB{y, y, y} }

// Add returns a + b.
func (a RGB) Add(b RGB) RGB { return RGB{a.R + b.R, a.G + b.G, a.B + b.B} }

// Mul returns the component-wise product, rounded: no compiler may fuse it with a sum. Like Scale it rounds, so that no compiler fuses it with a sum that follows.
func (a RGB) Mul(b RGB) RGB {
	return RGB{float32(a.R * b.R), float32(a.G * b.G), float32(a.B * b.B)}
}

// Scale returns s·a, rounded likewise.
func (a RGB) Scale(s float32) RGB {
	return RGB{float32(a.R * s), float32(a.G * s), float32(a.B * s)}
}

// Black reports whether every component is zero.
func (a RGB) Black() bool { return a.R == 0 && a.G == 0 && a.B == 0 }

// Luminance is the CIE Y of the colour relative to white. Weights: Rec. ITU-R BT.709-6, item 3.2.
func (a RGB) Luminance() float32 {
	return float32(0.2126*a.R) + float32(0.7152*a.G) + float32(0.0722*a.B)
}
