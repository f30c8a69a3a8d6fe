package model

import (
	"fmt"
	"math"
	"regexp"
)

// Limits of a plan. They keep a slip of the finger from eating the machine.
const (
	MaxFrames       = 200_000
	MaxSide         = 16_384 // pixels
	MaxSamples      = 65_536
	MinNoise        = 0.01 // L*; what a 16-bit picture shows of it
	MaxNoise        = 50.0 // L*
	MaxLightSamples = 1_024
	MaxThings       = 100_000 // in a frame
	MaxLights       = 256     // in a frame
	MinTile         = 16      // pixels, of a sheet's own tiles
	MaxTile         = 4_096
	MaxNameLength   = 120
)

// namePattern is what file systems, web addresses and shells all take without quoting; reservedPattern is what Windows keeps for devices,
// and with what ending does not matter (Microsoft, "Naming Files, Paths, and Namespaces"; from memory).
var (
	namePattern     = regexp.MustCompile(`^[A-Za-z0-9_-]([A-Za-z0-9._-]*[A-Za-z0-9_-])?$`)
	reservedPattern = regexp.MustCompile(`^(?i:con|prn|aux|nul|com[1-9]|lpt[1-9])(\.|$)`)
)

// ValidName reports whether s may name a frame or a sheet: letters, digits, '.', '_', '-', neither beginning nor ending with '.', at
// most MaxNameLength long, and not a ReservedName.
func ValidName(s string) bool {
	return len(s) <= MaxNameLength && namePattern.MatchString(s) && !ReservedName(s)
}

// ReservedName reports whether a file of this name would be a device on Windows, whatever its ending: con, prn, aux, nul, com1 to com9,
// lpt1 to lpt9, in either case.
func ReservedName(s string) bool { return reservedPattern.MatchString(s) }

// checkName says what is wrong with the name of a frame or a sheet.
func checkName(of, s string) error {
	switch {
	case ReservedName(s):
		return fmt.Errorf("%s name %q: Windows keeps it for a device, with any ending", of, s)
	case !ValidName(s):
		return fmt.Errorf("%s name %q: letters, digits, '.', '_' and '-' are accepted, at most %d of them and not '.' first or last", of, s, MaxNameLength)
	}
	return nil
}

// Validate checks that the plan can be rendered: indices in range, numbers finite and in their ranges, names well formed
// and unique. The error names the frame's line in the scene. Frames with a Failure are checked for their name only.
func (p *Plan) Validate() error {
	if len(p.Frames) > MaxFrames {
		return fmt.Errorf("%d frames, at most %d are accepted in one plan", len(p.Frames), MaxFrames)
	}
	for i, m := range p.Materials {
		if err := m.validate(); err != nil {
			return fmt.Errorf("material %d: %w", i, err)
		}
	}
	for _, l := range p.Lights {
		if err := l.validate(); err != nil {
			return fmt.Errorf("light %q: %w", l.Name, err)
		}
	}
	for i, m := range p.Meshes {
		if err := m.validate(); err != nil {
			return fmt.Errorf("mesh %d: %w", i, err)
		}
	}
	seen := make(map[string]int, len(p.Frames))
	for i := range p.Frames {
		f := &p.Frames[i]
		if err := checkName("frame", f.Name); err != nil {
			return fmt.Errorf("%s%w", f.Pos.prefix(), err)
		}
		if j, ok := seen[f.Name]; ok {
			return fmt.Errorf("%sframe name %q was given before%s", f.Pos.prefix(), f.Name, p.Frames[j].Pos.suffix())
		}
		seen[f.Name] = i
		if f.Failure != "" {
			continue
		}
		if err := p.validateFrame(f); err != nil {
			return fmt.Errorf("%sframe %q: %w", f.Pos.prefix(), f.Name, err)
		}
	}
	sheets := map[string]bool{}
	for _, s := range p.Sheets {
		if err := checkName("sheet", s.Name); err != nil {
			return fmt.Errorf("%s%w", s.Pos.prefix(), err)
		}
		if sheets[s.Name] {
			return fmt.Errorf("%ssheet name %q was given before", s.Pos.prefix(), s.Name)
		}
		sheets[s.Name] = true
		if err := s.validate(); err != nil {
			return fmt.Errorf("%ssheet %q: %w", s.Pos.prefix(), s.Name, err)
		}
	}
	return nil
}

// validate checks the sheet's numbers. Which tags its axes may name only the scene's end tells; a sheet that finds none of them shows nothing.
func (s *Sheet) validate() error {
	switch w, h := s.Tile[0], s.Tile[1]; {
	case s.PerLine < 0:
		return fmt.Errorf("per_line must be at least 0, got %d", s.PerLine)
	case (w != 0 || h != 0) && (min(w, h) < MinTile || max(w, h) > MaxTile):
		return fmt.Errorf("tile must be %d to %d pixels a side, got %d and %d", MinTile, MaxTile, w, h)
	case s.Paper > PaperDark:
		return fmt.Errorf("paper %d is not known", s.Paper)
	case s.Show > ShowDifference:
		return fmt.Errorf("show %d is not known", s.Show)
	case s.Show == ShowDifference && len(s.Reference) == 0:
		return fmt.Errorf("show is the difference, from no reference")
	}
	for _, r := range s.Reference {
		if len(r.Values) != 1 {
			return fmt.Errorf("reference must give the tag %q one value, got %d", r.Key, len(r.Values))
		}
	}
	return nil
}

// prefix and suffix are how a place reads at the head and in the middle of a message.
func (p Pos) prefix() string {
	if p.File == "" {
		return ""
	}
	return fmt.Sprintf("%s:%d: ", p.File, p.Line)
}

func (p Pos) suffix() string {
	if p.File == "" {
		return ""
	}
	return fmt.Sprintf(" at %s:%d", p.File, p.Line)
}

func (p *Plan) validateFrame(f *Frame) error {
	if len(f.Things) == 0 {
		return fmt.Errorf("no things: a frame shows at least one")
	}
	if len(f.Things) > MaxThings {
		return fmt.Errorf("%d things, at most %d are accepted in a frame", len(f.Things), MaxThings)
	}
	if len(f.Lights) > MaxLights {
		return fmt.Errorf("%d lights, at most %d are accepted in a frame", len(f.Lights), MaxLights)
	}
	names := map[string]bool{}
	for _, id := range f.Lights {
		if int(id) < 0 || int(id) >= len(p.Lights) {
			return fmt.Errorf("light %d is not in the plan", id)
		}
		n := p.Lights[id].Name
		if names[n] {
			return fmt.Errorf("two lights are named %q: give them names of their own", n)
		}
		names[n] = true
	}
	for _, t := range f.Things {
		if int(t.Mesh) < 0 || int(t.Mesh) >= len(p.Meshes) {
			return fmt.Errorf("mesh %d is not in the plan", t.Mesh)
		}
		if len(t.Materials) == 0 {
			return fmt.Errorf("thing %q has no material", t.Name)
		}
		for _, m := range t.Materials {
			if int(m) < 0 || int(m) >= len(p.Materials) {
				return fmt.Errorf("material %d is not in the plan", m)
			}
		}
		if !finite(t.At[:]...) || !finite(t.Turn[:]...) || !finite(t.Scale[:]...) {
			return fmt.Errorf("thing %q: at, turn and scale must be finite numbers", t.Name)
		}
		if t.Scale[0] == 0 || t.Scale[1] == 0 || t.Scale[2] == 0 {
			return fmt.Errorf("thing %q: scale must not be 0, got %v", t.Name, t.Scale)
		}
	}
	if err := f.Camera.validate(); err != nil {
		return fmt.Errorf("camera: %w", err)
	}
	return f.Settings.validate()
}

func (c Camera) validate() error {
	if !finite(c.Position[:]...) || !finite(c.Target[:]...) || !finite(c.Up[:]...) || !finite(c.Shift[:]...) {
		return fmt.Errorf("position, target, up and shift must be finite numbers")
	}
	if c.Position == c.Target {
		return fmt.Errorf("position and target are the same point %v", c.Position)
	}
	view := [3]float64{c.Target[0] - c.Position[0], c.Target[1] - c.Position[1], c.Target[2] - c.Position[2]}
	if parallel(view, c.Up) {
		return fmt.Errorf("up %v runs along the view: give another", c.Up)
	}
	switch c.Projection {
	case Perspective:
		if err := positive("focal", c.FocalMM, "sensor", c.SensorMM); err != nil {
			return err
		}
	case Orthographic:
		if err := positive("height", c.Height); err != nil {
			return err
		}
	default:
		return fmt.Errorf("projection %d is not known", c.Projection)
	}
	if !finite(c.FNumber, c.FocusDistance) || c.FNumber < 0 || c.FocusDistance < 0 {
		return fmt.Errorf("f_number and focus must be at least 0, got %v and %v", c.FNumber, c.FocusDistance)
	}
	return nil
}

func (s Settings) validate() error {
	switch {
	case s.Width < 1 || s.Width > MaxSide || s.Height < 1 || s.Height > MaxSide:
		return fmt.Errorf("size must be 1 to %d pixels a side, got %d × %d", MaxSide, s.Width, s.Height)
	case s.Samples < 1 || s.Samples > MaxSamples:
		return fmt.Errorf("samples must be 1 to %d, got %d", MaxSamples, s.Samples)
	case s.LightSamples < 1 || s.LightSamples > MaxLightSamples:
		return fmt.Errorf("light_samples must be 1 to %d, got %d", MaxLightSamples, s.LightSamples)
	case s.Noise != 0 && !(s.Noise >= MinNoise && s.Noise <= MaxNoise):
		return fmt.Errorf("noise must be %v to %v L*, or 0 for none, got %v", MinNoise, MaxNoise, s.Noise)
	case !finite(s.Exposure) || math.Abs(s.Exposure) > 100:
		return fmt.Errorf("exposure must be -100 to 100 stops, got %v", s.Exposure)
	case s.Tone > ToneACES:
		return fmt.Errorf("tone %d is not known", s.Tone)
	case s.Filter > BoxFilter:
		return fmt.Errorf("filter %d is not known", s.Filter)
	case s.Tone == ToneReinhard && !(s.White > 0 && finite(s.White)):
		return fmt.Errorf("white must be > 0, got %v", s.White)
	case len(s.Formats) == 0:
		return fmt.Errorf("formats names no picture format")
	}
	seenPass := map[Pass]bool{}
	for _, p := range s.Passes {
		if p > PassNoise || seenPass[p] {
			return fmt.Errorf("pass %d is not known or named twice", p)
		}
		seenPass[p] = true
	}
	seenFormat := map[Format]bool{}
	for _, f := range s.Formats {
		if f > FormatEXRHalf || seenFormat[f] {
			return fmt.Errorf("format %d is not known or named twice", f)
		}
		seenFormat[f] = true
	}
	c := s.Background.Color
	if !finite32(c.R, c.G, c.B) || min(c.R, c.G, c.B) < 0 || max(c.R, c.G, c.B) > 1 {
		return fmt.Errorf("background must be a display colour with components 0 to 1, got %v", c)
	}
	return nil
}

func (m Material) validate() error {
	if m.Kind != BlinnPhong {
		return fmt.Errorf("surface model %d is not known", m.Kind)
	}
	for _, c := range [...]struct {
		name    string
		r, g, b float32
		most    float32
	}{
		{"diffuse", m.Diffuse.R, m.Diffuse.G, m.Diffuse.B, 1},
		{"specular", m.Specular.R, m.Specular.G, m.Specular.B, 1},
		{"ambient", m.Ambient.R, m.Ambient.G, m.Ambient.B, 1},
		{"emission", m.Emission.R, m.Emission.G, m.Emission.B, math.MaxFloat32},
	} {
		if !finite32(c.r, c.g, c.b) || min(c.r, c.g, c.b) < 0 || max(c.r, c.g, c.b) > c.most {
			return fmt.Errorf("%s must have components of 0 to %v, got %v, %v, %v", c.name, c.most, c.r, c.g, c.b)
		}
	}
	if !finite(m.Shininess) || m.Shininess < 0 || m.Shininess > 100_000 {
		return fmt.Errorf("shininess must be 0 to 100000, got %v", m.Shininess)
	}
	if !(m.Opacity > 0 && m.Opacity <= 1) {
		return fmt.Errorf("opacity must be > 0 and at most 1, got %v", m.Opacity)
	}
	return nil
}

func (l Light) validate() error {
	switch {
	case l.Name == "":
		return fmt.Errorf("a light needs a name")
	case !finite(l.Position[:]...) || !finite(l.Target[:]...) || !finite(l.Direction[:]...) || !finite(l.Up[:]...):
		return fmt.Errorf("position, target, direction and up must be finite numbers")
	case !finite(l.Intensity) || l.Intensity < 0:
		return fmt.Errorf("intensity must be at least 0, got %v", l.Intensity)
	case !finite(l.Range) || l.Range < 0:
		return fmt.Errorf("range must be at least 0 metres, got %v", l.Range)
	}
	for _, c := range [...]struct{ r, g, b float32 }{
		{l.Color.R, l.Color.G, l.Color.B},
		{l.Components.Diffuse.R, l.Components.Diffuse.G, l.Components.Diffuse.B},
		{l.Components.Specular.R, l.Components.Specular.G, l.Components.Specular.B},
		{l.Components.Ambient.R, l.Components.Ambient.G, l.Components.Ambient.B},
		{l.Components.Emission.R, l.Components.Emission.G, l.Components.Emission.B},
	} {
		if !finite32(c.r, c.g, c.b) || min(c.r, c.g, c.b) < 0 {
			return fmt.Errorf("colours must have components of at least 0, got %v, %v, %v", c.r, c.g, c.b)
		}
	}
	switch l.Kind {
	case LightPoint, LightAmbient:
	case LightDirectional:
		if l.Direction == [3]float64{} {
			return fmt.Errorf("direction must not be zero")
		}
	case LightSpot:
		if !(l.Outer > 0 && l.Outer <= 90 && l.Inner >= 0 && l.Inner <= l.Outer) {
			return fmt.Errorf("inner and outer must be half angles in degrees, 0 <= inner <= outer <= 90, outer > 0, got %v and %v", l.Inner, l.Outer)
		}
		if l.Position == l.Target {
			return fmt.Errorf("position and target are the same point %v", l.Position)
		}
	case LightArea:
		return l.validateArea()
	default:
		return fmt.Errorf("light kind %d is not known", l.Kind)
	}
	return nil
}

func (l Light) validateArea() error {
	switch l.Shape {
	case AreaRectangle:
		if err := positive("width", l.Width, "height", l.Height); err != nil {
			return err
		}
		axis := [3]float64{l.Target[0] - l.Position[0], l.Target[1] - l.Position[1], l.Target[2] - l.Position[2]}
		if l.Position != l.Target && parallel(axis, l.Up) {
			return fmt.Errorf("up %v runs along the light's axis: give another", l.Up)
		}
	case AreaDisk, AreaSphere:
		if err := positive("radius", l.Radius); err != nil {
			return err
		}
	default:
		return fmt.Errorf("shape %d is not known", l.Shape)
	}
	if l.Shape != AreaSphere && l.Position == l.Target {
		return fmt.Errorf("position and target are the same point %v", l.Position)
	}
	return nil
}

func (m Mesh) validate() error {
	if m.Kind > MeshFile {
		return fmt.Errorf("mesh kind %d is not known", m.Kind)
	}
	if !finite(m.Size[:]...) || !finite(m.Depth, m.Crease, m.Unit, m.Smooth) {
		return fmt.Errorf("sizes and angles must be finite numbers")
	}
	for _, q := range m.Profile {
		if !finite(q[:]...) {
			return fmt.Errorf("profile and outline points must be finite numbers, got %v", q)
		}
	}
	if m.Raw != nil {
		for _, list := range [][][3]float64{m.Raw.Positions, m.Raw.Normals} {
			for i, q := range list {
				if !finite(q[:]...) {
					return fmt.Errorf("positions and normals must be finite numbers, entry %d is %v", i+1, q)
				}
			}
		}
		for i, q := range m.Raw.UVs {
			if !finite(q[:]...) {
				return fmt.Errorf("uvs must be finite numbers, entry %d is %v", i+1, q)
			}
		}
	}
	return nil
}

// positive checks name, value pairs.
func positive(pairs ...any) error {
	for i := 0; i < len(pairs); i += 2 {
		if v := pairs[i+1].(float64); !(v > 0) || math.IsInf(v, 0) {
			return fmt.Errorf("%s must be > 0, got %v", pairs[i], v)
		}
	}
	return nil
}

func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

func finite32(values ...float32) bool {
	for _, v := range values {
		if v != v || math.IsInf(float64(v), 0) {
			return false
		}
	}
	return true
}

// parallel reports whether a and b span no plane, or one of them is zero.
func parallel(a, b [3]float64) bool {
	c := [3]float64{
		float64(a[1]*b[2]) - float64(a[2]*b[1]), float64(a[2]*b[0]) - float64(a[0]*b[2]), float64(a[0]*b[1]) - float64(a[1]*b[0]),
	}
	dot := func(u, v [3]float64) float64 { return float64(u[0]*v[0]) + float64(u[1]*v[1]) + float64(u[2]*v[2]) }
	return !(dot(c, c) > 1e-18*dot(a, a)*dot(b, b))
}
