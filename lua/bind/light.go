package bind

import (
	"slices"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/aim"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// light is a source as the scene stated it; Light is what follows from it.
type light struct {
	model.Light         // Name is empty until the light stands in a rig or a frame, where it was not given
	named       bool    // the scene gave the name
	temperature float64 // kelvin; 0 where a colour was given or neither
	intensity   float64 // before stops; used where power is not stated
	power       float64 // lumen; negative where not stated
	stops       float64
	heightGiven bool // area rectangle: else as wide as high
	innerGiven  bool // spot: else two thirds of outer
	upGiven     bool // area: else chosen so that it does not run along the axis
	id          *model.LightID
}

// Keys of the lights; all of them take the common ones.
const (
	commonLightKeys = " name color temperature intensity stops components"
	castLightKeys   = commonLightKeys + " shadows"
	directionalKeys = "direction" + castLightKeys
	pointKeys       = "position! range falloff power" + castLightKeys
	spotKeys        = "position! target inner outer range falloff power" + castLightKeys
	areaKeys        = "position! target up shape width height radius two_sided visible power" + castLightKeys
	ambientKeys     = "name color temperature intensity stops components"
)

var lightMakers = []struct{ name, keys, word string }{
	model.LightDirectional: {"light.directional", directionalKeys, "directional"},
	model.LightPoint:       {"light.point", pointKeys, "point"},
	model.LightSpot:        {"light.spot", spotKeys, "spot"},
	model.LightArea:        {"light.area", areaKeys, "area"},
	model.LightAmbient:     {"light.ambient", ambientKeys, "ambient"},
}

func lightCalls() []call {
	var all []call
	for kind, m := range lightMakers {
		all = append(all, call{name: m.name, keys: m.keys, run: func(a *args) lua.LValue {
			return a.readLight(defaultLight(model.LightKind(kind)))
		}})
	}
	return append(all, call{name: "light:with", change: true, run: func(a *args) lua.LValue {
		changed := *a.self.(*light)
		return a.env.push(a.l, a.changeLight(&changed))
	}})
}

// changeLight reads the keys of a "with" over what the light holds.
func (a *args) changeLight(l *light) *light {
	m := lightMakers[l.Kind]
	a.changing(m.name, m.keys).readLight(l)
	return l
}

// defaultLight is a light with nothing stated: white, and as bright as makes a thing a metre away readable beside the others.
func defaultLight(kind model.LightKind) *light {
	one := tint.Grey(1)
	l := &light{power: -1, intensity: 1000, Light: model.Light{
		Kind: kind, Color: one, Components: model.Components{Diffuse: one, Specular: one},
	}}
	switch kind {
	case model.LightDirectional:
		l.Direction = [3]float64{0.5, -1, -0.7}
	case model.LightSpot:
		l.Outer = 30
	case model.LightArea:
		l.Width, l.Radius = 0.6, 0.3
	case model.LightAmbient:
		l.intensity = 40
		l.Components.Ambient = one
	}
	return l
}

const maxIntensity = 1e9

// readLight reads the keys over what l holds and works out what follows.
func (a *args) readLight(l *light) lua.LValue {
	if a.text("name", &l.Name) {
		l.named = true
		if l.Name == "" {
			a.failf("name must not be empty")
		}
	}
	a.exclude("color", "temperature")
	if a.color("color", &l.Color, maxComponent) {
		l.temperature = 0
	}
	if a.number("temperature", &l.temperature, between(minKelvin, maxKelvin, "kelvin")) {
		l.Color = tint.Kelvin(l.temperature)
	}
	a.number("stops", &l.stops, between(-40, 40, "stops"))
	a.components(&l.Components)
	if l.Kind != model.LightAmbient {
		shadows := !l.NoShadow
		a.boolean("shadows", &shadows)
		l.NoShadow = !shadows
	}
	switch l.Kind {
	case model.LightDirectional:
		a.point("direction", &l.Direction, limit{})
		if l.Direction == ([3]float64{}) {
			a.failf("direction must not be {0, 0, 0}: it is the way the light travels")
		}
	case model.LightPoint:
		a.place(l)
		a.reach(l)
	case model.LightSpot:
		a.place(l)
		a.reach(l)
		a.cone(l)
	case model.LightArea:
		a.place(l)
		a.emitter(l)
	}
	a.brightness(l)
	l.id = nil
	return a.env.push(a.l, l)
}

func (a *args) place(l *light) {
	place := between(-maxLength, maxLength, "metres")
	a.point("position", &l.Position, place)
	if l.Kind == model.LightPoint {
		return
	}
	a.point("target", &l.Target, place)
	if l.Position == l.Target && !(l.Kind == model.LightArea && l.Shape == model.AreaSphere) {
		a.failf("position and target must be two different points, both are %s", describePoint(l.Target))
	}
}

func (a *args) reach(l *light) {
	a.number("range", &l.Range, lengthAbove0())
	falloff := 0
	if a.oneOf("falloff", []string{"inverse_square", "none"}, &falloff) {
		l.NoFalloff = falloff == 1
	}
}

func (a *args) cone(l *light) {
	a.number("outer", &l.Outer, limit{low: 0, high: 90, set: true, above: true, unit: "degrees from the axis"})
	if a.number("inner", &l.Inner, between(0, 90, "degrees from the axis")) {
		l.innerGiven = true
	}
	if !l.innerGiven {
		l.Inner = l.Outer * 2 / 3
	}
	if l.Inner > l.Outer {
		a.failf("inner must be at most outer, %s degrees, got %s", number(l.Outer), number(l.Inner))
	}
}

var areaShapes = []string{model.AreaRectangle: "rectangle", model.AreaDisk: "disk", model.AreaSphere: "sphere"}

// emitter reads the form of an area light. A key that its shape has not is an error: it would do nothing.
func (a *args) emitter(l *light) {
	shape := int(l.Shape)
	a.oneOf("shape", areaShapes, &shape)
	l.Shape = model.AreaShape(shape)
	for _, part := range []struct {
		key    string
		shapes []model.AreaShape
	}{
		{"width", []model.AreaShape{model.AreaRectangle}},
		{"height", []model.AreaShape{model.AreaRectangle}},
		{"up", []model.AreaShape{model.AreaRectangle}},
		{"radius", []model.AreaShape{model.AreaDisk, model.AreaSphere}},
		{"two_sided", []model.AreaShape{model.AreaRectangle, model.AreaDisk}},
	} {
		if a.given(part.key) && !slices.Contains(part.shapes, l.Shape) {
			a.failf("a %s has no %s", areaShapes[shape], part.key)
		}
	}
	a.number("width", &l.Width, lengthAbove0())
	l.heightGiven = a.number("height", &l.Height, lengthAbove0()) || l.heightGiven
	if !l.heightGiven {
		l.Height = l.Width
	}
	a.number("radius", &l.Radius, lengthAbove0())
	a.boolean("two_sided", &l.TwoSided)
	a.boolean("visible", &l.Visible)
	l.upGiven = a.point("up", &l.Up, limit{}) || l.upGiven
	axis := [3]float64{l.Target[0] - l.Position[0], l.Target[1] - l.Position[1], l.Target[2] - l.Position[2]}
	if !l.upGiven {
		l.Up = [3]float64{0, 1, 0}
		if parallel(axis, l.Up) {
			l.Up = [3]float64{0, 0, -1}
		}
	}
	if l.Shape == model.AreaRectangle && parallel(axis, l.Up) {
		a.failf("up %s runs along the light's axis: give another", describePoint(l.Up))
	}
}

var lightUnits = [...]string{
	model.LightDirectional: "lux", model.LightPoint: "candela", model.LightSpot: "candela", model.LightArea: "nit", model.LightAmbient: "nit",
}

// brightness reads intensity or power, and sets what the light emits.
func (a *args) brightness(l *light) {
	hasPower := l.Kind == model.LightPoint || l.Kind == model.LightSpot || l.Kind == model.LightArea
	if hasPower {
		a.exclude("intensity", "power")
		a.number("power", &l.power, atLeast0(maxIntensity, "lumen"))
	}
	if a.number("intensity", &l.intensity, atLeast0(maxIntensity, lightUnits[l.Kind])) {
		l.power = -1
	}
	a.scaleTo(l)
}

// scaleTo sets what the light emits by its intensity or power and its stops.
func (a *args) scaleTo(l *light) {
	l.Intensity = l.intensity
	if l.power >= 0 {
		i, err := aim.PowerToIntensity(l.Light, l.power)
		if err != nil {
			a.failf("%v", err)
		}
		l.Intensity = i
	}
	l.Intensity = aim.Brighter(l.Intensity, l.stops)
	if !(l.Intensity <= maxIntensity*maxIntensity) {
		a.failf("the light would emit %s %s: no more than %s is accepted", number(l.Intensity), lightUnits[l.Kind], number(maxIntensity*maxIntensity))
	}
}

// components reads a light's own weights.
func (a *args) components(c *model.Components) {
	v := a.get("components")
	if v == lua.LNil {
		return
	}
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("components must be a table { diffuse, specular, ambient, emission }, got %s", describe(v))
	}
	b := &args{env: a.env, l: a.l, table: t,
		entry: newEntry(call{name: a.entry.name + ": components", keys: "diffuse specular ambient emission"})}
	b.checkKeys(false)
	for _, w := range []struct {
		name string
		dst  *tint.RGB
	}{{"diffuse", &c.Diffuse}, {"specular", &c.Specular}, {"ambient", &c.Ambient}, {"emission", &c.Emission}} {
		switch v := b.get(w.name).(type) {
		case *lua.LNilType:
		case lua.LNumber:
			*w.dst = tint.Grey(float32(b.checkNumber(w.name, v, atLeast0(maxComponent, ""))))
		case *lua.LTable:
			b.checkColor(w.name, v, maxComponent)
		default:
			if _, ok := valueOf[color](v); !ok {
				b.failf("%s must be a number or a colour, got %s", w.name, describe(v))
			}
			*w.dst = b.checkColor(w.name, v, maxComponent)
		}
	}
}

func (*light) kind() string       { return kindLight }
func (l *light) maker() string    { return lightMakers[l.Kind].name }
func (l *light) fields() []string { return namesOf(lightMakers[l.Kind].keys) }

func (l *light) field(e *Env, ls *lua.LState, name string) lua.LValue {
	rectangle := l.Kind == model.LightArea && l.Shape == model.AreaRectangle
	switch name {
	case "name":
		if l.Name == "" {
			return lua.LNil
		}
		return lua.LString(l.Name)
	case "color":
		if l.temperature > 0 {
			return lua.LNil
		}
		return e.push(ls, color{l.Color})
	case "temperature":
		return unless(l.temperature == 0, lua.LNumber(l.temperature))
	case "intensity":
		return unless(l.power >= 0, lua.LNumber(l.intensity))
	case "power":
		return unless(l.power < 0, lua.LNumber(l.power))
	case "stops":
		return lua.LNumber(l.stops)
	case "shadows":
		return lua.LBool(!l.NoShadow)
	case "components":
		t := ls.NewTable()
		t.RawSetString("diffuse", e.push(ls, color{l.Components.Diffuse}))
		t.RawSetString("specular", e.push(ls, color{l.Components.Specular}))
		t.RawSetString("ambient", e.push(ls, color{l.Components.Ambient}))
		t.RawSetString("emission", e.push(ls, color{l.Components.Emission}))
		return t
	case "direction":
		return pointTable(ls, l.Direction)
	case "position":
		return pointTable(ls, l.Position)
	case "target":
		return pointTable(ls, l.Target)
	case "up":
		return unless(!rectangle, pointTable(ls, l.Up))
	case "inner":
		return lua.LNumber(l.Inner)
	case "outer":
		return lua.LNumber(l.Outer)
	case "range":
		return unless(l.Range == 0, lua.LNumber(l.Range))
	case "falloff":
		if l.NoFalloff {
			return lua.LString("none")
		}
		return lua.LString("inverse_square")
	case "shape":
		return lua.LString(areaShapes[l.Shape])
	case "width":
		return unless(!rectangle, lua.LNumber(l.Width))
	case "height":
		return unless(!rectangle, lua.LNumber(l.Height))
	case "radius":
		return unless(rectangle, lua.LNumber(l.Radius))
	case "two_sided":
		return unless(l.Shape == model.AreaSphere, lua.LBool(l.TwoSided))
	}
	return lua.LBool(l.Visible)
}

// unless is nil where the field does not apply.
func unless(absent bool, v lua.LValue) lua.LValue {
	if absent {
		return lua.LNil
	}
	return v
}

// pointTable is {x, y, z}.
func pointTable(l *lua.LState, p [3]float64) *lua.LTable {
	t := l.CreateTable(3, 0)
	for _, v := range p {
		t.Append(lua.LNumber(v))
	}
	return t
}

func describePoint(p [3]float64) string {
	return "{" + number(p[0]) + ", " + number(p[1]) + ", " + number(p[2]) + "}"
}

// parallel reports whether a and b span no plane. It is model's rule for axes, asked earlier, where the line is known.
func parallel(a, b [3]float64) bool {
	c := [3]float64{
		float64(a[1]*b[2]) - float64(a[2]*b[1]), float64(a[2]*b[0]) - float64(a[0]*b[2]), float64(a[0]*b[1]) - float64(a[1]*b[0]),
	}
	dot := func(u, v [3]float64) float64 { return float64(u[0]*v[0]) + float64(u[1]*v[1]) + float64(u[2]*v[2]) }
	return !(dot(c, c) > 1e-18*dot(a, a)*dot(b, b))
}
