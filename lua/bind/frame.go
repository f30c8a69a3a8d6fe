package bind

import (
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/aim"
	"lampbook/engine/model"
)

const frameKeys = "things! name tags camera lights " + settingsKeys

func frameCalls() []call {
	return []call{{name: "frame", keys: frameKeys, run: func(a *args) lua.LValue {
		a.newFrame()
		return nil
	}}}
}

// newFrame registers a frame.
func (a *args) newFrame() {
	e := a.env
	if len(e.plan.Frames) == model.MaxFrames {
		a.failf("the plan has %d frames already: no more are accepted", model.MaxFrames)
	}
	f := model.Frame{Pos: e.callSite(a.l), Tags: a.tags()}
	f.Name = a.frameName(f.Tags)

	s := e.settings
	s.exposure.given = false
	a.readSettings(&s)
	e.Forced.apply(&s)
	things := a.thingsOf("things", a.get("things"))
	if len(things) == 0 {
		a.failf("things must hold at least one thing")
	}
	var cam *view
	if !valueArg(a, "camera", kindCamera, &cam) {
		cam = defaultFit(things)
	}
	r := a.frameLights()

	if f.Failure = failureOf(things, cam); f.Failure == "" {
		a.placeThings(&f, things)
		var err error
		if f.Camera, err = cam.resolve(e, s.aspect()); err != nil {
			a.failf("camera: %v", err)
		}
		if r == nil {
			r = a.defaultRig(things)
		}
		f.Lights = r.planIDs(e)
		s.Exposure = a.exposureOf(s.exposure, cam, r, things, f.Camera)
	}
	f.Settings = s.Settings
	e.passes = e.passes || len(s.Passes) > 0
	e.names[strings.ToLower(f.Name)] = len(e.plan.Frames)
	e.plan.Frames = append(e.plan.Frames, f)
}

// failureOf is why a frame cannot be rendered: a mesh in it, or in what its camera frames, did not load.
func failureOf(things []*thing, cam *view) string {
	for _, t := range things {
		if t.form.failure != "" {
			return t.form.failure
		}
	}
	if cam.fit != nil {
		return cam.fit.failure()
	}
	return ""
}

// placeThings writes the things into the frame.
func (a *args) placeThings(f *model.Frame, things []*thing) {
	f.Things = make([]model.Placement, 0, len(things))
	var taken map[string]bool
	for _, t := range things {
		pl, err := t.placement(a.env)
		if err != nil {
			a.failf("things: %v", err)
		}
		if pl.Name != "" {
			if taken[pl.Name] {
				a.failf("two things are named %q: give each a name of its own", pl.Name)
			}
			if taken == nil {
				taken = map[string]bool{}
			}
			taken[pl.Name] = true
		}
		f.Things = append(f.Things, pl)
	}
}

// defaultFit is the camera of a frame that names none: it holds the things over a whole turn, so that the picture does not
// pump when they turn.
func defaultFit(things []*thing) *view {
	v := defaultView()
	v.FocalMM = fitFocal
	v.fit = &fit{things: things, direction: fitDirection, margin: fitMargin, sweep: true}
	return v
}

// frameLights reads the lights; nil if none were named.
func (a *args) frameLights() *rig {
	v := a.get("lights")
	if v == lua.LNil {
		return nil
	}
	if r, ok := valueOf[*rig](v); ok {
		return r
	}
	if l, ok := valueOf[*light](v); ok {
		return a.newRig([]*light{l})
	}
	if _, ok := v.(*lua.LTable); !ok {
		a.failf("lights must be a rig or a list of lights, got %s", describe(v))
	}
	return a.newRig(a.lightsOf("lights", v))
}

// stage is the room that things take, whichever way they are turned about the vertical.
type stage struct {
	centre [3]float64
	radius float64
	rig    *rig // the default lights for it
}

// stageOf works out the stage of the things, backdrops left out.
func (a *args) stageOf(things []*thing) *stage {
	e := a.env
	things = inView(things)
	key := string(thingsKey(nil, e, things, true))
	if s, ok := e.stages[key]; ok {
		return s
	}
	list, err := built(e, things, true)
	if err != nil {
		a.failf("things: %v", err)
	}
	s := &stage{}
	e.engine(func() { s.centre, s.radius = aim.Bounds(list) })
	s.rig = &rig{}
	for _, l := range aim.DefaultLights(s.centre, s.radius) {
		s.rig.lights = append(s.rig.lights, &light{Light: l, named: true, intensity: l.Intensity, power: -1})
	}
	if len(e.stages) >= maxAnswers {
		clear(e.stages)
	}
	e.stages[key] = s
	return s
}

func (a *args) defaultRig(things []*thing) *rig { return a.stageOf(things).rig }

// exposureOf is the exposure that counts: the frame's, else the camera's, else the one in settings, else what an incident light meter
// shows among the things of the first frame that states none, held for all such frames after it.
func (a *args) exposureOf(frame exposure, cam *view, r *rig, things []*thing, camera model.Camera) float64 {
	e := a.env
	switch {
	case frame.given:
		return frame.stops
	case cam.exposure.given:
		return cam.exposure.stops
	case e.settings.exposure.given:
		return e.settings.exposure.stops
	}
	if e.metered == nil {
		stops := a.meterStage(a.stageOf(things).centre, camera, r)
		e.metered = &stops
	}
	return *e.metered
}

// meterStage holds a meter among the things: towards the camera, or, where no light comes from there, upward.
func (a *args) meterStage(at [3]float64, camera model.Camera, r *rig) float64 {
	lights := r.models()
	towards := [3]float64{camera.Position[0] - at[0], camera.Position[1] - at[1], camera.Position[2] - at[2]}
	for _, facing := range [][3]float64{towards, {0, 1, 0}} {
		if stops, err := aim.Meter(lights, at, facing); err == nil && stops >= -100 && stops <= 100 {
			return stops
		}
	}
	a.env.warn(a.env.callSite(a.l), "no light reaches the middle of the things, so the exposure is 0 stops; settings{ exposure = … } sets another")
	return 0
}
