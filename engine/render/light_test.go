package render

import (
	"math"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// TestPunctualLights renders a floor under lights of known illuminance.
func TestPunctualLights(t *testing.T) {
	rad := math.Pi / 180
	tests := []struct {
		name   string
		x      float64
		light  model.Light
		want   float64 // lux
		source string
	}{
		{"point 1 m", 0, model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{0, 1, 0}}, 100, "reference IR-PT-100-1-0: E = I cos θ / d²"},
		{"point 2 m", 0, model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{0, 2, 0}}, 25, "reference IR-PT-100-2-0"},
		{"point 3 m", 0, model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{0, 3, 0}}, 11.11111111111111, "reference IR-PT-100-3-0"},
		{"point 2 m at 60°", 2 * math.Sin(60*rad), model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{0, 1, 0}}, 12.5, "reference IR-PT-100-2-60"},
		{"range 10 at 8 m", 0, model.Light{Kind: model.LightPoint, Intensity: 1, Range: 10, Position: [3]float64{0, 8, 0}}, 0.009225, "reference RANGE-KHR-8-10"},
		{"range 10 at 10 m", 0, model.Light{Kind: model.LightPoint, Intensity: 1, Range: 10, Position: [3]float64{0, 10, 0}}, 0, "reference RANGE-KHR-10-10"},
		{"directional at 60°", 3, model.Light{Kind: model.LightDirectional, Intensity: 10, Direction: [3]float64{math.Sin(60 * rad), -math.Cos(60 * rad), 0}}, 5, "E = E0 cos θ (Lambert 1760)"},
		{"spot 0 to 45° at 11.25°", 2 * math.Tan(11.25*rad), model.Light{Kind: model.LightSpot, Intensity: 1, Outer: 45, Position: [3]float64{0, 2, 0}, Target: origin},
			0.8730974616202651 * math.Pow(math.Cos(11.25*rad), 3) / 4, "reference SPOT-KHR-0-45-0.25, with I cos³θ / h²"},
	}
	for _, tt := range tests {
		if got := under(t, tt.x, 1, tt.light, nil); math.Abs(got-tt.want) > 1e-4*tt.want+1e-7 {
			t.Errorf("%s: got %v lx, want %v (%s)", tt.name, got, tt.want, tt.source)
		}
	}
}

// TestTextbookSum renders the worked examples of the four-component sum: one surface point, a light of E0 = π.
func TestTextbookSum(t *testing.T) {
	paint := model.Material{
		Emission: tint.RGB{R: 0.05}, Ambient: tint.Grey(0.2), Diffuse: tint.RGB{R: 0.8, G: 0.5, B: 0.3}, Specular: tint.Grey(0.5), Shininess: 32,
	}
	ambient := model.Light{Name: "room", Kind: model.LightAmbient, Intensity: 0.2}
	own := model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1), Ambient: tint.Grey(0.1)}
	// The examples have the surface's normal along z and the light at (1, 2, 2); here the same, turned: (x, y, z) stands at (x, z, -y).
	lightAt := [3]float64{1, 2, -2}
	eye := [3]float64{0, 3, 1}
	tests := []struct {
		name   string
		light  model.Light
		want   [3]float64
		source string
	}{
		{"no falloff", model.Light{Kind: model.LightPoint, NoFalloff: true, Intensity: math.Pi, Position: lightAt},
			[3]float64{0.7499242456399666, 0.4999242456399666, 0.3665909123066333}, "reference BP4-POINT"},
		{"inverse square", model.Light{Kind: model.LightPoint, Intensity: math.Pi, Position: lightAt, Components: own},
			[3]float64{0.16554713840444074, 0.09332491618221853, 0.0785101013674037}, "reference BP4-ATT"},
		{"behind", model.Light{Kind: model.LightPoint, NoFalloff: true, Intensity: math.Pi, Position: [3]float64{0, -2, 0}},
			[3]float64{0.09, 0.04, 0.04}, "reference BP4-BACK"},
	}
	for _, tt := range tests {
		var s studio
		cam := ortho(eye, origin, [3]float64{0, 1, 0}, 1e-7)
		img := s.shoot(t, cam, square(1, 1), s.lights(ambient, tt.light), s.thing(floor, paint))
		got := at(img, 0, 0)
		for k := range got {
			if math.Abs(got[k]-tt.want[k]) > 2e-6 {
				t.Errorf("%s: got %v, want %v (%s)", tt.name, got, tt.want, tt.source)
				break
			}
		}
	}
}

// TestCardLuminance renders an 18 % card under 1000 lx.
func TestCardLuminance(t *testing.T) {
	var s studio
	sun := model.Light{Kind: model.LightDirectional, Intensity: 1000, Direction: [3]float64{0, -1, 0}}
	img := s.shoot(t, ortho(fromTop, origin, zUp, 1), square(1, 1), s.lights(sun), s.thing(floor, matt(0.18)))
	if got, want := at(img, 0, 0)[1], 57.29577951308232; off(got, want) > 1e-5 {
		t.Errorf("the card has %v nit, want %v (reference UNIT-LAMBERT-REFL: L = ρE/π)", got, want)
	}
}

// TestLambertSphere compares a ball's mean brightness with the closed form of a Lambert sphere's phases.
func TestLambertSphere(t *testing.T) {
	tests := []struct {
		phaseDeg float64
		want     float64
		source   string
	}{
		{0, 0.6666666666666666, "reference IMG-LAMBERT-SPHERE-FULL and IMG-LAMBERT-PHASE-0: 2/3"},
		{90, 0.2122065907891938, "reference IMG-LAMBERT-PHASE-90"},
		{135, 0.032201589161759754, "reference IMG-LAMBERT-PHASE-135"},
	}
	for _, tt := range tests {
		sin, cos := math.Sincos(tt.phaseDeg * math.Pi / 180)
		sun := model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{-sin, 0, -cos}}
		var s studio
		img := s.shoot(t, ortho([3]float64{0, 0, 5}, origin, [3]float64{0, 1, 0}, 2), square(256, 4), s.lights(sun), s.thing(ball, spotless))
		// The picture is 2 m by 2 m and the disc π m².
		if got := mean(img.Plane("R")) * 4 / math.Pi; math.Abs(got-tt.want) > 0.003 {
			t.Errorf("phase %v°: mean radiance %v, want %v (%s)", tt.phaseDeg, got, tt.want, tt.source)
		}
	}
}
