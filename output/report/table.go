package report

import (
	"bufio"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

// columns of frames.csv that stand before and after the tags.
var (
	columnsBefore = []string{"name", "state"}
	columnsAfter  = []string{"reason", "hash", "width", "height", "samples", "noise", "light_samples", "seed", "filter", "exposure", "tone", "white", "background", "passes", "samples_taken", "noise_left", "camera_rays", "shadow_rays", "files"}
)

// WriteFrames writes frames.csv: a row a frame, a column a tag (in first-seen order; empty where a frame lacks it), after RFC 4180, in
// UTF-8 without a byte-order mark. A tag with the name of another column is headed "tag." and its name. Times are left to the manifest, so
// that the same run gives the same bytes.
//
// Spreadsheets take a cell that begins with =, +, -, @, a tab or a carriage return for a formula. Text that does so gets an apostrophe before it,
// which they take for "this is text"; numbers stay as they are. The manifest has every value unchanged.
func WriteFrames(w io.Writer, r Run) error {
	if err := r.check(); err != nil {
		return fmt.Errorf("frames.csv: %w", err)
	}
	var keys []string
	at := map[string]int{}
	for i := range r.Frames {
		for _, t := range r.Frames[i].Tags {
			if _, ok := at[t.Key]; !ok {
				at[t.Key] = len(keys)
				keys = append(keys, t.Key)
			}
		}
	}
	head := slices.Clone(columnsBefore)
	for _, k := range keys {
		if slices.Contains(columnsBefore, k) || slices.Contains(columnsAfter, k) {
			for k = "tag." + k; slices.Contains(keys, k); k = "tag." + k {
			}
		}
		head = append(head, harmless(k))
	}
	out := bufio.NewWriter(w) // keeps its first error
	writeRow(out, append(head, columnsAfter...))
	for i := range r.Frames {
		f := &r.Frames[i]
		tags := make([]string, len(keys))
		for _, t := range f.Tags {
			tags[at[t.Key]] = cell(t.Value)
		}
		row := slices.Concat([]string{harmless(f.Name), string(f.State)}, tags, []string{harmless(f.Reason), f.Hash}, settingCells(&f.Settings), []string{
			measured(f.Samples), measured(f.Noise),
			strconv.FormatInt(f.CameraRays, 10), strconv.FormatInt(f.ShadowRays, 10), harmless(strings.Join(f.Files, " ")),
		})
		writeRow(out, row)
	}
	return out.Flush()
}

// writeRow writes a record after RFC 4180, section 2: cells with commas, quotes or line ends in quotes, the line ended by CR LF. The standard
// library's writer would do, but for losing carriage returns inside cells.
func writeRow(w *bufio.Writer, cells []string) {
	for i, c := range cells {
		if i > 0 {
			w.WriteByte(',')
		}
		if strings.ContainsAny(c, ",\"\r\n") {
			c = `"` + strings.ReplaceAll(c, `"`, `""`) + `"`
		}
		w.WriteString(c)
	}
	w.WriteString("\r\n")
}

// settingCells are the cells from width to passes; empty where the frame has no settings, because it failed in the scene.
func settingCells(s *model.Settings) []string {
	if s.Width == 0 {
		return make([]string, 12)
	}
	white := ""
	if s.Tone == model.ToneReinhard {
		white = shortest(s.White)
	}
	return []string{
		strconv.Itoa(s.Width), strconv.Itoa(s.Height), strconv.Itoa(s.Samples), measured(s.Noise), strconv.Itoa(s.LightSamples), strconv.FormatUint(uint64(s.Seed), 10),
		filterWord(s.Filter), shortest(Stops(s.Exposure)), toneWord(s.Tone),
		white, backgroundText(s.Background), strings.Join(passNames(s.Passes), " "),
	}
}

// measured is a number that was asked for or found; empty where there is none.
func measured(v float64) string {
	if v == 0 {
		return ""
	}
	return strconv.FormatFloat(v, 'g', 6, 64)
}

func cell(v model.Value) string {
	if v.Kind == model.TextValue {
		return harmless(v.Text)
	}
	return v.String()
}

// harmless keeps a spreadsheet from taking text for a formula.
func harmless(text string) string {
	if text != "" && strings.IndexByte("=+-@\t\r", text[0]) >= 0 {
		return "'" + text
	}
	return text
}
