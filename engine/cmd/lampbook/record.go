package main

import (
	"cmp"
	"io"
	"runtime/debug"
	"slices"
	"strings"
	"time"

	"lampbook/output/encode"
	"lampbook/output/report"
)

// The record of a run.
const (
	manifestName = "run.json"
	tableName    = "frames.csv"
)

// writeRecord writes the manifest and the table of frames.
func writeRecord(j *job, w *pictures, sheets []report.SheetRecord, earlier *earlierRun, r *request, start time.Time) error {
	p := j.plan
	record := report.Run{
		Engine: version(), Scene: p.Scene, PlanHash: w.hasher.Plan().String(), Stamp: r.stamp,
		Params: p.Params, Warnings: slices.Concat(p.Warnings, w.blankFrames(p)), Sheets: sheets,
		Times: report.Times{Started: start.UTC().Format(time.RFC3339), Wall: time.Since(start).Seconds(), CPU: processorSeconds()},
	}
	for i, o := range w.taken {
		f := &p.Frames[i]
		record.Frames = append(record.Frames, report.FrameRecord{
			Name: f.Name, Tags: f.Tags, Hash: w.hasher.Frame(i).String(), State: o.state, Reason: shortened(w.inside, o.failure), Files: o.files, Settings: f.Settings,
			CameraRays: o.rays.CameraRays, ShadowRays: o.rays.ShadowRays, Samples: o.samples, Noise: o.noise, Seconds: o.seconds,
		})
	}
	record.EarlierFiles = earlier.unlisted(&record)
	err := encode.WriteFile(w.folder.path(manifestName), func(to io.Writer) error { return report.WriteManifest(to, record) })
	if err != nil {
		return err
	}
	return encode.WriteFile(w.folder.path(tableName), func(to io.Writer) error { return report.WriteFrames(to, record) })
}

// version is the program's version as the Go tools built it in: the module's, and the revision where it is not part of that.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	return versionOf(info)
}

func versionOf(info *debug.BuildInfo) string {
	text := cmp.Or(info.Main.Version, "unknown")
	values := map[string]string{}
	for _, s := range info.Settings {
		values[s.Key] = s.Value
	}
	const enough = 12 // digits of a revision, as in the module's version
	revision := values["vcs.revision"]
	if revision = revision[:min(len(revision), enough)]; revision == "" || strings.Contains(text, revision) {
		return text
	}
	if values["vcs.modified"] == "true" {
		revision += ", changed since"
	}
	return text + " (" + revision + ")"
}

// tellLeftOver names the files of an earlier run that neither this one has written nor another choice of its frames would write.
func tellLeftOver(v *view, folder *runFolder, earlier *earlierRun, j *job, w *pictures) {
	var left []string
	current := map[string]bool{}
	for _, name := range j.files {
		current[name] = true
	}
	for i, o := range w.taken {
		if o.state != report.Failed {
			continue
		}
		for _, file := range w.files(i) {
			current[file.name] = false
		}
	}
	for _, name := range earlier.files {
		if !current[name] {
			left = append(left, name)
		}
	}
	if len(left) == 0 {
		return
	}
	const most = 5
	names := strings.Join(left[:min(most, len(left))], ", ")
	if len(left) > most {
		names += ", …"
	}
	v.remark("%s: %s of an earlier run, not made by this one: %s", folder.dir, count(len(left), "file"), names)
}
