package main

import (
	"runtime/debug"
	"testing"
)

func TestVersionOf(t *testing.T) {
	revision := debug.BuildSetting{Key: "vcs.revision", Value: "3fa0b1c2d9e84756aabbccddeeff001122334455"}
	changed := debug.BuildSetting{Key: "vcs.modified", Value: "true"}
	for _, test := range []struct {
		main     string
		settings []debug.BuildSetting
		want     string
	}{
		{"", nil, "unknown"},
		{"(devel)", nil, "(devel)"},
		{"(devel)", []debug.BuildSetting{revision}, "(devel) (3fa0b1c2d9e8)"},
		{"v1.2.0", []debug.BuildSetting{revision, changed}, "v1.2.0 (3fa0b1c2d9e8, changed since)"},
		{"v1.2.1-0.20261201100000-3fa0b1c2d9e8", []debug.BuildSetting{revision}, "v1.2.1-0.20261201100000-3fa0b1c2d9e8"},
	} {
		info := debug.BuildInfo{Main: debug.Module{Version: test.main}, Settings: test.settings}
		if got := versionOf(&info); got != test.want {
			t.Errorf("%q with %v: %q, want %q", test.main, test.settings, got, test.want)
		}
	}
}
