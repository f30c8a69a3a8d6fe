package render

import (
	"context"
	"math"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
)

// studio builds plans for tests, value by value, without the scene language.
type studio struct {
	plan model.Plan
}

func (s *studio) mesh(m model.Mesh) model.MeshID {
	s.plan.Meshes = append(s.plan.Meshes, m)
	return model.MeshID(len(s.plan.Meshes) - 1)
}

// thing places a mesh in a material, where it was made.
func (s *studio) thing(m model.Mesh, mat model.Material) model.Placement {
	mat.Opacity = max(mat.Opacity, 0)
	if mat.Opacity == 0 {
		mat.Opacity = 1
	}
	s.plan.Materials = append(s.plan.Materials, mat)
	return model.Placement{
		Mesh: s.mesh(m), Materials: []model.MaterialID{model.MaterialID(len(s.plan.Materials) - 1)}, Scale: [3]float64{1, 1, 1},
	}
}

// light adds lights, white and with the default components unless they say otherwise.
func (s *studio) lights(ls ...model.Light) []model.LightID {
	var ids []model.LightID
	for _, l := range ls {
		if l.Name == "" {
			l.Name = "light " + string(rune('a'+len(s.plan.Lights)))
		}
		if l.Color.Black() {
			l.Color = tint.Grey(1)
		}
		if l.Components == (model.Components{}) {
			l.Components = model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1)}
			if l.Kind == model.LightAmbient {
				l.Components.Ambient = tint.Grey(1)
			}
		}
		if l.Up == [3]float64{} {
			l.Up = [3]float64{0.01, 1, 0.02} // along no axis of a test
		}
		s.plan.Lights = append(s.plan.Lights, l)
		ids = append(ids, model.LightID(len(s.plan.Lights)-1))
	}
	return ids
}

// frame adds a frame; the settings' zero values become sensible ones.
func (s *studio) frame(c model.Camera, set model.Settings, lights []model.LightID, things ...model.Placement) int {
	if set.LightSamples == 0 {
		set.LightSamples = 1
	}
	if set.Formats == nil {
		set.Formats = []model.Format{model.FormatPNG}
	}
	set.White = 4
	s.plan.Frames = append(s.plan.Frames, model.Frame{
		Name: "f" + string(rune('0'+len(s.plan.Frames)/10)) + string(rune('0'+len(s.plan.Frames)%10)), Camera: c, Lights: lights, Things: things, Settings: set,
	})
	return len(s.plan.Frames) - 1
}

// engine returns an engine for the studio's plan, which must be valid.
func (s *studio) engine(t testing.TB) *Engine {
	t.Helper()
	if err := s.plan.Validate(); err != nil {
		t.Fatal(err)
	}
	return NewEngine(mesh.NewLibrary(nil))
}

// render renders frames as one cast.
func (s *studio) render(t testing.TB, o Options, frames ...int) []Result {
	t.Helper()
	results, err := s.engine(t).Render(context.Background(), Cast{Plan: &s.plan, Frames: frames}, o)
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range results {
		if r.Err != nil {
			t.Fatal(r.Err)
		}
	}
	return results
}

// shoot renders one frame.
func (s *studio) shoot(t testing.TB, c model.Camera, set model.Settings, lights []model.LightID, things ...model.Placement) *pixmap.Image {
	t.Helper()
	return s.render(t, Options{}, s.frame(c, set, lights, things...))[0].Linear
}

// ortho looks from eye to target and sees height metres.
func ortho(eye, target, up [3]float64, height float64) model.Camera {
	return model.Camera{Position: eye, Target: target, Up: up, Projection: model.Orthographic, Height: height}
}

// lens looks from eye to target through a focal length in millimetres on a sensor 36 mm wide.
func lens(eye, target [3]float64, focal float64) model.Camera {
	return model.Camera{Position: eye, Target: target, Up: [3]float64{0, 1, 0}, FocalMM: focal, SensorMM: 36}
}

// square is a size of n by n pixels with so many samples.
func square(n, samples int) model.Settings {
	return model.Settings{Width: n, Height: n, Samples: samples, Filter: model.BoxFilter}
}

// matt is a surface that only scatters.
func matt(rho float32) model.Material { return model.Material{Diffuse: tint.Grey(rho)} }

// at returns the linear colour of a pixel.
func at(m *pixmap.Image, x, y int) [3]float64 {
	i := y*m.Width + x
	return [3]float64{float64(m.Planes[0].Pix[i]), float64(m.Planes[1].Pix[i]), float64(m.Planes[2].Pix[i])}
}

// mean returns the mean of a plane.
func mean(pix []float32) float64 {
	sum := 0.0
	for _, v := range pix {
		sum += float64(v)
	}
	return sum / float64(len(pix))
}

// off is the relative difference of got from want.
func off(got, want float64) float64 { return math.Abs(got-want) / math.Max(math.Abs(want), 1e-12) }

var (
	floor    = model.Mesh{Kind: model.MeshPlane, Size: [3]float64{20, 0, 20}}
	ball     = model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 160}
	fromTop  = [3]float64{0, 5, 0}
	origin   = [3]float64{}
	zUp      = [3]float64{0, 0, -1}
	spotless = model.Material{Diffuse: tint.Grey(1)}
)
