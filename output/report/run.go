package report

import (
	"fmt"
	"math"

	"lampbook/engine/model"
)

// Run is what a run did. Frames stand in the plan's order.
type Run struct {
	Engine   string // the program's version
	Scene    string // as given on the command line, slash-separated
	PlanHash string
	Stamp    string // a date or a build, as the user gave it; may be empty
	Params   []model.Param
	Warnings []model.Warning
	Frames   []FrameRecord
	Sheets   []SheetRecord
	Times    Times

	EarlierFiles []string // files of earlier runs that are still there and that no frame or sheet lists; slash-separated, relative to the run's folder
}

// FrameRecord is what became of a frame.
type FrameRecord struct {
	Name       string
	Tags       []model.Tag
	Hash       string // of the frame's description
	State      State
	Reason     string         // why it failed; otherwise empty
	Files      []string       // written for it, slash-separated, relative to the run's folder
	Settings   model.Settings // the zero value where the scene gave none
	CameraRays int64          // cast for it, or its share of a cast
	ShadowRays int64
	Samples    float64 // camera rays that a pixel took, in the mean; 0 where there is no picture
	Noise      float64 // standard error, L*, as estimated; 0 where the settings do not ask for it
	Seconds    float64 // of work; goes to the manifest's times
}

// SheetRecord is a contact sheet and its pages.
type SheetRecord struct {
	Name   string
	Files  []string
	Reason string // why it was not laid; otherwise empty
}

// State is how a frame ended.
type State string

// The states. A run that was stopped leaves frames waiting, which the same command takes up again.
const (
	Done    State = "done"
	Kept    State = "kept" // taken as an earlier run left it
	Failed  State = "failed"
	Waiting State = "waiting"
)

// Times are what a clock said: the one part of a run that is not the same each time. Seconds.
type Times struct {
	Started string  // when, as the caller writes it; may be empty
	Wall    float64 // from begin to end
	CPU     float64 // of all threads
}

// count returns how many frames ended in a state.
func (r *Run) count(s State) int {
	n := 0
	for i := range r.Frames {
		if r.Frames[i].State == s {
			n++
		}
	}
	return n
}

// check reports what JSON could not hold or a reader could not tell.
func (r *Run) check() error {
	seen := map[string]bool{}
	for i := range r.Frames {
		f := &r.Frames[i]
		switch {
		case f.State != Done && f.State != Kept && f.State != Failed && f.State != Waiting:
			return fmt.Errorf("frame %q: state %q is not known", f.Name, f.State)
		case seen[f.Name]:
			return fmt.Errorf("frame %q is there twice", f.Name)
		case !finite(f.Samples) || !finite(f.Noise) || !finite(f.Settings.Noise):
			return fmt.Errorf("frame %q: samples and noise must be finite numbers", f.Name)
		case !finite(f.Seconds) || !finite(f.Settings.Exposure) || !finite(f.Settings.White):
			return fmt.Errorf("frame %q: seconds, exposure and white must be finite numbers", f.Name)
		}
		seen[f.Name] = true
		tags := map[string]bool{}
		for _, t := range f.Tags {
			if t.Value.Kind == model.NumberValue && !finite(t.Value.Number) {
				return fmt.Errorf("frame %q: tag %s must be a finite number, got %v", f.Name, t.Key, t.Value.Number)
			}
			if tags[t.Key] {
				return fmt.Errorf("frame %q: tag %s is there twice", f.Name, t.Key)
			}
			tags[t.Key] = true
		}
	}
	if !finite(r.Times.Wall) || !finite(r.Times.CPU) {
		return fmt.Errorf("times must be finite numbers of seconds, got %v and %v", r.Times.Wall, r.Times.CPU)
	}
	return nil
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// word names the entry of an enumeration as scenes write it.
func word[T ~uint8](v T, words ...string) string {
	if int(v) < len(words) {
		return words[v]
	}
	return fmt.Sprint(v)
}

func filterWord(f model.Filter) string { return word(f, "blackman_harris", "box") }
func toneWord(t model.Tone) string     { return word(t, "shoulder", "neutral", "clip", "reinhard", "aces") }
func formatWord(f model.Format) string { return word(f, "png", "png16", "exr", "exr_half") }
func passWord(p model.Pass) string {
	return word(p, "diffuse", "specular", "ambient", "emission", "depth", "normal", "samples", "noise")
}
