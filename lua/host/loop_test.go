package host

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"testing"
)

// An iterator in a variable starts afresh in every loop, as the Lua 5.1 manual has it (2.4.5: "All three control expressions are
// evaluated only once … adjusted to three values"), also after a loop that was left early.
func TestIteratorsInVariables(t *testing.T) {
	for _, c := range []struct{ scene, want string }{
		{`local t = turntable{ frames = 3 } for a in t do add(a) end for a in t do add(a) break end for a, n in t do add(n) end`, "0 120 240 0 1 2 3"},
		{`local t = turntable{ frames = 2 } for a in t do for b in t do add(a + b) end end`, "0 180 180 360"},
		{`local s = sweep{ {"a", {1, 2}} } for p in s do for q in s do add(p.a .. q.a) end break end for p in s do add(p.a) end`, "11 12 1 2"},
		{`local l = { 5, 6 } for i in next, l do add(i) break end for i in next, l do add(i) end for i, v in next, l do add(v) end`, "1 1 2 5 6"},
		{`local function both() return next, { 7 } end for i, v in both() do add(v) end for i, v, w in both() do add(v) add(w == nil) end`, "7 7 true"},
	} {
		scene := filepath.Join(t.TempDir(), "loops.lua")
		text := "local out = '' local function add(v) out = out .. tostring(v) .. ' ' end " + c.scene +
			" print(out) frame{ things = { place{ mesh = mesh.sphere{ radius = 1, segments = 4 } } } }"
		if err := os.WriteFile(scene, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		var printed bytes.Buffer
		if _, _, err := Evaluate(context.Background(), scene, Options{Print: &printed}); err != nil {
			t.Errorf("%s: %v", c.scene, err)
			continue
		}
		if got := printed.String(); got != c.want+"\n" {
			t.Errorf("%s\n got %q\nwant %q", c.scene, got, c.want)
		}
	}
}
