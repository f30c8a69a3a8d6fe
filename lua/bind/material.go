package bind

import (
	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// material is a surface, with its place in the plan once a frame has used it.
type material struct {
	model.Material
	ambientGiven bool // else ambient follows diffuse
	id           *model.MaterialID
}

const blinnPhongKeys = "diffuse specular ambient emission shininess normalized opacity"

func materialCalls() []call {
	return []call{
		{name: "material.blinn_phong", keys: blinnPhongKeys, run: func(a *args) lua.LValue {
			return a.blinnPhong(&material{Material: defaultMaterial()})
		}},
		{name: "material:with", change: true, run: func(a *args) lua.LValue {
			changed := *a.self.(*material)
			return a.changing("material.blinn_phong", blinnPhongKeys).blinnPhong(&changed)
		}},
	}
}

// defaultMaterial is the surface of what names none: mid grey with a soft highlight.
func defaultMaterial() model.Material {
	return model.Material{
		Kind: model.BlinnPhong, Diffuse: tint.Grey(0.5), Specular: tint.Grey(0.2), Ambient: tint.Grey(0.5), Shininess: 30, Opacity: 1,
	}
}

// blinnPhong reads the keys over what m holds.
func (a *args) blinnPhong(m *material) lua.LValue {
	a.color("diffuse", &m.Diffuse, 1)
	a.color("specular", &m.Specular, 1)
	m.ambientGiven = a.color("ambient", &m.Ambient, 1) || m.ambientGiven
	if !m.ambientGiven {
		m.Ambient = m.Diffuse
	}
	a.color("emission", &m.Emission, maxComponent)
	a.number("shininess", &m.Shininess, between(0, 100_000, ""))
	a.boolean("normalized", &m.Normalized)
	a.number("opacity", &m.Opacity, limit{low: 0, high: 1, set: true, above: true})
	m.id = nil
	return a.env.push(a.l, m)
}

func (*material) kind() string     { return kindMaterial }
func (*material) maker() string    { return "material.blinn_phong" }
func (*material) fields() []string { return namesOf(blinnPhongKeys) }

func (m *material) field(e *Env, l *lua.LState, name string) lua.LValue {
	switch name {
	case "diffuse":
		return e.push(l, color{m.Diffuse})
	case "specular":
		return e.push(l, color{m.Specular})
	case "ambient":
		return e.push(l, color{m.Ambient})
	case "emission":
		return e.push(l, color{m.Emission})
	case "shininess":
		return lua.LNumber(m.Shininess)
	case "normalized":
		return lua.LBool(m.Normalized)
	}
	return lua.LNumber(m.Opacity)
}

// planID is the material's place in the plan.
func (m *material) planID(e *Env) model.MaterialID {
	if m.id == nil {
		id := e.materialID(m.Material)
		m.id = &id
	}
	return *m.id
}
