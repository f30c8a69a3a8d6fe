package model

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
)

// PictureVersion changes whenever the engine gives other pixels for the same frame. It is part of every frame's hash.
const PictureVersion = 1

// Hash is a SHA-256 of a canonical encoding.
type Hash [sha256.Size]byte

// String returns the hash in hexadecimal.
func (h Hash) String() string { return hex.EncodeToString(h[:]) }

// Short returns the first ten hexadecimal digits, for people.
func (h Hash) Short() string { return h.String()[:10] }

// Sum hashes the canonical encoding of a plain value: its JSON, whose fields stand in the order of their declaration and whose
// numbers are the shortest that read back the same. It panics if v holds a NaN, an infinity, a map or a func: Validate first.
func Sum(v any) Hash {
	text, err := json.Marshal(v)
	if err != nil {
		panic(fmt.Sprintf("model: value without a canonical encoding: %v", err))
	}
	return sha256.Sum256(text)
}

// Hasher gives the hashes of a valid plan's frames; it hashes each mesh, material and light of the plan once.
// Not safe for concurrent use of its making; the made value may be shared.
type Hasher struct {
	plan      *Plan
	Meshes    []Hash // by MeshID
	Materials []Hash // by MaterialID
	Lights    []Hash // by LightID
}

// NewHasher hashes the plan's tables. The plan must be valid.
func NewHasher(p *Plan) *Hasher {
	h := &Hasher{plan: p}
	for _, m := range p.Meshes {
		h.Meshes = append(h.Meshes, MeshHash(m))
	}
	for _, m := range p.Materials {
		h.Materials = append(h.Materials, Sum(m))
	}
	for _, l := range p.Lights {
		h.Lights = append(h.Lights, Sum(l))
	}
	return h
}

// MeshHash hashes a mesh's description. A file counts by its content, not by its path.
func MeshHash(m Mesh) Hash {
	if m.Kind == MeshFile {
		m.File = ""
	}
	return Sum(m)
}

// frameForm is what a frame's pixels depend on, with table entries replaced by their hashes.
type frameForm struct {
	PictureVersion int
	Camera         Camera
	Lights         []Hash
	Things         []thingForm
	Settings       Settings
}

// thingForm is a placement with its mesh and materials by content; its name does not count.
type thingForm struct {
	Mesh             Hash
	Materials        []Hash
	At, Turn, Scale  [3]float64
	Hidden, NoShadow bool
}

// Frame returns the hash of frame i: equal hashes mean equal pixels. Name, tags and place in the scene do not count, nor do Formats.
// A frame with a Failure hashes its reason.
func (h *Hasher) Frame(i int) Hash {
	f := &h.plan.Frames[i]
	if f.Failure != "" {
		return Sum([]string{"failed", f.Failure})
	}
	form := frameForm{PictureVersion: PictureVersion, Camera: f.Camera, Settings: f.Settings}
	form.Settings.Formats = nil
	for _, l := range f.Lights {
		form.Lights = append(form.Lights, h.Lights[l])
	}
	for _, t := range f.Things {
		tf := thingForm{Mesh: h.Meshes[t.Mesh], At: t.At, Turn: t.Turn, Scale: t.Scale, Hidden: t.Hidden, NoShadow: t.NoShadow}
		for _, m := range t.Materials {
			tf.Materials = append(tf.Materials, h.Materials[m])
		}
		form.Things = append(form.Things, tf)
	}
	return Sum(form)
}

// Plan returns the hash of the whole plan: every frame with its name and tags, and every sheet. It does not
// depend on where the scene's file lies or on line numbers.
func (h *Hasher) Plan() Hash {
	type entry struct {
		Name    string
		Tags    []Tag
		Hash    Hash
		Formats []Format
	}
	var all struct {
		Frames []entry
		Sheets []Sheet
	}
	for i, f := range h.plan.Frames {
		all.Frames = append(all.Frames, entry{f.Name, f.Tags, h.Frame(i), f.Settings.Formats})
	}
	for _, s := range h.plan.Sheets {
		s.Pos = Pos{}
		all.Sheets = append(all.Sheets, s)
	}
	return Sum(all)
}

// MarshalText gives the hash in hexadecimal, so that encodings of it are readable.
func (h Hash) MarshalText() ([]byte, error) { return []byte(h.String()), nil }
