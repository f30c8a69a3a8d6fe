package render

import (
	"math"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
)

// The facts of the trade, on pictures. Common practice, without a source: see "Facts of the trade" in DEVELOPERS.md.

var (
	gloss   = model.Material{Diffuse: tint.Grey(0.3), Specular: tint.Grey(0.5), Shininess: 40}
	keyLamp = model.Light{Name: "key", Kind: model.LightPoint, Intensity: 30, Position: [3]float64{2, 3, 2}}
)

// passesOf renders the components of a frame.
func passesOf(t *testing.T, s *studio, c model.Camera, lights []model.LightID, things ...model.Placement) *pixmap.Image {
	t.Helper()
	set := square(48, 16)
	set.Passes = []model.Pass{model.PassDiffuse, model.PassSpecular, model.PassAmbient, model.PassEmission, model.PassDepth, model.PassNormal}
	return s.shoot(t, c, set, lights, things...)
}

func TestDiffuseStandsStillWhileSpecularFollowsTheCamera(t *testing.T) {
	// One point of a ball seen from two sides: a tiny picture about the point.
	look := func(eye [3]float64) (diffuse, specular float64) {
		var s studio
		img := passesOf(t, &s, ortho(eye, [3]float64{0, 1, 0}, [3]float64{0.1, 0.2, 1}, 1e-4), s.lights(keyLamp), s.thing(ball, gloss))
		return mean(img.Plane("diffuse.G")), mean(img.Plane("specular.G"))
	}
	d1, s1 := look([3]float64{-2, 4, -2})
	d2, s2 := look([3]float64{2, 4, 0})
	if off(d1, d2) > 1e-3 || d1 == 0 {
		t.Errorf("diffuse changes with the camera: %v and %v", d1, d2)
	}
	if off(s1, s2) < 0.5 {
		t.Errorf("specular does not change with the camera: %v and %v", s1, s2)
	}
}

// TestHighlightSize measures the share of a ball that is brighter than half its highlight's peak.
func TestHighlightSize(t *testing.T) {
	share := func(shininess float64) float64 {
		var s studio
		m := model.Material{Specular: tint.Grey(1), Shininess: shininess}
		sun := model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{-0.4, -0.6, -1}}
		img := s.shoot(t, ortho([3]float64{0, 0, 5}, origin, [3]float64{0, 1, 0}, 2), square(128, 4), s.lights(sun), s.thing(ball, m))
		peak, above, on := float32(0), 0, 0
		for _, v := range img.Plane("G") {
			peak = max(peak, v)
		}
		for i, v := range img.Plane("G") {
			if img.Plane("A")[i] > 0.5 {
				on++
				if v > peak/2 {
					above++
				}
			}
		}
		return float64(above) / float64(on)
	}
	huge, small, dot := share(1), share(30), share(255)
	if huge < 0.5 || small > 0.1 || small < 0.01 || dot > 0.012 {
		t.Errorf("highlights cover %.3f, %.3f and %.4f of a ball at shininess 1, 30 and 255, want huge, small and a dot", huge, small, dot)
	}
	// From the lobe itself: on a ball seen and lit in parallel, (N·H)^S is above one half within acos(2^(-1/S)) of the peak.
	for _, c := range []struct{ s, got float64 }{{30, small}, {255, dot}} {
		half := math.Acos(math.Pow(2, -1/c.s))
		nh := 0.95 // the peak's own foreshortening: H leans 17 to 18 degrees from the view
		if want := math.Sin(half) * math.Sin(half) * nh; off(c.got, want) > 0.1 {
			t.Errorf("shininess %v: the highlight covers %.4f, the lobe says %.4f", c.s, c.got, want)
		}
	}
}

func TestDirectionalLightsAPlaneEvenly(t *testing.T) {
	var s studio
	sun := model.Light{Kind: model.LightDirectional, Intensity: 3, Direction: [3]float64{1, -2, 0.5}, Position: [3]float64{3, 0.5, 1}}
	img := s.shoot(t, ortho(fromTop, origin, zUp, 6), square(32, 4), s.lights(sun), s.thing(floor, matt(0.5)))
	g := img.Plane("G")
	for i := range g {
		if g[i] != g[0] || g[i] == 0 {
			t.Fatalf("pixel %d has %v, pixel 0 %v", i, g[i], g[0])
		}
	}
}

func TestPointFallsOffWithTheSquare(t *testing.T) {
	near := under(t, 0, 1, model.Light{Kind: model.LightPoint, Intensity: 5, Position: [3]float64{0, 1, 0}}, nil)
	far := under(t, 0, 1, model.Light{Kind: model.LightPoint, Intensity: 5, Position: [3]float64{0, 3, 0}}, nil)
	if off(near, 9*far) > 1e-5 {
		t.Errorf("at three times the distance %v of %v lx is left, want a ninth", far, near)
	}
}

func TestSpotConeAndPenumbra(t *testing.T) {
	lx := func(deg float64) float64 {
		spot := model.Light{Kind: model.LightSpot, NoFalloff: true, Intensity: 7, Inner: 20, Outer: 30, Position: [3]float64{0, 2, 0}}
		// Over the cosine of the surface, what is left is the cone.
		return under(t, 2*math.Tan(deg*math.Pi/180), 1, spot, nil) / math.Cos(deg*math.Pi/180)
	}
	for _, deg := range []float64{0, 10, 19.9} {
		if got := lx(deg); off(got, 7) > 1e-4 {
			t.Errorf("%v° is inside the cone and has %v lx of 7", deg, got)
		}
	}
	for _, deg := range []float64{30.1, 40, 60} {
		if got := lx(deg); got != 0 {
			t.Errorf("%v° is outside and has %v lx", deg, got)
		}
	}
	last := 7.0
	for deg := 21.0; deg < 30; deg++ {
		got := lx(deg)
		if got >= last || got <= 0 {
			t.Errorf("the light does not fall steadily between the cones: %v lx at %v°, %v before", got, deg, last)
		}
		last = got
	}
}

func TestEmissionGlowsAndLightsNothing(t *testing.T) {
	var s studio
	white := s.thing(floor, matt(0.8))
	glow := s.thing(ball, model.Material{Emission: tint.RGB{R: 4, G: 2, B: 1}})
	glow.At, glow.Scale = [3]float64{0, 0.5, 0}, [3]float64{0.5, 0.5, 0.5}
	img := s.shoot(t, ortho(fromTop, origin, zUp, 4), square(32, 4), nil, white, glow)
	if got, want := at(img, 16, 16), [3]float64{4, 2, 1}; got != want {
		t.Errorf("the ball glows %v, want %v", got, want)
	}
	if got := at(img, 2, 2); got != [3]float64{} {
		t.Errorf("it lights the floor: %v", got)
	}
}

func TestLightsAreNotSeen(t *testing.T) {
	for _, shape := range []model.AreaShape{model.AreaRectangle, model.AreaDisk, model.AreaSphere} {
		shot := func(visible bool) *pixmap.Image {
			var s studio
			back := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{9, 0, 9}}, matt(0))
			back.Turn, back.At = [3]float64{90, 0, 0}, [3]float64{0, 0, -1}
			lamp := model.Light{Kind: model.LightArea, Shape: shape, Intensity: 6, Width: 1, Height: 1, Radius: 0.5, Target: [3]float64{0, 0, 9}, Visible: visible}
			return s.shoot(t, ortho([3]float64{0, 0, 5}, origin, [3]float64{0, 1, 0}, 2), square(64, 16), s.lights(lamp), back)
		}
		if m := mean(shot(false).Plane("G")); m != 0 {
			t.Errorf("shape %d is seen: %v", shape, m)
		}
		area := 1.0
		if shape != model.AreaRectangle {
			area = math.Pi / 4
		}
		if got, want := mean(shot(true).Plane("G")), 6*area/4; off(got, want) > 2e-3 {
			t.Errorf("shape %d made visible shows %v in the mean, want %v", shape, got, want)
		}
	}
}

func TestSeveralLightsAddUp(t *testing.T) {
	other := model.Light{Name: "fill", Kind: model.LightArea, Shape: model.AreaDisk, Radius: 0.7, Intensity: 9, Position: [3]float64{-3, 1, 2}}
	shot := func(ls ...model.Light) []float32 {
		var s studio
		ground := s.thing(floor, gloss)
		ground.At = [3]float64{0, -1, 0}
		return s.shoot(t, lens([3]float64{0, 2, 6}, origin, 50), square(48, 8), s.lights(ls...), s.thing(ball, gloss), ground).Plane("G")
	}
	both, first, second := shot(keyLamp, other), shot(keyLamp), shot(other)
	for i := range both {
		if d := both[i] - first[i] - second[i]; math.Abs(float64(d)) > 1e-6*(1+float64(both[i])) {
			t.Fatalf("pixel %d: %v is not the sum of %v and %v", i, both[i], first[i], second[i])
		}
	}
}

func TestAreaLightSoftensShadows(t *testing.T) {
	// The widest step from one pixel to the next along a shadow's edge.
	edge := func(l model.Light) float64 {
		var s studio
		card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
		card.At, card.Hidden = [3]float64{-25, 1, 0}, true
		img := s.shoot(t, ortho(fromTop, origin, zUp, 1.0/64), model.Settings{Width: 64, Height: 1, Samples: 1024, Filter: model.BoxFilter}, s.lights(l), s.thing(floor, matt(0.8)), card)
		g := img.Plane("G")
		step, most := 0.0, 0.0
		for i := 1; i < len(g); i++ {
			step = max(step, math.Abs(float64(g[i]-g[i-1])))
			most = max(most, float64(g[i]))
		}
		return step / most
	}
	hard := edge(model.Light{Kind: model.LightPoint, Intensity: 1, Position: [3]float64{0, 2, 0}})
	soft := edge(ceiling(2, model.Light{Shape: model.AreaDisk, Radius: 0.02}))
	softer := edge(ceiling(2, model.Light{Shape: model.AreaDisk, Radius: 0.3}))
	if !(hard > 2*soft && soft > 2*softer) {
		t.Errorf("steps at the shadow's edge: point %.3f, small lamp %.3f, large lamp %.3f; want each far softer", hard, soft, softer)
	}
}

// TestShadowsSoftenWithDistance measures how broad the penumbra of an edge is at two heights of the edge.
func TestShadowsSoftenWithDistance(t *testing.T) {
	const pixels, across = 256, 2.0
	for _, tt := range []struct {
		height, want float64
		source       string
	}{
		{1, 1, "reference PEN-WIDTH-2-3-1"},
		{0.25, 2 * 0.25 / 2.75, "similar triangles: w·ho / (hL - ho), as in PEN-WIDTH"},
		{0.02, 2 * 0.02 / 2.98, "similar triangles"},
	} {
		shot := func(with bool) []float32 {
			var s studio
			things := []model.Placement{s.thing(floor, matt(0.8))}
			if with {
				card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
				card.At, card.Hidden = [3]float64{-25, tt.height, 0}, true
				things = append(things, card)
			}
			lamp := ceiling(3, model.Light{Shape: model.AreaRectangle, Width: 2, Height: 2})
			set := model.Settings{Width: pixels, Height: 1, Samples: 1024, Filter: model.BoxFilter}
			return s.shoot(t, ortho(fromTop, origin, zUp, across/pixels), set, s.lights(lamp), things...).Plane("G")
		}
		shaded, open := shot(true), shot(false)
		first, last := -1, -1
		for i := range shaded {
			share := shaded[i] / open[i]
			if first < 0 && share > 0.002 {
				first = i
			}
			if share < 0.998 {
				last = i
			}
		}
		// One pixel at either end, and what the faint ends of the ramp hide from the thresholds.
		got, pixel := float64(last-first+1)*across/pixels, across/pixels
		if math.Abs(got-tt.want) > 2*pixel+0.03*tt.want {
			t.Errorf("edge at %v m: the penumbra is %.4f m wide, want %.4f (%s)", tt.height, got, tt.want, tt.source)
		}
	}
}

// TestEqualTilesAreEqual renders two frames that differ in nothing but name and tags, in one cast and in two.
func TestEqualTilesAreEqual(t *testing.T) {
	var s studio
	frames := batch(&s)
	twin := s.plan.Frames[frames[0]]
	twin.Name, twin.Tags = "twin", []model.Tag{{Key: "shelf", Value: model.Value{Text: "upper"}}}
	s.plan.Frames = append(s.plan.Frames, twin)
	other := len(s.plan.Frames) - 1
	together := s.render(t, Options{}, frames[0], other)
	apart := s.render(t, Options{Threads: 1}, other)[0]
	if p := same(together[0].Display, together[1].Display); p != "" {
		t.Errorf("plane %s differs between equal frames of one cast", p)
	}
	if p := same(together[0].Display, apart.Display); p != "" {
		t.Errorf("plane %s differs between equal frames of two casts", p)
	}
	h := model.NewHasher(&s.plan)
	if h.Frame(frames[0]) != h.Frame(other) {
		t.Error("equal frames have different hashes")
	}
}

// TestShadowsSpareAmbientAndEmission compares a floor inside and outside of a full shadow.
func TestShadowsSpareAmbientAndEmission(t *testing.T) {
	var s studio
	paint := model.Material{Diffuse: tint.Grey(0.5), Specular: tint.Grey(0.5), Ambient: tint.Grey(0.4), Emission: tint.Grey(0.125), Shininess: 2}
	card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
	card.At, card.Hidden = [3]float64{-25, 1, 0}, true
	lamp := model.Light{Kind: model.LightPoint, Intensity: 9, Position: [3]float64{0, 2, 0}}
	room := model.Light{Kind: model.LightAmbient, Intensity: 1}
	img := passesOf(t, &s, ortho([3]float64{0, 0.5, 0}, origin, zUp, 1), s.lights(lamp, room), s.thing(floor, paint), card)
	in, out := 48*24+4, 48*24+43
	for _, c := range []struct {
		plane  string
		shadow float64
	}{{"diffuse.G", 0}, {"specular.G", 0}, {"ambient.G", 0.4}, {"emission.G", 0.125}} {
		p := img.Plane(c.plane)
		if math.Abs(float64(p[in])-c.shadow) > 1e-6 {
			t.Errorf("%s in the shadow is %v, want %v", c.plane, p[in], c.shadow)
		}
		if c.shadow == 0 && p[out] <= 0 {
			t.Errorf("%s in the light is %v", c.plane, p[out])
		}
	}
}

func TestComponentsSumToThePicture(t *testing.T) {
	var s studio
	paint := gloss
	paint.Ambient, paint.Emission = tint.RGB{R: 0.2, G: 0.3, B: 0.1}, tint.RGB{R: 0.01, B: 0.3}
	room := model.Light{Kind: model.LightAmbient, Intensity: 1.5}
	img := passesOf(t, &s, lens([3]float64{0, 1, 6}, origin, 50), s.lights(keyLamp, room), s.thing(ball, paint))
	for _, c := range []string{"R", "G", "B"} {
		for i, v := range img.Plane(c) {
			sum := 0.0
			for _, part := range partNames {
				sum += float64(img.Plane(part + "." + c)[i])
			}
			if math.Abs(sum-float64(v)) > 1e-5*float64(v) {
				t.Fatalf("%s, pixel %d: components sum to %v, the picture has %v", c, i, sum, v)
			}
		}
	}
	// The ball's middle faces the camera and is √37 - 1 m away: the eye at (0, 1, 6), the ball's radius 1.
	if d, want := img.Plane("depth.Z")[24*48+24], math.Sqrt(37)-1; math.Abs(float64(d)-want) > 0.01 {
		t.Errorf("depth of the middle is %v, want %v", d, want)
	}
	n := 0.0
	for _, c := range []string{"normal.X", "normal.Y", "normal.Z"} {
		v := float64(img.Plane(c)[24*48+24])
		n += v * v
	}
	if math.Abs(n-1) > 1e-4 {
		t.Errorf("the normal pass has length² %v, want 1", n)
	}
}
