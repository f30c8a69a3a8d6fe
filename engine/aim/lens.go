package aim

import (
	"math"

	"lampbook/engine/kernel/num"
)

// FocalFromFOV is the focal length, in the unit of the sensor's width, of a lens that sees a vertical field of fovDeg, in (0, 180),
// on a picture of the aspect ratio, width over height.
func FocalFromFOV(fovDeg, sensorWidth, aspect float64) float64 {
	return settled(sensorWidth / aspect / (2 * num.TanWide(fovDeg*math.Pi/360)))
}

// ExposureFromEV100 is the exposure in stops at which the luminance that saturates a sensor at that exposure value reaches 1.0.
// Source: ISO 12232:2019, saturation-based speed: 78 / (100 · q) · 2^EV100 nit = 1.2 · 2^EV100 nit, with q = 0.65 for the lens.
func ExposureFromEV100(ev float64) float64 {
	return settled(-(ev + num.LogWide(1.2)/math.Ln2))
}

// Brighter is the intensity raised by so many stops: doubled for each.
func Brighter(intensity, stops float64) float64 {
	return settled(intensity * num.PowWide(2, stops))
}
