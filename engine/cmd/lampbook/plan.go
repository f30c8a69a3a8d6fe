package main

import (
	"context"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"lampbook/engine/model"
	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/output/report"
)

func newPlan() *cobra.Command {
	var r request
	cmd := &cobra.Command{
		Use:   "plan SCENE [options]",
		Short: "Lists what render would do, with an estimate of time and disk",
		Long: `Lists the frames that render would make with the same options, the casts that they share, the rays,
and what time and disk they are likely to take. It writes no file; for the estimate it casts
a few of the plan's rays on this machine.`,
		Example: "  lampbook plan scenes/first_sheet.lua --only glaze=celadon",
		RunE: func(cmd *cobra.Command, args []string) error {
			return answer(cmd, &r, args[0], plan)
		},
	}
	addOptions(cmd, &r)
	return cmd
}

// plan lists the job.
func plan(ctx context.Context, r *request, v *view) error {
	j, err := load(ctx, r, v)
	if err != nil {
		return err
	}
	v.warn(j.plan)
	casts := run.Casts(j.plan, run.Options{Alone: r.alone, Memory: r.memory})
	sum := planSummary{Frames: len(j.plan.Frames), Casts: len(casts), Sheets: len(j.plan.Sheets)}
	on := onSheets(j.plan)
	v.say("%s: %s in %s, %s", r.scene, count(sum.Frames, "frame"), count(sum.Casts, "cast"), count(sum.Sheets, "sheet"))
	for i, c := range casts {
		cast := render.Estimate(c)
		rays := total(cast)
		sum.Rays += rays
		sum.CameraRays, sum.ShadowRays = sum.CameraRays+cast.CameraRays, sum.ShadowRays+cast.ShadowRays
		s := j.plan.Frames[c.Frames[0]].Settings
		v.say("\ncast %d: %s, %d × %d, %s, at most %s rays", i+1, count(len(c.Frames), "frame"), s.Width, s.Height, samplesText(j.plan, c), raysText(rays))
		for _, k := range c.Frames {
			alone := render.Estimate(render.Cast{Plan: j.plan, Frames: []int{k}})
			sum.RaysAlone += total(alone)
			sum.CameraAlone, sum.ShadowAlone = sum.CameraAlone+alone.CameraRays, sum.ShadowAlone+alone.ShadowRays
			f := &j.plan.Frames[k]
			line := plannedLine{Event: "frame", Name: f.Name, Tags: report.TagObject(f.Tags), Cast: i + 1}
			for _, file := range filesOf(f, on[k]) {
				line.Files = append(line.Files, file.name)
			}
			v.emit(line)
			v.say("  %s  %s", strings.Join(line.Files, ", "), tagsText(f))
		}
	}
	for i := range j.plan.Frames {
		if f := &j.plan.Frames[i]; f.Failure != "" {
			sum.Faulty++
			v.emit(plannedLine{Event: "frame", Name: f.Name, Tags: report.TagObject(f.Tags), Reason: f.Failure})
		}
	}
	if faulty := faultyFrames(j.plan, func(i int) string { return j.plan.Frames[i].Failure }); len(faulty) > 0 {
		v.say("\nwould fail:\n  %s", strings.Join(faulty, "\n  "))
	}
	cost, err := estimate(ctx, j, casts, r.threads)
	if err != nil {
		return err
	}
	sum.Time, sum.Disk = cost.seconds, cost.bytes
	v.say("\nrays  at most %s: %s from the camera, %s to lights", raysText(sum.Rays), raysText(sum.CameraRays), raysText(sum.ShadowRays))
	if sum.RaysAlone > sum.Rays {
		v.say("      sharing casts saves %.0f %% of %s: %.0f %% from the camera, %.0f %% to lights", saving(sum.Rays, sum.RaysAlone), raysText(sum.RaysAlone),
			saving(sum.CameraRays, sum.CameraAlone), saving(sum.ShadowRays, sum.ShadowAlone))
	}
	v.say("time  %s to %s on this machine", span(seconds(cost.seconds[0])), span(seconds(cost.seconds[1])))
	v.say("disk  %s to %s in %s", bytesText(int64(cost.bytes[0])), bytesText(int64(cost.bytes[1])), r.out)
	v.summary = sum
	return nil
}

// plannedLine is the JSON line of a frame of a plan.
type plannedLine struct {
	Event  string           `json:"event"`
	Name   string           `json:"name"`
	Tags   report.TagObject `json:"tags"`
	Cast   int              `json:"cast,omitempty"` // from 1
	Files  []string         `json:"files,omitempty"`
	Reason string           `json:"reason,omitempty"` // why the frame would fail
}

// planSummary is the last JSON line of a plan.
type planSummary struct {
	ending
	Frames      int        `json:"frames"`
	Casts       int        `json:"casts"`
	Sheets      int        `json:"sheets"`
	Faulty      int        `json:"faulty"`
	Rays        int64      `json:"rays"`       // at most
	RaysAlone   int64      `json:"rays_alone"` // at most, if every frame were cast alone
	CameraRays  int64      `json:"camera_rays"`
	ShadowRays  int64      `json:"shadow_rays"`
	CameraAlone int64      `json:"camera_rays_alone"`
	ShadowAlone int64      `json:"shadow_rays_alone"`
	Time        [2]float64 `json:"seconds"` // likely from, to
	Disk        [2]float64 `json:"bytes"`   // likely from, to
}

func (s planSummary) ended(e ending) any {
	s.ending = e
	return s
}

// seconds makes a duration of a number of seconds.
func seconds(s float64) time.Duration { return time.Duration(s * float64(time.Second)) }

func total(s render.Stats) int64 { return s.CameraRays + s.ShadowRays }

// samplesText says how many samples the frames of a cast take.
func samplesText(p *model.Plan, c render.Cast) string {
	text := count(p.Frames[c.Frames[0]].Settings.Samples, "sample")
	if slices.ContainsFunc(c.Frames, func(i int) bool { return p.Frames[i].Settings.Noise > 0 }) {
		text += " at most"
	}
	return text
}

// saving is the share of rays that sharing casts saves, in percent.
func saving(shared, alone int64) float64 {
	if alone == 0 {
		return 0
	}
	return 100 * float64(alone-shared) / float64(alone)
}

// tagsText lists a frame's tags on one line.
func tagsText(f *model.Frame) string {
	var out []string
	for _, t := range f.Tags {
		out = append(out, t.Key+"="+t.Value.String())
	}
	return strings.Join(out, " ")
}
