package render

import "lampbook/engine/model"

// Cast names a group of frames of one plan, which all have the same CastKey.
type Cast struct {
	Plan   *model.Plan
	Frames []int // indices into Plan.Frames, at least one
}

// castForm is what the rays of a frame depend on. Lights are not in it, but for those that the camera sees: a cast holds
// every light shape of its group.
type castForm struct {
	Camera        model.Camera
	Things        []castThing
	Width, Height int
	Samples       int
	LightSamples  int
	Seed          uint32
	Filter        model.Filter
	Seen          []model.Light
}

type castThing struct {
	Mesh             model.Hash
	Opacity          []float64
	At, Turn, Scale  [3]float64
	Hidden, NoShadow bool
}

// CastKey returns the key of frame i: frames with equal keys may be rendered in one Cast. It does not look at the lights' places, so that
// frames that differ in a light alone share their camera rays. Frames with a Failure have no key of use.
func CastKey(h *model.Hasher, p *model.Plan, i int) model.Hash {
	f := &p.Frames[i]
	s := f.Settings
	form := castForm{
		Camera: f.Camera, Width: s.Width, Height: s.Height, Samples: s.Samples, LightSamples: s.LightSamples, Seed: s.Seed, Filter: s.Filter,
	}
	for _, t := range f.Things {
		ct := castThing{Mesh: h.Meshes[t.Mesh], At: t.At, Turn: t.Turn, Scale: t.Scale, Hidden: t.Hidden, NoShadow: t.NoShadow}
		for _, m := range t.Materials {
			ct.Opacity = append(ct.Opacity, p.Materials[m].Opacity)
		}
		form.Things = append(form.Things, ct)
	}
	for _, l := range f.Lights {
		if light := p.Lights[l]; light.Kind == model.LightArea && light.Visible {
			form.Seen = append(form.Seen, shapeOf(light))
		}
	}
	return model.Sum(form)
}

// shapeOf is a light without what belongs to looks.
func shapeOf(l model.Light) model.Light {
	bare := l
	bare.Color, bare.Intensity, bare.Components = model.Light{}.Color, 0, model.Components{}
	return bare
}

// Stats counts the rays of a cast.
type Stats struct {
	CameraRays int64 // camera rays
	ShadowRays int64 // shadow rays; in an estimate the most that there can be, as rays that miss everything or face away need none
}

// Estimate returns the most rays that the cast takes.
func Estimate(c Cast) Stats {
	f := &c.Plan.Frames[c.Frames[0]]
	camera := int64(f.Settings.Width) * int64(f.Settings.Height) * int64(f.Settings.Samples)
	seen := map[model.Light]bool{}
	perHit := int64(0)
	for _, i := range c.Frames {
		for _, id := range c.Plan.Frames[i].Lights {
			l := c.Plan.Lights[id]
			if l.Kind == model.LightAmbient {
				continue
			}
			shape := shapeOf(l)
			if seen[shape] {
				continue
			}
			seen[shape] = true
			if l.Kind == model.LightArea {
				perHit += int64(f.Settings.LightSamples)
			} else {
				perHit++
			}
		}
	}
	return Stats{CameraRays: camera, ShadowRays: camera * perHit}
}
