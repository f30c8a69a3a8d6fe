package aim

import (
	"errors"
	"fmt"
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/lamp"
	"lampbook/engine/kernel/num"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// LampSpec is the light's shape and place as package lamp takes it. It is false for ambient light, which has neither.
func LampSpec(l model.Light) (lamp.Spec, bool) {
	s := lamp.Spec{
		Position: vec(l.Position), Direction: vec(l.Target).Sub(vec(l.Position)), Up: vec(l.Up),
		Width: l.Width, Height: l.Height, Radius: l.Radius, Inner: l.Inner, Outer: l.Outer,
		Range: l.Range, NoFalloff: l.NoFalloff, TwoSided: l.TwoSided,
	}
	switch l.Kind {
	case model.LightDirectional:
		s.Kind, s.Direction = lamp.Directional, vec(l.Direction)
	case model.LightPoint:
		s.Kind = lamp.Point
	case model.LightSpot:
		s.Kind = lamp.Spot
	case model.LightArea:
		s.Kind = [...]lamp.Kind{model.AreaRectangle: lamp.Rectangle, model.AreaDisk: lamp.Disk, model.AreaSphere: lamp.Sphere}[l.Shape]
	default:
		return lamp.Spec{}, false
	}
	return s, true
}

// PowerToIntensity returns the intensity, in the light's own unit (candela or nit), at which it emits so many lumens. It fails for
// directional and ambient light, whose flux has no bound, and for a negative or infinite power.
func PowerToIntensity(l model.Light, lumens float64) (float64, error) {
	if !(lumens >= 0) || math.IsInf(lumens, 0) {
		return 0, fmt.Errorf("power must be at least 0 lumen, got %v", lumens)
	}
	spec, ok := LampSpec(l)
	if !ok || spec.Kind == lamp.Directional {
		return 0, errors.New("power is for lights with a place (point, spot, area); give intensity")
	}
	return settled(lamp.IntensityFromPower(spec, lumens)), nil
}

// Meter reads the lights as an incident light meter does: it returns the exposure, in stops, that shows an 18 % grey card at a point,
// facing a direction, as 0.18. Such a card reflects 0.18·(E/π + La), E the illuminance of the lights (their diffuse share, nothing in
// the way) and La the ambient light; so the exposure is -log2(E/π + La). Colours count by their luminance.
//
// It fails if facing is zero or no light reaches the point.
func Meter(lights []model.Light, at, facing [3]float64) (stops float64, err error) {
	n := vec(facing).Unit()
	if n == (geom.Vec3d{}) {
		return 0, errors.New("facing must not be zero")
	}
	level := 0.0
	for _, l := range lights {
		spec, ok := LampSpec(l)
		if !ok {
			level += float64(l.Intensity * luminance(l.Color.Mul(l.Components.Ambient)))
			continue
		}
		lp := lamp.New(spec)
		level += float64(l.Intensity / math.Pi * luminance(l.Color.Mul(l.Components.Diffuse)) * lp.Irradiance(vec(at), n))
		// A light's own ambient weight takes what a surface facing it would get.
		if own := luminance(l.Color.Mul(l.Components.Ambient)); own > 0 {
			toLight := n
			if spec.Kind != lamp.Directional {
				toLight = vec(l.Position).Sub(vec(at)).Unit()
			} else {
				toLight = vec(l.Direction).Unit().Neg()
			}
			level += float64(l.Intensity / math.Pi * own * lp.Irradiance(vec(at), toLight))
		}
	}
	if !(level > 0) {
		return 0, fmt.Errorf("no light reaches %v facing %v: point the meter at a light", at, facing)
	}
	if math.IsInf(level, 0) {
		return 0, fmt.Errorf("the light at %v is without bound", at)
	}
	return settled(-num.LogWide(level) / math.Ln2), nil
}

func luminance(c tint.RGB) float64 {
	return float64(0.2126*float64(c.R)) + float64(0.7152*float64(c.G)) + float64(0.0722*float64(c.B))
}

// TurnLights returns the lights turned about the vertical through the origin, by degrees, counter-clockwise seen from above.
func TurnLights(lights []model.Light, deg float64) []model.Light {
	turn := geom.Turn(geom.Vec3d{Y: deg})
	point := func(p [3]float64) [3]float64 { return settledPoint(turn.Point(vec(p)), vec(p).Len()) }
	out := make([]model.Light, len(lights))
	for i, l := range lights {
		l.Position, l.Target, l.Direction, l.Up = point(l.Position), point(l.Target), point(l.Direction), point(l.Up)
		out[i] = l
	}
	return out
}

// DefaultLights are for a frame that names none: a large soft key from the upper left front, and a third as much from all around, for
// things within radius metres of centre. The key delivers 1000 lux at the centre; three quarters of the light come from it.
func DefaultLights(centre [3]float64, radius float64) []model.Light {
	radius = max(radius, 1e-9)
	c := vec(centre)
	away := geom.Vec3d{X: -0.7, Y: 1, Z: 0.75}.Unit()
	const distance, edge = 5.0, 3.0 // in radii
	key := model.Light{
		Name: "key", Kind: model.LightArea, Shape: model.AreaRectangle, Color: tint.Grey(1),
		Position: settledPoint(c.Add(away.Scale(distance*radius)), radius), Target: centre, Up: [3]float64{0, 1, 0},
		Width: edge * radius, Height: edge * radius,
		Components: model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1)},
	}
	spec, _ := LampSpec(key)
	lp := lamp.New(spec)
	const keyLux = 1000
	key.Intensity = settled(keyLux / lp.Irradiance(c, away))
	return []model.Light{key, {
		Name: "room", Kind: model.LightAmbient, Color: tint.Grey(1), Intensity: keyLux / math.Pi / 3,
		Components: model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1), Ambient: tint.Grey(1)},
	}}
}
