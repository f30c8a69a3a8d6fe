package bind

import (
	"fmt"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/aim"
	"lampbook/engine/model"
)

// rig is lights together, each with a name that no other of them has.
type rig struct {
	lights []*light
	ids    []model.LightID // in the plan, once a frame has used the rig
}

func rigCalls() []call {
	return []call{
		{name: "rig", list: "lights", run: func(a *args) lua.LValue {
			return a.env.push(a.l, a.newRig(a.lightsOf("rig", a.table)))
		}},
		{name: "rig:turned", params: "degrees!", run: rigTurned},
		{name: "rig:brighter", params: "stops!", run: rigBrighter},
		{name: "rig:only", params: "names!", run: func(a *args) lua.LValue { return a.pickLights(true) }},
		{name: "rig:without", params: "names!", run: func(a *args) lua.LValue { return a.pickLights(false) }},
		{name: "rig:with", change: true, run: rigWith},
		{name: "rig:meter", keys: "at facing", run: rigMeter},
		{name: "rig:names", run: rigNames},
	}
}

func (*rig) kind() string     { return kindRig }
func (*rig) maker() string    { return "rig" }
func (*rig) fields() []string { return []string{"count"} }

func (r *rig) field(_ *Env, _ *lua.LState, _ string) lua.LValue { return lua.LNumber(len(r.lights)) }

// lightsOf reads a list of lights and rigs.
func (a *args) lightsOf(what string, v lua.LValue) []*light {
	if t, ok := v.(*lua.LTable); ok && t == nil {
		return nil
	}
	var all []*light
	for i, x := range a.list(what, v, "lights", model.MaxLights) {
		if l, ok := valueOf[*light](x); ok {
			all = append(all, l)
		} else if r, ok := valueOf[*rig](x); ok {
			all = append(all, r.lights...)
		} else {
			a.failf("%s must hold lights and rigs, got %s at place %d", what, describe(x), i+1)
		}
	}
	if len(all) > model.MaxLights {
		a.failf("%s must have at most %d lights, got %d", what, model.MaxLights, len(all))
	}
	return all
}

// newRig names the lights that have no name by kind and number, "area 1", and refuses a name given twice.
func (a *args) newRig(lights []*light) *rig {
	taken := map[string]bool{}
	for _, l := range lights {
		if !l.named {
			continue
		}
		if taken[l.Name] {
			a.failf("two lights are named %q: give each a name of its own", l.Name)
		}
		taken[l.Name] = true
	}
	r := &rig{}
	// A number that a light had in its own rig stays with it where it is free: the name keys the light's sample points.
	for _, l := range lights {
		if !l.named {
			free := *l
			if free.Name == "" || taken[free.Name] {
				free.id = nil
				for n := 1; free.Name == "" || taken[free.Name]; n++ {
					free.Name = fmt.Sprintf("%s %d", lightMakers[l.Kind].word, n)
				}
			}
			taken[free.Name] = true
			l = &free
		}
		r.lights = append(r.lights, l)
	}
	return r
}

// models are the lights as the plan holds them.
func (r *rig) models() []model.Light {
	out := make([]model.Light, len(r.lights))
	for i, l := range r.lights {
		out[i] = l.Light
	}
	return out
}

// planIDs are the lights' places in the plan. The slice is shared by all frames under the rig.
func (r *rig) planIDs(e *Env) []model.LightID {
	if r.ids == nil {
		for _, l := range r.lights {
			if l.id == nil {
				id := e.lightID(l.Light)
				l.id = &id
			}
			r.ids = append(r.ids, *l.id)
		}
	}
	return r.ids
}

func (r *rig) lightNames() []string {
	var names []string
	for _, l := range r.lights {
		names = append(names, l.Name)
	}
	return names
}

func rigTurned(a *args) lua.LValue {
	var degrees float64
	a.number("degrees", &degrees, between(-1e6, 1e6, "degrees"))
	r := a.self.(*rig)
	turned := &rig{}
	for i, m := range aim.TurnLights(r.models(), degrees) {
		l := *r.lights[i]
		l.Light, l.id = m, nil
		turned.lights = append(turned.lights, &l)
	}
	return a.env.push(a.l, turned)
}

func rigBrighter(a *args) lua.LValue {
	var stops float64
	a.number("stops", &stops, between(-40, 40, "stops"))
	brighter := &rig{}
	for _, old := range a.self.(*rig).lights {
		l := *old
		l.stops += stops
		l.id = nil
		a.scaleTo(&l)
		brighter.lights = append(brighter.lights, &l)
	}
	return a.env.push(a.l, brighter)
}

// pickLights keeps the lights that are named, or those that are not.
func (a *args) pickLights(keep bool) lua.LValue {
	r := a.self.(*rig)
	known := r.lightNames()
	chosen := map[string]bool{}
	for _, n := range a.words("names", a.get("names"), model.MaxLights) {
		a.knownLight(n, known)
		chosen[n] = true
	}
	picked := &rig{}
	for _, l := range r.lights {
		if chosen[l.Name] == keep {
			picked.lights = append(picked.lights, l)
		}
	}
	return a.env.push(a.l, picked)
}

func (a *args) knownLight(name string, known []string) {
	for _, k := range known {
		if k == name {
			return
		}
	}
	a.failf("no light is named %q%s", name, Hint(name, known))
}

// words reads a text or a list of texts.
func (a *args) words(what string, v lua.LValue, many int) []string {
	if s, ok := v.(lua.LString); ok {
		return []string{a.checkText(what, s)}
	}
	var words []string
	for _, x := range a.list(what, v, "texts", many) {
		words = append(words, a.checkText(what, x))
	}
	return words
}

// rigWith replaces lights by name: each value is another light, or a table of what to change in the one that stands there.
func rigWith(a *args) lua.LValue {
	r := a.self.(*rig)
	if a.table == nil {
		return a.env.push(a.l, r)
	}
	known := r.lightNames()
	changed := &rig{lights: append([]*light{}, r.lights...)}
	for k, v := a.table.Next(lua.LNil); k != lua.LNil; k, v = a.table.Next(k) {
		name, ok := k.(lua.LString)
		if !ok {
			a.failf("takes lights by name, got the key %s; accepted: %s", describe(k), joined(known))
		}
		a.knownLight(string(name), known)
		for i, l := range r.lights {
			if l.Name == string(name) {
				changed.lights[i] = a.exchanged(l, v)
			}
		}
	}
	return a.env.push(a.l, a.newRig(changed.lights))
}

// exchanged is the light that stands in the place of l.
func (a *args) exchanged(l *light, v lua.LValue) *light {
	if t, ok := v.(*lua.LTable); ok {
		copied := *l
		return (&args{env: a.env, l: a.l, entry: a.entry, table: t}).changeLight(&copied)
	}
	other, ok := valueOf[*light](v)
	if !ok {
		a.failf("%s must be a light, or a table of what to change in it, got %s", l.Name, describe(v))
	}
	if !other.named {
		renamed := *other
		renamed.Name, renamed.named, renamed.id = l.Name, l.named, nil
		return &renamed
	}
	return other
}

func rigMeter(a *args) lua.LValue {
	at, facing := [3]float64{}, [3]float64{0, 0, 1}
	a.point("at", &at, between(-maxLength, maxLength, "metres"))
	a.point("facing", &facing, limit{})
	stops, err := aim.Meter(a.self.(*rig).models(), at, facing)
	if err != nil {
		a.failf("%v", err)
	}
	return lua.LNumber(stops)
}

func rigNames(a *args) lua.LValue {
	names := a.l.NewTable()
	for _, n := range a.self.(*rig).lightNames() {
		names.Append(lua.LString(n))
	}
	return names
}
