package sheet

import (
	"fmt"
	"strings"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// fourBowls is four frames under one tag, all alike.
func fourBowls() *model.Plan {
	p := &model.Plan{
		Materials: []model.Material{{Shininess: 4, Opacity: 1}, {Shininess: 16, Opacity: 1}, {Shininess: 4, Opacity: 1}},
		Lights:    []model.Light{{Name: "key", Intensity: 100}, {Name: "key", Intensity: 200}, {Name: "key", Intensity: 100}},
		Meshes:    []model.Mesh{{}, {}},
	}
	for i := range 4 {
		f := frame(fmt.Sprint("f", i), "gloss", i)
		f.Lights = []model.LightID{0}
		f.Things = []model.Placement{{Materials: []model.MaterialID{0}}}
		p.Frames = append(p.Frames, f)
	}
	return p
}

func TestFairness(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(p *model.Plan)
		keys   []string
		unfair string // frames, in order
		line   string
	}{
		{"alike", func(*model.Plan) {}, nil, "", "Settings alike"},
		{"equal by value", func(p *model.Plan) { p.Frames[1].Things[0].Materials[0] = 2; p.Frames[2].Lights[0] = 2 }, nil, "", "Settings alike"},
		{"materials and lights", func(p *model.Plan) { p.Frames[1].Things[0].Materials[0] = 1; p.Frames[2].Lights[0] = 1 }, nil, "",
			"What differs: lights and materials. Settings alike"},
		{"exposures that differ past the fourth digit", func(p *model.Plan) {
			for i := range p.Frames {
				p.Frames[i].Settings.Exposure = 1.23451
			}
			p.Frames[2].Settings.Exposure = 1.23452
		}, nil, "2", "Not alike: exposure 1.23451\u2009stops, marked tiles 1.23452\u2009stops. Same size"},
		{"ground", func(p *model.Plan) { p.Frames[3].Settings.Background.Color = tint.Grey(1) }, nil, "3",
			"Not alike: background #000000, marked tiles #ffffff. Same size"},
		{"a colour under nothing", func(p *model.Plan) {
			for i := range p.Frames {
				p.Frames[i].Settings.Background = model.Background{Transparent: true, Color: tint.Grey(float32(i))}
			}
		}, nil, "", "Settings alike"},
		{"camera and place", func(p *model.Plan) {
			p.Frames[1].Camera.FNumber = 4
			p.Frames[1].Things[0].At[0] = 1
		}, nil, "", "What differs: camera and things. Settings alike"},
		{"one of four", func(p *model.Plan) { p.Frames[2].Settings.Samples = 16 }, nil, "2",
			"Not alike: samples 64, marked tiles 16. Same size, light samples, seed, filter, tone, exposure and background"},
		{"noise", func(p *model.Plan) { p.Frames[1].Settings.Noise = 0.5 }, nil, "1", "Not alike: noise none, marked tiles 0.5\u2009L*"},
		{"one noise", func(p *model.Plan) {
			for i := range p.Frames {
				p.Frames[i].Settings.Noise = 0.5
			}
			p.Frames[3].Settings.Samples = 256
		}, nil, "3", "Not alike: samples 64, marked tiles 256. Same size, noise, light samples, seed, filter, tone, exposure and background"},
		{"the first is the odd one", func(p *model.Plan) { p.Frames[0].Settings.Tone = model.ToneACES }, nil, "0", "Not alike: tone shoulder, marked tiles ACES"},
		{"two and two: the first pair counts as common", func(p *model.Plan) { p.Frames[2].Settings.Seed = 7; p.Frames[3].Settings.Seed = 7 }, nil, "2 3",
			"Not alike: seed 0, marked tiles 7"},
		{"white counts with reinhard only", func(p *model.Plan) { p.Frames[1].Settings.White = 4 }, nil, "", "Settings alike"},
		{"white", func(p *model.Plan) {
			for i := range p.Frames {
				p.Frames[i].Settings.Tone, p.Frames[i].Settings.White = model.ToneReinhard, 4
			}
			p.Frames[3].Settings.White = 2
		}, nil, "3", "Not alike: tone Reinhard to 4, marked tiles Reinhard to 2"},
		{"announced by a tag", func(p *model.Plan) {
			for i := range p.Frames {
				p.Frames[i].Settings.Exposure = float64(i)
				p.Frames[i].Tags = tags("exposure_stops", i)
			}
		}, []string{"exposure_stops"}, "", "Same size, samples, light samples, seed, filter, tone and background"},
		{"a tag with another name does not announce it", func(p *model.Plan) { p.Frames[3].Settings.Exposure = -1 }, nil, "3",
			"Not alike: exposure 0\u2009stops, marked tiles \u22121\u2009stops"},
		{"size", func(p *model.Plan) { p.Frames[3].Settings.Width = 96 }, nil, "3", "Not alike: size 48\u2009×\u200936, marked tiles 96\u2009×\u200936"},
		{"many values", func(p *model.Plan) {
			p.Frames = append(p.Frames, frame("f4", "gloss", 4), frame("f5", "gloss", 5))
			for i := range p.Frames {
				p.Frames[i].Things, p.Frames[i].Lights = nil, nil
				if i > 1 {
					p.Frames[i].Settings.LightSamples = i
				}
			}
		}, nil, "2 3 4 5", "Not alike: light samples 16, marked tiles 2, 3, 4 and others"},
		{"a failed frame is not judged", func(p *model.Plan) {
			p.Frames[1] = model.Frame{Name: "bad", Failure: "no mesh", Tags: tags("gloss", 9)}
		}, nil, "", "Settings alike"},
	} {
		p := fourBowls()
		c.change(p)
		keys := c.keys
		if keys == nil {
			keys = []string{"gloss"}
		}
		pv, err := newPivot(p, &model.Sheet{Columns: keys})
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		j := judge(p, pv)
		var unfair []string
		for i := range p.Frames {
			if j.unfair[i] {
				unfair = append(unfair, fmt.Sprint(i))
			}
		}
		if got := strings.Join(unfair, " "); got != c.unfair {
			t.Errorf("%s: unfair frames %q, want %q", c.name, got, c.unfair)
		}
		if got := j.line(); !strings.HasPrefix(got, c.line) {
			t.Errorf("%s: got %q, want it to begin with %q", c.name, got, c.line)
		}
	}
}
