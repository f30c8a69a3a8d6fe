package render

import (
	"context"
	"errors"
	"slices"
	"strings"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
)

// batch is a plan whose frames differ in materials, light colours, light places, exposure and tone, but not in what the camera sees.
func batch(s *studio) []int {
	ground, form := s.thing(floor, matt(0.4)), s.thing(ball, gloss)
	ground.At = [3]float64{0, -1, 0}
	soft := model.Light{Name: "soft", Kind: model.LightArea, Shape: model.AreaRectangle, Width: 1, Height: 2, Intensity: 20, Position: [3]float64{-2, 3, 1}}
	room := model.Light{Name: "room", Kind: model.LightAmbient, Intensity: 0.3}
	moved, warm := soft, soft
	moved.Position = [3]float64{2, 3, 1}
	warm.Color = tint.RGB{R: 1, G: 0.7, B: 0.4}
	own := keyLamp
	own.Components = model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(0.5), Ambient: tint.Grey(0.1), Emission: tint.Grey(0.5)}
	set := square(40, 16)
	set.Filter = model.BlackmanHarris
	cam := lens([3]float64{0, 2, 6}, origin, 50)
	brighter := set
	brighter.Exposure, brighter.Tone = 1.5, model.ToneReinhard

	var frames []int
	for i, ls := range [][]model.Light{{soft, room}, {moved, keyLamp}, {warm}, {own, soft}, {room}} {
		look := form
		paint := gloss
		paint.Shininess = float64(10 * i)
		paint.Diffuse = tint.RGB{R: 0.1 * float32(i), G: 0.3, B: 0.2}
		paint.Emission = tint.Grey(0.05)
		look.Materials = s.thing(ball, paint).Materials
		use := set
		if i == 2 {
			use = brighter
		}
		frames = append(frames, s.frame(cam, use, s.lights(ls...), ground, look))
	}
	return frames
}

// same reports the first difference between two pictures, to the bit.
func same(a, b *pixmap.Image) string {
	for p := range a.Planes {
		for i := range a.Planes[p].Pix {
			if a.Planes[p].Pix[i] != b.Planes[p].Pix[i] {
				return a.Planes[p].Name
			}
		}
	}
	return ""
}

func TestSamePixelsAloneAndShared(t *testing.T) {
	var s studio
	frames := batch(&s)
	shared := s.render(t, Options{}, frames...)
	for k, i := range frames {
		alone := s.render(t, Options{}, i)[0]
		if p := same(shared[k].Linear, alone.Linear); p != "" {
			t.Errorf("frame %d: plane %s differs when cast alone", i, p)
		}
		if p := same(shared[k].Display, alone.Display); p != "" {
			t.Errorf("frame %d: display plane %s differs when cast alone", i, p)
		}
	}
	if same(shared[0].Linear, shared[1].Linear) == "" {
		t.Error("a moved light changes nothing")
	}
	back := slices.Clone(frames)
	slices.Reverse(back)
	reversed := s.render(t, Options{}, back...)
	if p := same(shared[0].Linear, reversed[len(reversed)-1].Linear); p != "" {
		t.Errorf("plane %s depends on the order of looks", p)
	}
}

func TestSamePixelsOnAnyThreads(t *testing.T) {
	var s studio
	frames := batch(&s)
	one := s.render(t, Options{Threads: 1}, frames...)
	for _, n := range []int{2, 3, 16} {
		many := s.render(t, Options{Threads: n}, frames...)
		for k := range one {
			if p := same(one[k].Linear, many[k].Linear); p != "" {
				t.Errorf("frame %d: plane %s differs on %d threads", k, p, n)
			}
		}
		if one[0].Stats != many[0].Stats {
			t.Errorf("%d threads count %v rays, one %v", n, many[0].Stats, one[0].Stats)
		}
	}
}

func TestPassesDoNotChangeThePicture(t *testing.T) {
	var s studio
	frames := batch(&s)
	plain := s.render(t, Options{}, frames[0])[0]
	s.plan.Frames[frames[0]].Settings.Passes = []model.Pass{model.PassNormal, model.PassDiffuse, model.PassDepth}
	full := s.render(t, Options{}, frames[0])[0]
	if p := same(plain.Linear, full.Linear); p != "" {
		t.Errorf("plane %s differs when passes are asked for", p)
	}
}

func TestCastKeys(t *testing.T) {
	var s studio
	frames := batch(&s)
	h := model.NewHasher(&s.plan)
	first := CastKey(h, &s.plan, frames[0])
	for _, i := range frames[1:] {
		if CastKey(h, &s.plan, i) != first {
			t.Errorf("frame %d does not share the cast", i)
		}
	}
	change := map[string]func(f *model.Frame){
		"camera":  func(f *model.Frame) { f.Camera.FocalMM++ },
		"place":   func(f *model.Frame) { f.Things[1].At[0] += 0.1 },
		"hidden":  func(f *model.Frame) { f.Things[1].Hidden = true },
		"size":    func(f *model.Frame) { f.Settings.Width++ },
		"samples": func(f *model.Frame) { f.Settings.Samples++ },
		"seed":    func(f *model.Frame) { f.Settings.Seed++ },
		"filter":  func(f *model.Frame) { f.Settings.Filter = model.BoxFilter },
	}
	for name, do := range change {
		f := s.plan.Frames[frames[0]]
		f.Things = slices.Clone(f.Things)
		do(&f)
		s.plan.Frames = append(s.plan.Frames, f)
		if CastKey(h, &s.plan, len(s.plan.Frames)-1) == first {
			t.Errorf("a change of %s shares the cast", name)
		}
	}
}

func TestSharedRaysAreCastOnce(t *testing.T) {
	var s studio
	frames := batch(&s)
	shared := s.render(t, Options{}, frames...)[0].Stats
	alone := s.render(t, Options{}, frames[0])[0].Stats
	if shared.CameraRays != alone.CameraRays {
		t.Errorf("five looks cast %d camera rays, one %d", shared.CameraRays, alone.CameraRays)
	}
	if most := Estimate(Cast{Plan: &s.plan, Frames: frames}); shared.CameraRays != most.CameraRays || shared.ShadowRays > most.ShadowRays || shared.ShadowRays == 0 {
		t.Errorf("cast %v, the estimate is at most %v", shared, most)
	}
}

func TestFailures(t *testing.T) {
	var s studio
	frames := batch(&s)
	s.plan.Lights[0].Intensity = 3e38
	s.plan.Frames[frames[0]].Settings.Exposure = 90
	results, err := s.engine(t).Render(context.Background(), Cast{Plan: &s.plan, Frames: frames}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !errors.Is(results[0].Err, ErrNotFinite) || results[0].Linear != nil {
		t.Errorf("an overflowing picture gives %v", results[0].Err)
	}
	if results[1].Err != nil || results[1].Linear == nil {
		t.Errorf("it takes its neighbour along: %v", results[1].Err)
	}

	var bad studio
	thing := bad.thing(model.Mesh{Kind: model.MeshSphere, Size: [3]float64{-1}}, gloss)
	i := bad.frame(lens([3]float64{0, 0, 5}, origin, 50), square(8, 1), nil, thing)
	results, err = NewEngine(mesh.NewLibrary(nil)).Render(context.Background(), Cast{Plan: &bad.plan, Frames: []int{i}}, Options{})
	if err != nil || results[0].Err == nil || !strings.Contains(results[0].Err.Error(), "radius") {
		t.Errorf("a ball of radius -1 gives %v, %v", err, results)
	}

	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var good studio
	if _, err := good.engine(t).Render(ctx, Cast{Plan: &s.plan, Frames: frames[1:]}, Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled cast gives %v", err)
	}
}

// TestSeeThrough compares a half opaque card with the mean of a full one and none.
func TestSeeThrough(t *testing.T) {
	shot := func(opacity float64, there bool) *pixmap.Image {
		var s studio
		paint := model.Material{Diffuse: tint.RGB{R: 0.7, G: 0.1, B: 0.1}, Opacity: opacity}
		card := s.thing(model.Mesh{Kind: model.MeshPlane, Size: [3]float64{1, 0, 1}}, paint)
		card.At = [3]float64{0, 0.5, 0}
		things := []model.Placement{s.thing(floor, matt(0.6))}
		if there {
			things = append(things, card)
		}
		sun := model.Light{Kind: model.LightDirectional, Intensity: 3, Direction: [3]float64{-4, -1, 0}} // the card's shadow falls out of the picture
		return s.shoot(t, ortho(fromTop, origin, zUp, 3), square(48, 64), s.lights(sun), things...)
	}
	none, half, full := shot(1, false), shot(0.5, true), shot(1, true)
	for c := range 3 {
		got, want := mean(half.Planes[c].Pix), (mean(none.Planes[c].Pix)+mean(full.Planes[c].Pix))/2
		if off(got, want) > 2e-3 {
			t.Errorf("channel %d: half opaque gives %v in the mean, half way between none and full is %v", c, got, want)
		}
	}
}
