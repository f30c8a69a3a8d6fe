package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"

	"lampbook/engine/model"
)

// ManifestVersion says how run.json is laid out; it goes up when a reader of the old form would misread the new.
const ManifestVersion = 1

// WriteManifest writes run.json: UTF-8 JSON, indented by two blanks, fields in a fixed order. What a clock said stands apart in the
// last field, "times": without it the same run gives the same bytes.
func WriteManifest(w io.Writer, r Run) error {
	if err := r.check(); err != nil {
		return fmt.Errorf("run.json: %w", err)
	}
	m := manifest{
		Manifest: ManifestVersion, Engine: r.Engine, PictureVersion: model.PictureVersion, Scene: r.Scene, PlanHash: r.PlanHash, Stamp: r.Stamp,
		Params: []paramForm{}, Warnings: []warningForm{}, Sheets: []sheetForm{}, Frames: []frameForm{}, EarlierFiles: r.EarlierFiles,
		Totals: totalsForm{Frames: len(r.Frames), Done: r.count(Done), Kept: r.count(Kept), Failed: r.count(Failed), Waiting: r.count(Waiting)},
		Times:  timesForm{Started: r.Times.Started, WallSeconds: r.Times.Wall, CPUSeconds: r.Times.CPU},
	}
	for _, p := range r.Params {
		m.Params = append(m.Params, paramForm{p.Name, p.Value, p.Set})
	}
	for _, x := range r.Warnings {
		m.Warnings = append(m.Warnings, warningForm{x.Pos.File, x.Pos.Line, x.Text})
	}
	for _, s := range r.Sheets {
		m.Sheets = append(m.Sheets, sheetForm{s.Name, orNone(s.Files), s.Reason})
	}
	for i := range r.Frames {
		f := &r.Frames[i]
		m.Frames = append(m.Frames, frameForm{
			Name: f.Name, State: f.State, Reason: f.Reason, Tags: f.Tags, Hash: f.Hash, Files: orNone(f.Files),
			Settings: settingsOf(&f.Settings), CameraRays: f.CameraRays, ShadowRays: f.ShadowRays,
			Samples: f.Samples, Noise: f.Noise,
		})
		m.Totals.CameraRays += f.CameraRays
		m.Totals.ShadowRays += f.ShadowRays
		m.Times.FrameSeconds = append(m.Times.FrameSeconds, namedNumber{f.Name, f.Seconds})
	}
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(m)
}

type manifest struct {
	Manifest       int           `json:"manifest"`
	Engine         string        `json:"engine"`
	PictureVersion int           `json:"picture_version"`
	Scene          string        `json:"scene"`
	PlanHash       string        `json:"plan_hash"`
	Stamp          string        `json:"stamp,omitempty"`
	Params         []paramForm   `json:"params"`
	Warnings       []warningForm `json:"warnings"`
	Totals         totalsForm    `json:"totals"`
	Sheets         []sheetForm   `json:"sheets"`
	Frames         []frameForm   `json:"frames"`
	EarlierFiles   []string      `json:"earlier_files,omitempty"`
	Times          timesForm     `json:"times"`
}

type paramForm struct {
	Name  string `json:"name"`
	Value string `json:"value"`
	Set   bool   `json:"set"`
}

type warningForm struct {
	File string `json:"file"`
	Line int    `json:"line"`
	Text string `json:"text"`
}

type totalsForm struct {
	Frames     int   `json:"frames"`
	Done       int   `json:"done"`
	Kept       int   `json:"kept"`
	Failed     int   `json:"failed"`
	Waiting    int   `json:"waiting"`
	CameraRays int64 `json:"camera_rays"`
	ShadowRays int64 `json:"shadow_rays"`
}

type sheetForm struct {
	Name   string   `json:"name"`
	Files  []string `json:"files"`
	Reason string   `json:"reason,omitempty"`
}

type frameForm struct {
	Name       string        `json:"name"`
	State      State         `json:"state"`
	Reason     string        `json:"reason,omitempty"`
	Tags       TagObject     `json:"tags"`
	Hash       string        `json:"hash"`
	Files      []string      `json:"files"`
	Settings   *settingsForm `json:"settings"` // null where the frame has none, because it failed in the scene
	CameraRays int64         `json:"camera_rays"`
	ShadowRays int64         `json:"shadow_rays"`
	Samples    float64       `json:"samples"`         // that a pixel took, in the mean
	Noise      float64       `json:"noise,omitempty"` // as estimated, L*; where the settings ask for it
}

// settingsForm is a frame's settings in the words of scenes. A field whose value does not count is left out.
type settingsForm struct {
	Size         [2]int      `json:"size"`
	Samples      int         `json:"samples"`
	Noise        float64     `json:"noise,omitempty"` // target, L*
	LightSamples int         `json:"light_samples"`
	Seed         uint32      `json:"seed"`
	Filter       string      `json:"filter"`
	Exposure     float64     `json:"exposure"`
	Tone         string      `json:"tone"`
	White        *float64    `json:"white,omitempty"`
	Background   *[3]float32 `json:"background"` // linear display light; null means transparent
	Passes       []string    `json:"passes"`
	Formats      []string    `json:"formats"`
}

func settingsOf(s *model.Settings) *settingsForm {
	if s.Width == 0 {
		return nil
	}
	f := &settingsForm{
		Size: [2]int{s.Width, s.Height}, Samples: s.Samples, Noise: s.Noise, LightSamples: s.LightSamples, Seed: s.Seed, Filter: filterWord(s.Filter),
		Exposure: Stops(s.Exposure), Tone: toneWord(s.Tone), Passes: passNames(s.Passes), Formats: []string{},
	}
	if s.Tone == model.ToneReinhard {
		f.White = &s.White
	}
	if !s.Background.Transparent {
		f.Background = &[3]float32{s.Background.Color.R, s.Background.Color.G, s.Background.Color.B}
	}
	for _, x := range s.Formats {
		f.Formats = append(f.Formats, formatWord(x))
	}
	return f
}

type timesForm struct {
	Started      string       `json:"started,omitempty"`
	WallSeconds  float64      `json:"wall_seconds"`
	CPUSeconds   float64      `json:"cpu_seconds"`
	FrameSeconds numberObject `json:"frame_seconds"`
}

// TagObject is a frame's tags as a JSON object that keeps their order and their types.
type TagObject []model.Tag

// MarshalJSON writes {"gloss":16,"glaze":"slate"}.
func (t TagObject) MarshalJSON() ([]byte, error) {
	return object(len(t), func(i int) (string, any) {
		switch v := t[i].Value; v.Kind {
		case model.NumberValue:
			return t[i].Key, v.Number
		case model.TruthValue:
			return t[i].Key, v.Truth
		default:
			return t[i].Key, v.Text
		}
	})
}

// numberObject is a JSON object that keeps the order of its entries.
type numberObject []namedNumber

type namedNumber struct {
	name  string
	value float64
}

func (n numberObject) MarshalJSON() ([]byte, error) {
	return object(len(n), func(i int) (string, any) { return n[i].name, n[i].value })
}

// object writes n entries in order.
func object(n int, entry func(i int) (key string, value any)) ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	b.WriteByte('{')
	for i := range n {
		if i > 0 {
			b.WriteByte(',')
		}
		key, value := entry(i)
		if err := e.Encode(key); err != nil {
			return nil, err
		}
		b.WriteByte(':')
		if err := e.Encode(value); err != nil {
			return nil, err
		}
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

// orNone makes a list that JSON writes as [] where there is none.
func orNone(list []string) []string {
	if list == nil {
		return []string{}
	}
	return list
}
