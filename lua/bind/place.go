package bind

import (
	"math"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/aim"
	"lampbook/engine/model"
)

// thing is a mesh that stands somewhere, in its materials.
type thing struct {
	model.Placement // Mesh and Materials are set when a frame uses the thing
	form            *form
	material        *material            // nil: the file's own, or the default
	slots           map[string]*material // materials of single slots, over material
	backdrop        bool                 // a camera fit and the default lights leave it out
	placed          bool                 // Mesh and Materials are set
}

const placeKeys = "mesh! material materials at turn scale name seen shadows backdrop"

func placeCalls() []call {
	return []call{
		{name: "place", keys: placeKeys, run: func(a *args) lua.LValue {
			return a.readThing(&thing{Placement: model.Placement{Scale: [3]float64{1, 1, 1}}})
		}},
		{name: "thing:with", change: true, run: func(a *args) lua.LValue {
			changed := *a.self.(*thing)
			return a.changing("place", placeKeys).readThing(&changed)
		}},
	}
}

// readThing reads the keys over what t holds.
func (a *args) readThing(t *thing) lua.LValue {
	valueArg(a, "mesh", kindMesh, &t.form)
	valueArg(a, "material", kindMaterial, &t.material)
	a.slotMaterials(t)
	a.point("at", &t.At, between(-maxLength, maxLength, "metres"))
	a.point("turn", &t.Turn, between(-1e6, 1e6, "degrees"))
	if n, ok := a.get("scale").(lua.LNumber); ok {
		s := a.checkNumber("scale", n, above0(maxLength, ""))
		t.Scale = [3]float64{s, s, s}
	} else {
		a.point("scale", &t.Scale, between(-maxLength, maxLength, ""))
	}
	if t.Scale[0] == 0 || t.Scale[1] == 0 || t.Scale[2] == 0 {
		a.failf("scale must not be 0 along any axis, got %s", describePoint(t.Scale))
	}
	for _, s := range t.Scale {
		if math.Abs(s) < least {
			a.failf("scale must be at least %s along every axis, or at most -%[1]s to mirror, got %s", number(least), describePoint(t.Scale))
		}
	}
	a.text("name", &t.Name)
	seen, shadows := !t.Hidden, !t.NoShadow
	a.boolean("seen", &seen)
	a.boolean("shadows", &shadows)
	t.Hidden, t.NoShadow = !seen, !shadows
	a.boolean("backdrop", &t.backdrop)
	t.placed = false
	return a.env.push(a.l, t)
}

// slotMaterials reads materials = { slot = material }.
func (a *args) slotMaterials(t *thing) {
	v := a.get("materials")
	if v == lua.LNil {
		return
	}
	table, ok := v.(*lua.LTable)
	if !ok {
		a.failf("materials must be a table { slot = material }, got %s", describe(v))
	}
	known := t.form.slots(a.env)
	slots := map[string]*material{}
	for name, m := range t.slots {
		slots[name] = m
	}
	for k, x := table.Next(lua.LNil); k != lua.LNil; k, x = table.Next(k) {
		name, ok := k.(lua.LString)
		if !ok {
			a.failf("materials must be a table { slot = material }, got the key %s", describe(k))
		}
		m, ok := valueOf[*material](x)
		if !ok {
			a.failf("materials: %s must be a material, got %s", short(string(name)), describe(x))
		}
		if t.form.failure == "" {
			a.knownSlot(string(name), known)
		}
		slots[string(name)] = m
	}
	t.slots = slots
}

func (a *args) knownSlot(name string, known []string) {
	for _, k := range known {
		if k == name {
			return
		}
	}
	if len(known) == 1 && known[0] == "" {
		a.failf("materials: the mesh has no slot %q, it is of one piece: give material", name)
	}
	a.failf("materials: the mesh has no slot %q%s", name, Hint(name, known))
}

// thingsOf reads a thing or a list of things; lists in it count as their elements, so that a module may give several at once.
func (a *args) thingsOf(what string, v lua.LValue) []*thing {
	if t, ok := valueOf[*thing](v); ok {
		return []*thing{t}
	}
	if isLight(v) {
		a.failf("%s must be things, got %s: lights = … takes it", what, describe(v))
	}
	var all []*thing
	const deepest = 8
	var walk func(v lua.LValue, deep int)
	walk = func(v lua.LValue, deep int) {
		for i, x := range a.list(what, v, "things", model.MaxThings) {
			if t, ok := valueOf[*thing](x); ok {
				all = append(all, t)
			} else if _, ok := x.(*lua.LTable); ok && deep < deepest {
				walk(x, deep+1)
			} else if _, ok := valueOf[*form](x); ok {
				a.failf("%s must hold things, got a mesh at place %d: write place{ mesh = … }", what, i+1)
			} else if isLight(x) {
				a.failf("%s must hold things, got %s at place %d: lights = { … } takes it", what, describe(x), i+1)
			} else {
				a.failf("%s must hold things, got %s at place %d", what, describe(x), i+1)
			}
			if len(all) > model.MaxThings {
				a.failf("%s must have at most %d things", what, model.MaxThings)
			}
		}
	}
	walk(v, 0)
	return all
}

// isLight reports whether a value is a light or several.
func isLight(v lua.LValue) bool {
	_, one := valueOf[*light](v)
	_, some := valueOf[*rig](v)
	return one || some
}

// inView leaves out the backdrops, unless there is nothing else.
func inView(things []*thing) []*thing {
	var fore []*thing
	for _, t := range things {
		if !t.backdrop {
			fore = append(fore, t)
		}
	}
	if len(fore) == 0 {
		return things
	}
	return fore
}

// framing is where the thing stands, as a fit sees it. Over a whole turn about the vertical its own last turn is of no account;
// leaving it out gives a turning thing the same camera, to the bit, in every frame. (The turn about y is the last only if
// there is none about z.)
func (t *thing) framing(sweep bool) model.Placement {
	pl := t.Placement
	if sweep && pl.Turn[2] == 0 {
		pl.Turn[1] = 0
	}
	return pl
}

// built pairs things with their meshes; none of them may have failed.
func built(e *Env, things []*thing, sweep bool) ([]aim.Thing, error) {
	out := make([]aim.Thing, len(things))
	for i, t := range things {
		m, err := t.form.build(e)
		if err != nil {
			return nil, err
		}
		out[i] = aim.Thing{Mesh: m, Placement: t.framing(sweep)}
	}
	return out, nil
}

// placement is the thing as the plan holds it.
func (t *thing) placement(e *Env) (model.Placement, error) {
	if t.placed {
		return t.Placement, nil
	}
	t.Mesh = t.form.planID(e)
	if len(t.slots) == 0 && (t.material != nil || t.form.Kind != model.MeshFile) {
		t.Materials = []model.MaterialID{t.slotMaterial(e, "", 0)}
		t.placed = true
		return t.Placement, nil
	}
	m, err := t.form.build(e)
	if err != nil {
		return model.Placement{}, err
	}
	t.Materials = nil
	same := true
	for i, slot := range m.SlotNames {
		t.Materials = append(t.Materials, t.slotMaterial(e, slot, i))
		same = same && t.Materials[i] == t.Materials[0]
	}
	if same {
		t.Materials = t.Materials[:1]
	}
	t.placed = true
	return t.Placement, nil
}

// slotMaterial is the material of one slot: its own, else the thing's, else the file's, else the default.
func (t *thing) slotMaterial(e *Env, slot string, i int) model.MaterialID {
	if own := t.slots[slot]; own != nil {
		return own.planID(e)
	}
	if t.material != nil {
		return t.material.planID(e)
	}
	if t.form.Kind == model.MeshFile {
		if m, err := t.form.build(e); err == nil && m != nil && i < len(m.Materials) {
			return e.materialID(m.Materials[i])
		}
	}
	return e.materialID(defaultMaterial())
}

func (*thing) kind() string     { return kindThing }
func (*thing) maker() string    { return "place" }
func (*thing) fields() []string { return namesOf(placeKeys) }

func (t *thing) field(e *Env, l *lua.LState, name string) lua.LValue {
	switch name {
	case "mesh":
		return e.push(l, t.form)
	case "material":
		if t.material == nil {
			return lua.LNil
		}
		return e.push(l, t.material)
	case "materials":
		if len(t.slots) == 0 {
			return lua.LNil
		}
		var names []string
		for n := range t.slots {
			names = append(names, n)
		}
		table := l.NewTable()
		for _, n := range sorted(names) {
			table.RawSetString(n, e.push(l, t.slots[n]))
		}
		return table
	case "at":
		return pointTable(l, t.At)
	case "turn":
		return pointTable(l, t.Turn)
	case "scale":
		return pointTable(l, t.Scale)
	case "name":
		return unless(t.Name == "", lua.LString(t.Name))
	case "seen":
		return lua.LBool(!t.Hidden)
	case "shadows":
		return lua.LBool(!t.NoShadow)
	}
	return lua.LBool(t.backdrop)
}
