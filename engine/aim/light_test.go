package aim

import (
	"math"
	"strings"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

func bulb(l model.Light) model.Light {
	l.Color = tint.Grey(1)
	if l.Components == (model.Components{}) {
		l.Components = model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1), Ambient: tint.Grey(0)}
	}
	return l
}

func TestMeter(t *testing.T) {
	up := [3]float64{0, 1, 0}
	tests := []struct {
		name   string
		lights []model.Light
		level  float64 // E/π + La, nit
		source string
	}{
		{"point", []model.Light{bulb(model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{0, 2, 0}})}, 25 / math.Pi, "reference IR-PT-100-2-0"},
		{"square overhead", []model.Light{bulb(model.Light{Kind: model.LightArea, Intensity: 1, Width: 2, Height: 2, Position: [3]float64{0, 1, 0}, Up: [3]float64{1, 0, 0}})},
			1.7408395027342063 / math.Pi, "reference IR-RECT-CENTRE"},
		{"half in, half out of sight", []model.Light{bulb(model.Light{Kind: model.LightArea, Shape: model.AreaSphere, Radius: 1, Intensity: 1, Position: [3]float64{2, 0, 0}})},
			0.09058607370607955 / math.Pi, "reference IR-SPH-2-1-90"},
		{"ambient", []model.Light{bulb(model.Light{Kind: model.LightAmbient, Intensity: 3, Components: model.Components{Ambient: tint.Grey(0.5)}})}, 1.5, "RENDER_MODEL: Ca ∘ La"},
		{"sum", []model.Light{
			bulb(model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{0, -3, 0}}),
			bulb(model.Light{Kind: model.LightAmbient, Intensity: 3, Components: model.Components{Ambient: tint.Grey(1)}}),
		}, 4, "lights add up"},
	}
	for _, tt := range tests {
		stops, err := Meter(tt.lights, [3]float64{}, up)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		if want := -math.Log2(tt.level); math.Abs(stops-want) > 1e-5 {
			t.Errorf("%s: %v stops, want %v (%s)", tt.name, stops, want, tt.source)
		}
	}
	if _, err := Meter(tests[0].lights, [3]float64{}, [3]float64{0, -1, 0}); err == nil || !strings.Contains(err.Error(), "no light reaches") {
		t.Errorf("a meter turned away reads %v", err)
	}
	if _, err := Meter(tests[0].lights, [3]float64{}, [3]float64{}); err == nil {
		t.Error("a meter without a direction reads something")
	}
}

func TestPower(t *testing.T) {
	tests := []struct {
		name       string
		light      model.Light
		lumen, out float64
		source     string
	}{
		{"point", model.Light{Kind: model.LightPoint}, 1600, 127.32395447351627, "reference UNIT-100CD"},
		{"disk", model.Light{Kind: model.LightArea, Shape: model.AreaDisk, Radius: math.Sqrt(0.25 / math.Pi), Position: [3]float64{0, 1, 0}}, 78.53981633974483, 100, "reference UNIT-LAMB-DISK"},
		{"sphere", model.Light{Kind: model.LightArea, Shape: model.AreaSphere, Radius: 0.5}, 9.869604401089358, 1, "reference UNIT-LAMB-SPHERE"},
	}
	for _, tt := range tests {
		got, err := PowerToIntensity(tt.light, tt.lumen)
		if err != nil || math.Abs(got-tt.out) > 1e-6*tt.out {
			t.Errorf("%s: %v lm give %v (%v), want %v (%s)", tt.name, tt.lumen, got, err, tt.out, tt.source)
		}
	}
	for _, l := range []model.Light{{Kind: model.LightDirectional}, {Kind: model.LightAmbient}} {
		if _, err := PowerToIntensity(l, 1); err == nil {
			t.Errorf("kind %d takes a power", l.Kind)
		}
	}
	if _, err := PowerToIntensity(model.Light{Kind: model.LightPoint}, -1); err == nil {
		t.Error("a negative power is taken")
	}
}

func TestTurnLightsKeepsTheirLight(t *testing.T) {
	lights := []model.Light{bulb(model.Light{Kind: model.LightArea, Intensity: 1, Width: 2, Height: 1, Position: [3]float64{1, 1, 0.5}, Target: [3]float64{0, 0, 1}, Up: [3]float64{0, 1, 0}})}
	at, facing := [3]float64{0.3, 0, 0.1}, [3]float64{0.5, 1, 0}
	want, err := Meter(lights, at, facing)
	if err != nil {
		t.Fatal(err)
	}
	for _, deg := range []float64{-30, 90, 200} {
		sin, cos := math.Sincos(deg * math.Pi / 180)
		// Counter-clockwise seen from above takes +z towards +x.
		turn := func(v [3]float64) [3]float64 { return [3]float64{cos*v[0] + sin*v[2], v[1], cos*v[2] - sin*v[0]} }
		got, err := Meter(TurnLights(lights, deg), turn(at), turn(facing))
		if err != nil || math.Abs(got-want) > 1e-9 {
			t.Errorf("turned by %v°: %v stops (%v), want %v", deg, got, err, want)
		}
	}
}

func TestDefaultLights(t *testing.T) {
	for _, radius := range []float64{0.01, 1, 40} {
		lights := DefaultLights([3]float64{1, 2, 3}, radius)
		toKey := vec(lights[0].Position).Sub(vec([3]float64{1, 2, 3}))
		stops, err := Meter(lights, [3]float64{1, 2, 3}, arr(toKey))
		// 1000 lux from the key and a third of 1000/π nit from all around, as documented.
		if want := -math.Log2(1000 / math.Pi * 4 / 3); err != nil || math.Abs(stops-want) > 1e-6 {
			t.Errorf("radius %v: %v stops (%v), want %v", radius, stops, err, want)
		}
	}
}
