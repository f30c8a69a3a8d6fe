package tint

import (
	"fmt"

	"lampbook/engine/kernel/num"
)

// EncodeSRGB returns the sRGB value of linear light: [0, 1] to [0, 1], within 1e-7. Below 0 the straight part goes on,
// above 1 the curve. Source: IEC 61966-2-1:1999 with amendment 1.
func EncodeSRGB(linear float32) float32 {
	if !(linear > 0.0031308) {
		return 12.92 * linear
	}
	return float32(float64(1.055*float64(num.Pow(linear, 1/2.4))) - 0.055)
}

// DecodeSRGB returns the linear light of an sRGB value: the inverse of EncodeSRGB, within 3e-7 relative.
func DecodeSRGB(v float32) float32 {
	if !(v > 0.04045) {
		return v / 12.92
	}
	return num.Pow((v+0.055)/1.055, 2.4)
}

// FromSRGB returns the linear colour of three sRGB values, each in [0, 1].
func FromSRGB(r, g, b float32) RGB {
	return RGB{DecodeSRGB(r), DecodeSRGB(g), DecodeSRGB(b)}
}

// ParseHex returns the linear colour of "#rgb" or "#rrggbb", hexadecimal sRGB; in the short form each digit counts twice.
func ParseHex(s string) (RGB, error) {
	var digits [6]uint8
	wide := len(s) == 7
	ok := (wide || len(s) == 4) && s[0] == '#'
	for i := range digits {
		if !ok {
			return RGB{}, fmt.Errorf("%q is not a colour: \"#rrggbb\" or \"#rgb\" with hexadecimal digits is accepted", s)
		}
		at := i
		if !wide {
			at = i / 2
		}
		digits[i], ok = hexDigit(s[1+at])
	}
	if !ok {
		return RGB{}, fmt.Errorf("%q is not a colour: \"#rrggbb\" or \"#rgb\" with hexadecimal digits is accepted", s)
	}
	channel := func(i int) float32 { return float32(digits[i]<<4|digits[i+1]) / 255 }
	return FromSRGB(channel(0), channel(2), channel(4)), nil
}

func hexDigit(c byte) (v uint8, ok bool) {
	switch {
	case '0' <= c && c <= '9':
		return c - '0', true
	case 'a' <= c && c <= 'f':
		return c - 'a' + 10, true
	case 'A' <= c && c <= 'F':
		return c - 'A' + 10, true
	}
	return 0, false
}

// Hex returns the colour as "#rrggbb": sRGB, components limited to [0, 1], halves rounded up. NaN counts as 0.
func Hex(c RGB) string {
	return fmt.Sprintf("#%02x%02x%02x", code8(c.R), code8(c.G), code8(c.B))
}

func code8(linear float32) uint8 {
	if !(linear > 0) {
		return 0
	}
	return uint8(float32(255*EncodeSRGB(min(linear, 1))) + 0.5)
}
