package render

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/lamp"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// under renders one point of a white floor at (x, 0), seen from above through whatever hides it, lit by l, and returns the light that
// reached it, in lux. stop adds things that stop light and are not seen.
func under(t *testing.T, x float64, samples int, l model.Light, stop func(s *studio) []model.Placement) float64 {
	t.Helper()
	var s studio
	things := []model.Placement{s.thing(floor, spotless)}
	if stop != nil {
		for _, p := range stop(&s) {
			p.Hidden = true
			things = append(things, p)
		}
	}
	cam := ortho([3]float64{x, 0.1, 0}, [3]float64{x, 0, 0}, zUp, 1e-5)
	img := s.shoot(t, cam, model.Settings{Width: 1, Height: 1, Samples: samples, Filter: model.BoxFilter}, s.lights(l), things...)
	return at(img, 0, 0)[0] * math.Pi
}

// ceiling is an area light at height h over the origin, facing down, of unit radiance.
func ceiling(h float64, l model.Light) model.Light {
	l.Kind, l.Intensity = model.LightArea, 1
	l.Position, l.Target, l.Up = [3]float64{0, h, 0}, [3]float64{}, [3]float64{0, 0, 1}
	return l
}

// TestPenumbraOfAnEdge compares the light behind a straight edge with Lambert's formula for the part of the lamp that is seen.
func TestPenumbraOfAnEdge(t *testing.T) {
	tests := []struct{ w, l, hL, ho, x, want float64 }{
		// Reference PEN-EDGE rows, in their order: w, l, hL, ho, x, E_L1. Lambert's polygon formula on the visible part.
		{1, 1, 2, 1, -0.5, 0}, {1, 1, 2, 1, -0.4, 0.017330747493195804}, {1, 1, 2, 1, -0.25, 0.04994484485602565},
		{1, 1, 2, 1, 0, 0.11541839886508538}, {1, 1, 2, 1, 0.1, 0.14134448786400913}, {1, 1, 2, 1, 0.25, 0.17484764105385422},
		{1, 1, 2, 1, 0.4, 0.19846036780351126}, {1, 1, 2, 1, 0.5, 0.207918813257321},
		{1, 1, 2, 0.5, -0.13333333333333333, 0.02045421408817713}, {1, 1, 2, 0.5, -0.08333333333333333, 0.054205021421988006},
		{1, 1, 2, 0.5, -0.03333333333333333, 0.09054418969920955}, {1, 1, 2, 0.5, 0, 0.11541839886508538},
		{1, 1, 2, 0.5, 0.08333333333333333, 0.1759492255960145},
		{2, 0.5, 3, 1, -0.5, 0}, {2, 0.5, 3, 1, -0.25, 0.022369221032462826}, {2, 0.5, 3, 1, 0, 0.05158195283944119},
		{2, 0.5, 3, 1, 0.1, 0.06349307251022104}, {2, 0.5, 3, 1, 0.5, 0.09881235473227194},
	}
	for _, tt := range tests {
		// Width runs along x: with the light's axis down and up along z, its U is along x.
		lamp := ceiling(tt.hL, model.Light{Shape: model.AreaRectangle, Width: tt.w, Height: tt.l})
		got := under(t, tt.x, 4096, lamp, func(s *studio) []model.Placement {
			card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
			card.At = [3]float64{-25, tt.ho, 0}
			return []model.Placement{card}
		})
		// The reference allows 1 % of the light without a card at 1024 rays.
		if math.Abs(got-tt.want) > 0.01*0.23 {
			t.Errorf("w %v l %v at %v, edge at %v, x %v: got %v lx, want %v", tt.w, tt.l, tt.hL, tt.ho, tt.x, got, tt.want)
		}
	}
}

// TestEclipse compares the light of a disk lamp past an opaque disk with the reference's quadrature.
func TestEclipse(t *testing.T) {
	tests := []struct {
		ro, x, want float64
		source      string
	}{
		{0.5, 0.5, 0.05897976102182332, "reference PEN-DISK-1-4-0.5-2-0.5"},
		{0.5, 1, 0.10794550167316178, "reference PEN-DISK-1-4-0.5-2-1"},
		{0.25, 0, 0.13647017398979822, "reference PEN-DISK-1-4-0.25-2-0"},
	}
	for _, tt := range tests {
		lamp := ceiling(4, model.Light{Shape: model.AreaDisk, Radius: 1})
		got := under(t, tt.x, 4096, lamp, func(s *studio) []model.Placement {
			coin := s.thing(model.Mesh{Kind: model.MeshDisk, Size: [3]float64{tt.ro}, Segments: 1024}, matt(0))
			coin.At = [3]float64{0, 2, 0}
			return []model.Placement{coin}
		})
		if off(got, tt.want) > 0.01 {
			t.Errorf("disk %v at x %v: got %v lx, want %v (%s)", tt.ro, tt.x, got, tt.want, tt.source)
		}
	}
}

// TestOverlappingDisks compares how much of a disk lamp is seen past a disk close before it with the area of the lens that they share.
func TestOverlappingDisks(t *testing.T) {
	tests := []struct {
		lamp, coin, apart, want float64
		source                  string
	}{
		{1, 1, 0.5, 0.31496235752570745, "reference PEN-LENS-1-1-0.5"},
		{1, 1, 1.5, 0.8557063871856125, "reference PEN-LENS-1-1-1.5"},
		{1, 0.5, 0.75, 0.8096069309374072, "reference PEN-LENS-1-0.5-0.75"},
		{1, 0.5, 1, 0.888347520318834, "reference PEN-LENS-1-0.5-1"},
		{1, 2, 2, 0.5533900812753361, "reference PEN-LENS-1-2-2"},
		{1, 0.5, 0.25, 0.75, "reference PEN-LENS-1-0.5-0.25"},
	}
	for _, tt := range tests {
		far := ceiling(200, model.Light{Shape: model.AreaDisk, Radius: tt.lamp})
		open := under(t, 0, 4096, far, nil)
		got := under(t, 0, 4096, far, func(s *studio) []model.Placement {
			coin := s.thing(model.Mesh{Kind: model.MeshDisk, Size: [3]float64{tt.coin}, Segments: 1024}, matt(0))
			coin.At = [3]float64{tt.apart, 199.9, 0}
			return []model.Placement{coin}
		}) / open
		if math.Abs(got-tt.want) > 0.005 { // the reference allows 1/√N = 0.016
			t.Errorf("disks of %v and %v, %v apart: %v is seen, want %v (%s)", tt.lamp, tt.coin, tt.apart, got, tt.want, tt.source)
		}
	}
}

// TestHardShadows checks where the shadows of lights without size fall.
func TestHardShadows(t *testing.T) {
	coin := func(s *studio) []model.Placement {
		c := s.thing(model.Mesh{Kind: model.MeshDisk, Size: [3]float64{0.5}, Segments: 1024}, matt(0))
		c.At = [3]float64{0, 2, 0}
		return []model.Placement{c}
	}
	bulb := model.Light{Kind: model.LightPoint, Intensity: 1, Position: [3]float64{0, 4, 0}}
	// Reference SHADOW-POINT-SCALE: radius Ro hL / (hL - ho) = 1.
	if in, out := under(t, 0.995, 1, bulb, coin), under(t, 1.005, 1, bulb, coin); in != 0 || out == 0 {
		t.Errorf("the shadow of a disk does not end at 1 m: %v lx inside, %v outside", in, out)
	}
	// Reference SHADOW-DIR-SHIFT: height over the tangent of the elevation; 2 m at 30° is 3.4641 m, less and more the disk's 0.5 m.
	sun := model.Light{Kind: model.LightDirectional, Intensity: 1, Direction: [3]float64{math.Cos(math.Pi / 6), -0.5, 0}}
	shift := 2 / math.Tan(math.Pi/6)
	if a, b, c := under(t, shift-0.505, 1, sun, coin), under(t, shift, 1, sun, coin), under(t, shift+0.505, 1, sun, coin); a == 0 || b != 0 || c == 0 {
		t.Errorf("the shadow of a sunlit disk does not lie at %v m: %v, %v, %v lx", shift, a, b, c)
	}
}

// TestConfigurationFactors renders a receiver whole and compares its mean with the factor between the two.
func TestConfigurationFactors(t *testing.T) {
	type pair struct {
		receiver model.Mesh
		at       [3]float64 // of the receiver
		size     [2]float64 // of the picture, metres
		lamp     model.Light
	}
	opposed := func(a, b, c float64) pair {
		return pair{model.Mesh{Kind: model.MeshPlane, Size: [3]float64{a, 0, b}}, origin, [2]float64{a, b},
			ceiling(c, model.Light{Shape: model.AreaRectangle, Width: a, Height: b})}
	}
	corner := func(h, w, l float64) pair {
		return pair{model.Mesh{Kind: model.MeshPlane, Size: [3]float64{w, 0, l}}, [3]float64{w / 2, 0, 0}, [2]float64{w, l},
			model.Light{Kind: model.LightArea, Shape: model.AreaRectangle, Intensity: 1, Width: l, Height: h, Position: [3]float64{0, h / 2, 0},
				Target: [3]float64{1, h / 2, 0}, Up: [3]float64{0, 1, 0}}}
	}
	disks := func(r1, r2, h float64) pair {
		return pair{model.Mesh{Kind: model.MeshDisk, Size: [3]float64{r1}, Segments: 1024}, origin, [2]float64{2 * r1, 2 * r1},
			ceiling(h, model.Light{Shape: model.AreaDisk, Radius: r2})}
	}
	tests := []struct {
		name string
		pair pair
		want float64
	}{
		{"CF-C11-1-1-1", opposed(1, 1, 1), 0.19982489569838738}, {"CF-C11-0.5-0.5-1", opposed(0.5, 0.5, 1), 0.06858958881855244},
		{"CF-C11-2-2-1", opposed(2, 2, 1), 0.41525328357714675}, {"CF-C11-1-1.5-0.5", opposed(1, 1.5, 0.5), 0.4755764365329529},
		{"CF-C14-1-1-1", corner(1, 1, 1), 0.20004377607540316}, {"CF-C14-2-1-1", corner(2, 1, 1), 0.23285260279536188},
		{"CF-C14-1-2-1", corner(1, 2, 1), 0.11642630139768094}, {"CF-C14-0.5-1-2", corner(0.5, 1, 2), 0.16685539497330043},
		{"CF-C41-0.1-0.2-0.5", disks(0.1, 0.2, 0.5), 0.1339312526814945}, {"CF-C41-2-1-2", disks(2, 1, 2), 0.11721778146268129},
		{"CF-C41-1-0.5-4", disks(1, 0.5, 4), 0.014504950352738284},
	}
	for _, tt := range tests {
		var s studio
		white := s.thing(tt.pair.receiver, spotless)
		white.At = tt.pair.at
		eye := [3]float64{tt.pair.at[0], 0.01, 0}
		const pixels = 48
		set := square(pixels, 16)
		set.Height = int(math.Round(pixels * tt.pair.size[1] / tt.pair.size[0]))
		img := s.shoot(t, ortho(eye, tt.pair.at, zUp, tt.pair.size[1]), set, s.lights(tt.pair.lamp), white)
		got := mean(img.Plane("R")) / mean(img.Plane("A"))
		if off(got, tt.want) > 0.005 { // the reference's tolerance
			t.Errorf("reference %s: got %v, want %v", tt.name, got, tt.want)
		}
	}
}

// TestPenumbraNoise measures the grain of a penumbra at 64 shadow rays a pixel against Lambert's formula for the part of the lamp that each
// point sees: behind an edge halfway to the lamp, what lies beyond the point's mirror image.
func TestPenumbraNoise(t *testing.T) {
	const side = 64
	var s studio
	white := s.thing(floor, matt(0.8))
	card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
	card.At, card.Hidden = [3]float64{-25, 1, 0}, true
	square1 := ceiling(2, model.Light{Shape: model.AreaRectangle, Width: 1, Height: 1})
	square1.Intensity = math.Pi / 0.2308 // the open floor shows 0.8, an 80 % white
	img := s.shoot(t, ortho(fromTop, origin, zUp, 1), square(side, 64), s.lights(square1), white, card)
	truth := func(x, z float64) float64 {
		sum := 0.0
		for _, d := range []float64{-0.25, 0.25} { // the mean over the pixel
			at := x + d/side
			seen := min(0.5+at, 1) // of the lamp's width
			if seen <= 0 {
				continue
			}
			part := lamp.New(lamp.Spec{Kind: lamp.Rectangle, Position: geom.Vec3d{X: 0.5 - seen/2, Y: 2}, Direction: geom.Vec3d{Y: -1}, Up: geom.Vec3d{Z: 1}, Width: seen, Height: 1})
			sum += part.Irradiance(geom.Vec3d{X: at, Z: z}, geom.Vec3d{Y: 1})
		}
		return 0.8 / 0.2308 * sum / 2
	}
	sum, bias, pixels := 0.0, 0.0, 0.0
	for i, v := range img.Plane("G") {
		x, z := (float64(i%side)+0.5)/side-0.5, (float64(i/side)+0.5)/side-0.5
		// Where the floor is neither all lit nor near full shadow; below L* 8 the cube root no longer holds.
		if want := truth(x, z); lstar(float32(want)) > 10 && i%side > 2 && i%side < side-3 {
			d := lstar(v) - lstar(float32(want))
			sum, bias, pixels = sum+d*d, bias+d, pixels+1
		}
	}
	if pixels < 3000 {
		t.Fatalf("only %v pixels in the penumbra", pixels)
	}
	rms := math.Sqrt(sum / pixels)
	t.Logf("64 rays: %.3f L* RMS, %.3f in the mean, over %v pixels", rms, bias/pixels, pixels)
	if rms >= 1 {
		t.Errorf("64 rays a pixel leave %.2f L* RMS, want < 1.0 (trade practice: stratified 64 is about 1)", rms)
	}
	if math.Abs(bias/pixels) > 0.08 {
		t.Errorf("the penumbra is off by %.3f L* in the mean", bias/pixels)
	}
}

// TestPenumbraHasNoBands renders a broad penumbra and checks that it darkens without plateaus: row means fall steadily.
func TestPenumbraHasNoBands(t *testing.T) {
	var s studio
	white := s.thing(floor, matt(0.8))
	card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{50, 0, 100}}, matt(0))
	card.At, card.Hidden = [3]float64{-25, 1, 0}, true
	lamp := ceiling(2, model.Light{Shape: model.AreaRectangle, Width: 1, Height: 1})
	img := s.shoot(t, ortho(fromTop, origin, zUp, 0.9), square(96, 64), s.lights(lamp), white, card)
	g := img.Plane("G")
	last, level := -1.0, 0
	for x := range 96 {
		sum := 0.0
		for y := range 96 {
			sum += float64(g[y*96+x])
		}
		m := sum / 96
		// A step of 1 in 96 of the penumbra is 1 % of full light; two standard errors of a column's mean are a tenth of that.
		if m <= last+1e-5 {
			level++
		} else {
			level = 0
		}
		if level > 2 {
			t.Fatalf("column %d: the penumbra stands still at %v", x, m)
		}
		last = max(last, m)
	}
}

// TestClosedBox checks, over six decades of size, that a closed box lit from outside stays black inside and that its outside shows
// no speck of its own shadow.
func TestClosedBox(t *testing.T) {
	for _, scale := range []float64{0.001, 0.03, 1, 30, 1000} {
		t.Run(fmt.Sprint(scale), func(t *testing.T) {
			var s studio
			box := s.thing(model.Mesh{Kind: model.MeshBox, Size: [3]float64{1, 1, 1}}, matt(0.8))
			box.Scale, box.Turn = [3]float64{scale, scale, scale}, [3]float64{10, 20, 30}
			lights := s.lights(
				model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{-1, -2, -1}},
				model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{1, 1, -2}},
				model.Light{Kind: model.LightArea, Shape: model.AreaRectangle, Intensity: 10, Width: scale, Height: scale, Position: [3]float64{2 * scale, 3 * scale, scale}})
			cam := lens([3]float64{0, 0, 0.1 * scale}, [3]float64{0.1 * scale, 0.05 * scale, 0}, 18)
			inside := s.shoot(t, cam, square(32, 8), lights, box)
			for i, v := range inside.Plane("G") {
				if v != 0 {
					t.Fatalf("light leaks in at pixel %d, %d: %v", i%32, i/32, v)
				}
			}
			// A face turned to the sun has no shadow on it: every whole pixel of it has the same value.
			sun := s.lights(model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{0, -1, 0}})
			box.Turn = [3]float64{}
			above := s.shoot(t, ortho([3]float64{0, 3 * scale, 0}, origin, zUp, 0.9*scale), square(32, 8), sun, box)
			for i, v := range above.Plane("G") {
				if math.Abs(float64(v)-0.8) > 1e-5 {
					t.Fatalf("a speck on the lit face at pixel %d, %d: %v", i%32, i/32, v)
				}
			}
		})
	}
}

// TestShadowTerminator compares a coarse smooth ball with a fine one: where the light grazes it, its facets must not show.
func TestShadowTerminator(t *testing.T) {
	shot := func(segments int) []float32 {
		var s studio
		m := model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: segments}
		sun := model.Light{Kind: model.LightDirectional, Intensity: math.Pi, Direction: [3]float64{-1, -0.3, -0.2}}
		img := s.shoot(t, ortho([3]float64{0, 0, 5}, origin, [3]float64{0, 1, 0}, 1.2), square(64, 16), s.lights(sun), s.thing(m, spotless))
		return img.Plane("G")
	}
	coarse, fine := shot(32), shot(256)
	worst := 0.0
	for i := range coarse {
		worst = max(worst, math.Abs(float64(coarse[i]-fine[i])))
	}
	// A ball of 32 segments turns its facets by 11°; without the remedy, pixels in the facets' own shadow miss up to sin 11° = 0.19.
	if worst > 0.06 {
		t.Errorf("the coarse ball differs by up to %.3f from the fine one", worst)
	}
}

// TestDim checks that lights of no intensity and surfaces of no reflectance give exactly nothing.
func TestDim(t *testing.T) {
	var s studio
	lamp := model.Light{Kind: model.LightPoint, Position: [3]float64{0, 1, 0}, Color: tint.Grey(1)}
	img := s.shoot(t, ortho(fromTop, origin, zUp, 1), square(4, 4), s.lights(lamp), s.thing(floor, spotless))
	if m := mean(img.Plane("R")); m != 0 {
		t.Errorf("a light of 0 cd gives %v", m)
	}
	if m := mean(img.Plane("A")); m != 1 {
		t.Errorf("coverage of a floor is %v, want 1", m)
	}
}

// TestSlivers lights a bent wall made of strips 3 m long and 7 mm wide, as a seamless ground is: it must show no shadow of its own.
func TestSlivers(t *testing.T) {
	for _, scale := range []float64{0.01, 1, 100} {
		raw := &model.RawMesh{}
		const strips = 24
		for i := range strips + 1 {
			// A quarter turn of 12 cm radius about (0, 0.12, 0), from the floor up the wall behind.
			sin, cos := math.Sincos(math.Pi / 2 * float64(i) / strips)
			for _, x := range []float64{-1.5, 1.5} {
				raw.Positions = append(raw.Positions, [3]float64{x, 0.12 - 0.12*cos, -0.12 * sin})
				raw.Normals = append(raw.Normals, [3]float64{0, cos, sin})
			}
			if k := uint32(2 * i); i < strips {
				raw.Triangles = append(raw.Triangles, [3]uint32{k, k + 1, k + 3}, [3]uint32{k, k + 3, k + 2})
			}
		}
		shot := func(noShadow bool) []float32 {
			var s studio
			bend := s.thing(model.Mesh{Kind: model.MeshRaw, Raw: raw}, matt(0.5))
			bend.Scale = [3]float64{scale, scale, scale}
			lamp := model.Light{Name: "lamp", Kind: model.LightPoint, Intensity: 5 * scale * scale, Position: [3]float64{-0.6 * scale, 0.7 * scale, 0.5 * scale}, NoShadow: noShadow}
			cam := lens([3]float64{0.9 * scale, 0.3 * scale, 0.8 * scale}, [3]float64{0.3 * scale, 0.05 * scale, -0.05 * scale}, 50)
			return s.shoot(t, cam, square(64, 16), s.lights(lamp), bend).Plane("G")
		}
		with, without := shot(false), shot(true)
		for i := range with {
			if with[i] != without[i] {
				t.Fatalf("scale %v: pixel %d, %d has %v, without shadows %v", scale, i%64, i/64, with[i], without[i])
			}
		}
	}
}

// TestConvexFormsShadeNothing lights convex forms, at random places, turns and scales, from random sides: with and without shadows every
// pixel must be the same.
func TestConvexFormsShadeNothing(t *testing.T) {
	const seed = 2
	rng := rand.New(rand.NewPCG(1, seed))
	scatter := func() [3]float64 { return [3]float64{rng.Float64() - 0.5, rng.Float64() - 0.5, rng.Float64() - 0.5} }
	forms := []model.Mesh{
		{Kind: model.MeshPlane, Size: [3]float64{1, 0, 1}}, {Kind: model.MeshBox, Size: [3]float64{1, 1, 1}},
		{Kind: model.MeshSphere, Size: [3]float64{0.5}, Segments: 24}, {Kind: model.MeshCylinder, Size: [3]float64{0.5, 1}, Segments: 24},
	}
	for n := range 120 {
		scale := []float64{0.001, 1, 30, 1000, 10000}[n%5]
		var s studio
		form := s.thing(forms[n/5%4], matt(0.8))
		place, from, sun := scatter(), scatter(), scatter()
		eye := [3]float64{}
		for i := range 3 {
			form.Scale[i] = scale * (0.2 + rng.Float64())
			form.Turn[i] = 360 * rng.Float64()
			form.At[i] = 2 * scale * place[i]
			eye[i] = form.At[i] + 6*scale*from[i]
		}
		shot := func(noShadow bool) []float32 {
			l := model.Light{Name: "sun", Kind: model.LightDirectional, Intensity: 3, Direction: sun, NoShadow: noShadow}
			return s.shoot(t, lens(eye, form.At, 60), square(24, 4), s.lights(l), form).Plane("G")
		}
		with, without := shot(false), shot(true)
		for i := range with {
			if with[i] != without[i] {
				t.Fatalf("case %d of seed %d, scale %v: pixel %d, %d has %v, without shadows %v", n, seed, scale, i%24, i/24, with[i], without[i])
			}
		}
	}
}
