// Package report writes what a run says about itself: the manifest run.json and its table frames.csv.
//
// The caller fills a Run from the plan and from what came of it; this package knows no engine and reads no clock. All but the manifest's last
// field, times, is the same for the same run. May import: model, pixmap, encode, compare, sheet. Start at Run.
package report
