package bind

import (
	"crypto/sha256"
	"fmt"
	"math"
	"strings"
	"unicode"
	"unicode/utf8"

	lua "github.com/yuin/gopher-lua"
	"golang.org/x/text/unicode/norm"

	"lampbook/engine/model"
)

const (
	maxTags      = 32  // in a frame
	maxTagKey    = 64  // bytes
	maxTagLength = 200 // bytes of a tag's text
)

// tags reads the tags of a frame, in the table's order.
func (a *args) tags() []model.Tag {
	v := a.get("tags")
	if v == lua.LNil {
		return nil
	}
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("tags must be a table { name = value }, got %s", describe(v))
	}
	var tags []model.Tag
	for k, x := t.Next(lua.LNil); k != lua.LNil; k, x = t.Next(k) {
		key, ok := k.(lua.LString)
		if !ok {
			a.failf("tags must have names, got %s without one", describe(x))
		}
		a.checkTagKey(string(key))
		if len(tags) == maxTags {
			a.failf("at most %d tags are accepted", maxTags)
		}
		tags = append(tags, model.Tag{Key: string(key), Value: a.tagValue(string(key), x)})
	}
	return tags
}

func (a *args) checkTagKey(key string) {
	switch {
	case key == "" || len(key) > maxTagKey || !readable(key) || strings.ContainsAny(key, "{}"):
		a.failf("a tag's name must be 1 to %d readable letters without braces, got %s", maxTagKey, quote(key))
	case key == model.AxisPass:
		a.failf("no tag may be named %q: on a sheet it stands for the passes", key)
	}
}

// tagValue reads a number, a text or a truth value.
func (a *args) tagValue(key string, v lua.LValue) model.Value {
	switch v := v.(type) {
	case lua.LNumber:
		x := float64(v)
		if math.IsNaN(x) || math.IsInf(x, 0) {
			a.failf("tag %q must be a finite number, got %s", key, describe(v))
		}
		return model.Value{Kind: model.NumberValue, Number: x + 0} // -0 becomes 0
	case lua.LString:
		if len(v) > maxTagLength || !readable(string(v)) {
			a.failf("tag %q must be a readable text of at most %d bytes, got %s", key, maxTagLength, describe(v))
		}
		return model.Value{Kind: model.TextValue, Text: string(v)}
	case lua.LBool:
		return model.Value{Kind: model.TruthValue, Truth: bool(v)}
	}
	a.failf("tag %q must be a number, a text, true or false, got %s", key, describe(v))
	return model.Value{}
}

// readable reports whether a text is UTF-8 without control characters.
func readable(s string) bool {
	return utf8.ValidString(s) && strings.IndexFunc(s, unicode.IsControl) < 0
}

// frameName reads a frame's name, or makes it of the tags, "gloss-4_glaze-slate", or of the frame's number.
func (a *args) frameName(tags []model.Tag) string {
	var name string
	given := a.text("name", &name)
	switch {
	case given:
		a.checkName(name)
	case len(tags) > 0:
		name = nameOfTags(tags)
	default:
		name = fmt.Sprintf("frame-%d", len(a.env.plan.Frames)+1)
	}
	i, taken := a.env.names[strings.ToLower(name)]
	if !taken {
		return name
	}
	before := a.env.plan.Frames[i]
	switch {
	case !given:
		a.failf("the tags make the name %q, which a frame has already%s: give each frame other tags, or a name", name, suffix(before.Pos))
	case before.Name != name:
		a.failf("the name %q differs only in case from that of a frame%s: some file systems take them for one", name, suffix(before.Pos))
	}
	a.failf("the name %q was given before%s", name, suffix(before.Pos))
	return ""
}

// checkName refuses what may not name a frame or a sheet.
func (a *args) checkName(name string) {
	switch {
	case model.ReservedName(name):
		a.failf("the name %q is one that Windows keeps for a device, with any ending: give another", name)
	case !model.ValidName(name):
		a.failf("name must be letters, digits, '.', '_' and '-', at most %d of them and not '.' first or last, got %s", model.MaxNameLength, quote(name))
	}
}

// nameOfTags writes tags in the letters that a file name may have.
func nameOfTags(tags []model.Tag) string {
	var parts []string
	for _, t := range tags {
		value := t.Value.String()
		if t.Value.Kind == model.NumberValue {
			value = strings.ReplaceAll(number(t.Value.Number), "+", "") // 1e+20 must not read as 1e-20
		}
		parts = append(parts, fileLetters(t.Key)+"-"+fileLetters(value))
	}
	name := strings.Join(parts, "_")
	if name[len(name)-1] == '.' {
		name += "-" // Windows drops a '.' at the end
	}
	if name[0] == '.' || model.ReservedName(name) {
		name = "-" + name // a file that begins with '.' is hidden
	}
	if len(name) > model.MaxNameLength {
		sum := sha256.Sum256([]byte(name))
		name = fmt.Sprintf("%s-%x", name[:model.MaxNameLength-9], sum[:4])
	}
	return name
}

// fileLetters drops accents, writes letters of other scripts by their code point, and puts '-' for what is no letter.
func fileLetters(s string) string {
	plain := true
	for _, r := range s {
		plain = plain && fileLetter(r)
	}
	if plain {
		return s
	}
	var b strings.Builder
	for _, r := range norm.NFKD.String(s) {
		switch {
		case unicode.Is(unicode.Mn, r):
		case fileLetter(r):
			b.WriteRune(r)
		case unicode.IsLetter(r) || unicode.IsNumber(r):
			fmt.Fprintf(&b, "u%04x", r)
		default:
			b.WriteByte('-')
		}
	}
	return b.String()
}

func fileLetter(r rune) bool {
	return r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || r == '.' || r == '_' || r == '-'
}
