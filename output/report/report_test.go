package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"flag"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

var update = flag.Bool("update", false, "write the golden files anew")

func number(x float64) model.Value { return model.Value{Kind: model.NumberValue, Number: x} }

// workshop is a run of three frames: one done, one that failed, one that waits.
func workshop() Run {
	settings := model.Settings{Width: 480, Height: 360, Samples: 64, Noise: 0.5, LightSamples: 16, Seed: 7, Exposure: -1.5,
		Background: model.Background{Color: tint.Grey(0.25)}, Passes: []model.Pass{model.PassDiffuse, model.PassDepth, model.PassSamples, model.PassNoise}, Formats: []model.Format{model.FormatPNG, model.FormatEXRHalf}}
	glossy := settings
	glossy.Noise = 0
	glossy.Tone, glossy.White, glossy.Filter, glossy.Background.Transparent = model.ToneReinhard, 4, model.BoxFilter, true
	return Run{
		Engine: "1.0.0", Scene: "scenes/bowls.lua", PlanHash: "3fa0b1c2d9", Stamp: "autumn build",
		Params:   []model.Param{{Name: "count", Value: "3", Set: true, Help: "how many"}},
		Warnings: []model.Warning{{Pos: model.Pos{File: "scenes/bowls.lua", Line: 4}, Text: "the light <key> is never used & could go"}},
		Sheets:   []SheetRecord{{Name: "bowls", Files: []string{"sheets/bowls.png"}}, {Name: "late", Reason: "the run was stopped"}},
		Frames: []FrameRecord{
			{Name: "bowl-16", Tags: []model.Tag{{Key: "gloss", Value: number(16)}, {Key: "glaze", Value: model.Value{Text: "céladon, \"pale\""}}},
				Hash: "ab12", State: Done, Files: []string{"frames/bowl-16.png", "frames/bowl-16.exr"}, Settings: settings, CameraRays: 7_000_000, ShadowRays: 40_000_000, Samples: 40.509259, Noise: 0.4375, Seconds: 1.25},
			{Name: "bowl-bad", Tags: []model.Tag{{Key: "glaze", Value: model.Value{Text: "=1+1"}}, {Key: "state", Value: model.Value{Kind: model.TruthValue, Truth: true}}},
				Hash: "cd34", State: Failed, Reason: "bowl.obj:3: no faces"},
			{Name: "bowl-256", Tags: []model.Tag{{Key: "gloss", Value: number(-0.5)}}, Hash: "ef56", State: Waiting, Settings: glossy},
		},
		Times: Times{Started: "2026-12-01T10:00:00Z", Wall: 2.5, CPU: 4.75},
	}
}

// TestGolden pins the two files as they were read and found right on 2026-12-01; -update writes them anew.
func TestGolden(t *testing.T) {
	for name, write := range map[string]func(*bytes.Buffer) error{
		"run.json":   func(b *bytes.Buffer) error { return WriteManifest(b, workshop()) },
		"frames.csv": func(b *bytes.Buffer) error { return WriteFrames(b, workshop()) },
	} {
		var b bytes.Buffer
		if err := write(&b); err != nil {
			t.Fatal(err)
		}
		path := filepath.Join("testdata", "golden", name)
		if *update {
			if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(b.Bytes(), want) {
			t.Errorf("%s: got\n%s\nwant\n%s", name, b.Bytes(), want)
		}
	}
}

// TestTimesStandApart: with other times, only the manifest's last field differs, and the table not at all.
func TestTimesStandApart(t *testing.T) {
	a, b := workshop(), workshop()
	b.Times = Times{Started: "tomorrow", Wall: 99, CPU: 98}
	b.Frames[0].Seconds = 97
	split := func(r Run) (fixed, times string) {
		var out bytes.Buffer
		if err := WriteManifest(&out, r); err != nil {
			t.Fatal(err)
		}
		fixed, times, found := strings.Cut(out.String(), "\n  \"times\": ")
		if !found {
			t.Fatal("no times")
		}
		return fixed, times
	}
	fixedA, timesA := split(a)
	fixedB, timesB := split(b)
	if fixedA != fixedB {
		t.Error("times stand outside their field")
	}
	if timesA == timesB {
		t.Error("times do not count")
	}
	var ta, tb bytes.Buffer
	if err := errors.Join(WriteFrames(&ta, a), WriteFrames(&tb, b)); err != nil || ta.String() != tb.String() {
		t.Errorf("the table has times: %v", err)
	}
}

// TestManifestReads: a JSON reader finds every frame with its tags, whatever the text.
func TestManifestReads(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := workshop()
		text := rapid.String().Draw(t, "text")
		x := rapid.Float64().Filter(finite).Draw(t, "number")
		r.Frames[1].Reason = text
		r.Frames[1].Tags = []model.Tag{{Key: "z", Value: model.Value{Text: text}}, {Key: "a <b>", Value: number(x)}}
		var b bytes.Buffer
		if err := WriteManifest(&b, r); err != nil {
			t.Fatal(err)
		}
		var got struct {
			Totals struct {
				Frames, Done, Failed, Waiting int
				CameraRays                    int64 `json:"camera_rays"`
			}
			Frames []struct {
				Name, State, Reason string
				Tags                map[string]any
			}
			Times struct {
				FrameSeconds map[string]float64 `json:"frame_seconds"`
			}
		}
		if err := json.Unmarshal(b.Bytes(), &got); err != nil {
			t.Fatal(err)
		}
		f := got.Frames[1]
		if f.Reason != text || f.Tags["z"] != text || f.Tags["a <b>"] != x || f.State != "failed" {
			t.Fatalf("got %+v", f)
		}
		if got.Totals.Frames != 3 || got.Totals.Done != 1 || got.Totals.Failed != 1 || got.Totals.Waiting != 1 || got.Totals.CameraRays != 7_000_000 {
			t.Fatalf("totals %+v", got.Totals)
		}
		if got.Times.FrameSeconds["bowl-16"] != 1.25 {
			t.Fatalf("times %+v", got.Times)
		}
		if i, j := strings.Index(b.String(), `"z":`), strings.Index(b.String(), `"a <b>":`); i < 0 || j < i {
			t.Fatal("tags have lost their order")
		}
	})
}

// TestFramesRead: a CSV reader finds every value in its column, whatever the text; and no cell of text begins like a formula.
func TestFramesRead(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := workshop()
		text := rapid.OneOf(rapid.String(), rapid.StringMatching(`[=+@\t\r-][a-z0-9,"'\n]{0,9}`)).Draw(t, "text")
		r.Frames[1].Tags = []model.Tag{{Key: "note", Value: model.Value{Text: text}}, {Key: "reason", Value: number(-3)}}
		var b bytes.Buffer
		if err := WriteFrames(&b, r); err != nil {
			t.Fatal(err)
		}
		rows, err := csv.NewReader(&b).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		if len(rows) != 4 {
			t.Fatalf("%d rows", len(rows))
		}
		column := func(name string) int {
			i := slices.Index(rows[0], name)
			if i < 0 {
				t.Fatalf("no column %q in %q", name, rows[0])
			}
			return i
		}
		got := rows[2][column("note")]
		// A reader of CSV takes a line's end inside quotes for \n, however it was written (encoding/csv does, RFC 4180 allows it).
		want := strings.ReplaceAll(text, "\r\n", "\n")
		if strings.TrimPrefix(got, "'") != strings.TrimPrefix(want, "'") {
			t.Fatalf("got %q, want %q", got, want)
		}
		if got != "" && strings.ContainsRune("=+-@\t\r", rune(got[0])) {
			t.Fatalf("%q reads as a formula", got)
		}
		if rows[2][column("tag.reason")] != "-3" || rows[2][column("reason")] != "bowl.obj:3: no faces" || rows[1][column("gloss")] != "16" || rows[2][column("gloss")] != "" {
			t.Fatalf("got %q", rows[2])
		}
	})
}

func TestRefuses(t *testing.T) {
	for _, c := range []struct {
		change func(r *Run)
		want   string
	}{
		{func(r *Run) { r.Frames[0].State = "lost" }, `frame "bowl-16": state "lost" is not known`},
		{func(r *Run) { r.Frames[1].Name = "bowl-16" }, `frame "bowl-16" is there twice`},
		{func(r *Run) { r.Frames[0].Tags[0].Value.Number = math.NaN() }, "tag gloss must be a finite number"},
		{func(r *Run) { r.Frames[0].Tags[1].Key = "gloss" }, "tag gloss is there twice"},
		{func(r *Run) { r.Frames[0].Noise = math.Inf(1) }, `frame "bowl-16": samples and noise must be finite numbers`},
		{func(r *Run) { r.Frames[0].Seconds = math.Inf(1) }, "must be finite"},
		{func(r *Run) { r.Times.CPU = math.NaN() }, "finite numbers of seconds"},
	} {
		r := workshop()
		c.change(&r)
		for name, err := range map[string]error{"run.json: ": WriteManifest(&bytes.Buffer{}, r), "frames.csv: ": WriteFrames(&bytes.Buffer{}, r)} {
			if err == nil || !strings.HasPrefix(err.Error(), name) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v, want %q", err, c.want)
			}
		}
	}
}

// full takes nothing.
type full struct{}

var errFull = errors.New("no space left on device")

func (full) Write([]byte) (int, error) { return 0, errFull }

func TestWriterErrors(t *testing.T) {
	if err := WriteManifest(full{}, workshop()); !errors.Is(err, errFull) {
		t.Errorf("manifest: %v", err)
	}
	if err := WriteFrames(full{}, workshop()); !errors.Is(err, errFull) {
		t.Errorf("table: %v", err)
	}
}
