package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

// Stops rounds an exposure to what records say of it, four decimals: a ten-thousandth of a stop is beyond any eye. Never -0.
func Stops(exposure float64) float64 { return math.Round(exposure*1e4)/1e4 + 0 }

// SettingLines lists a frame's settings as key=value in the words of scenes, all that a picture's pixels depend on; white only where the
// tone curve has one. Formats are left out: they are how a picture is written, not what it shows.
func SettingLines(s model.Settings) []string {
	lines := []string{
		fmt.Sprintf("size=%dx%d", s.Width, s.Height),
		"samples=" + strconv.Itoa(s.Samples),
		"noise=" + shortest(s.Noise),
		"light_samples=" + strconv.Itoa(s.LightSamples),
		"seed=" + strconv.FormatUint(uint64(s.Seed), 10),
		"filter=" + filterWord(s.Filter),
		"exposure=" + shortest(Stops(s.Exposure)),
		"tone=" + toneWord(s.Tone),
	}
	if s.Tone == model.ToneReinhard {
		lines = append(lines, "white="+shortest(s.White))
	}
	return append(lines, "background="+backgroundText(s.Background), "passes="+strings.Join(passNames(s.Passes), " "))
}

// backgroundText is "transparent", or the linear components of the colour.
func backgroundText(b model.Background) string {
	if b.Transparent {
		return "transparent"
	}
	var parts []string
	for _, v := range []float32{b.Color.R, b.Color.G, b.Color.B} {
		parts = append(parts, strconv.FormatFloat(float64(v), 'g', -1, 32))
	}
	return strings.Join(parts, " ")
}

func passNames(passes []model.Pass) []string {
	names := []string{}
	for _, p := range passes {
		names = append(names, passWord(p))
	}
	return names
}

func shortest(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
