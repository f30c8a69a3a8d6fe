package bind

import (
	"encoding/binary"
	"fmt"
	"math"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/aim"
	"lampbook/engine/model"
)

// view is a camera as the scene stated it. What depends on the shape of the picture (a vertical field of view, a fit) is worked
// out for each frame.
type view struct {
	model.Camera
	fov      float64 // vertical field of view in degrees; 0: FocalMM counts
	exposure exposure
	fit      *fit // what to frame; nil: Position and Target count
}

// exposure is stated in stops, or not at all.
type exposure struct {
	stops float64
	given bool
}

// fit is what a camera is to frame, and from where. The optics are those of the view.
type fit struct {
	things    []*thing
	direction [3]float64
	margin    float64
	sweep     bool
}

// fitted is the answer to a fit.
type fitted struct {
	camera model.Camera
	err    error
}

const (
	opticsKeys = " f_number exposure ev100 projection"
	cameraKeys = "position! target up focal sensor fov focus shift height" + opticsKeys
	fitKeys    = "things! direction up margin focal sensor over" + opticsKeys
)

func cameraCalls() []call {
	return []call{
		{name: "camera", keys: cameraKeys, run: func(a *args) lua.LValue {
			v := defaultView()
			a.readView(v)
			return a.env.push(a.l, v)
		}},
		{name: "camera.fit", keys: fitKeys, run: func(a *args) lua.LValue {
			v := defaultView()
			v.FocalMM = fitFocal
			v.fit = &fit{direction: fitDirection, margin: fitMargin}
			a.readFit(v)
			return a.env.push(a.l, v)
		}},
		{name: "camera:with", change: true, run: cameraWith},
	}
}

// fitFocal is the lens of a camera that fits: product photographs are made with 85 to 105 mm, which draws without stretching.
const fitFocal = 85

// fitMargin is a tenth of the picture's height; fitDirection looks down by 22 degrees, in the middle of what product views use.
const fitMargin = 0.1

var fitDirection = [3]float64{0, 0.4, 1}

// maxAnswers bounds the answers that an Env remembers; a scene that asks for more seldom asks twice.
const maxAnswers = 4096

func defaultView() *view {
	return &view{Camera: model.Camera{Up: [3]float64{0, 1, 0}, FocalMM: 50, SensorMM: 36}}
}

var projections = []string{model.Perspective: "perspective", model.Orthographic: "orthographic"}

// optics reads what both cameras take.
func (a *args) optics(v *view) {
	projection := int(v.Projection)
	a.oneOf("projection", projections, &projection)
	v.Projection = model.Projection(projection)
	a.point("up", &v.Up, limit{})
	if a.number("focal", &v.FocalMM, above0(10_000, "millimetres")) {
		v.fov = 0
	}
	a.number("sensor", &v.SensorMM, above0(10_000, "millimetres"))
	a.number("f_number", &v.FNumber, above0(10_000, ""))
	a.exclude("exposure", "ev100")
	v.exposure.given = a.number("exposure", &v.exposure.stops, between(-100, 100, "stops")) || v.exposure.given
	var ev float64
	if a.number("ev100", &ev, between(-90, 90, "")) {
		v.exposure = exposure{aim.ExposureFromEV100(ev), true}
	}
}

func (a *args) readView(v *view) {
	a.exclude("focal", "fov")
	a.optics(v)
	place := between(-maxLength, maxLength, "metres")
	a.point("position", &v.Position, place)
	a.point("target", &v.Target, place)
	a.number("fov", &v.fov, limit{low: 0, high: 170, set: true, above: true, unit: "degrees"})
	a.number("focus", &v.FocusDistance, lengthAbove0())
	a.pair("shift", "{x, y}", &v.Shift, between(-10, 10, "widths or heights of the picture"))
	a.number("height", &v.Height, lengthAbove0())
	if v.Projection == model.Orthographic && v.Height == 0 {
		a.failf("height must be given for an orthographic camera: how many metres it sees from bottom to top")
	}
	if v.Projection == model.Perspective && a.given("height") {
		a.failf("height is for projection = \"orthographic\"; a perspective camera takes focal or fov")
	}
	if v.Position == v.Target {
		a.failf("position and target must be two different points, both are %s", describePoint(v.Target))
	}
	axis := [3]float64{v.Target[0] - v.Position[0], v.Target[1] - v.Position[1], v.Target[2] - v.Position[2]}
	if parallel(axis, v.Up) {
		a.failf("up %s runs along the view: give another", describePoint(v.Up))
	}
}

func (a *args) readFit(v *view) {
	a.optics(v)
	f := *v.fit
	if x := a.get("things"); x != lua.LNil {
		f.things = a.thingsOf("things", x)
	}
	if len(f.things) == 0 {
		a.failf("things must hold at least one thing to frame")
	}
	a.point("direction", &f.direction, limit{})
	a.number("margin", &f.margin, between(0, 0.45, "of the picture's height"))
	var over *turntable
	if valueArg(a, "over", kindTurntable, &over) {
		f.sweep = true
	}
	v.fit = &f
	// The frame may have another shape; but what is wrong with the fit is wrong in any shape, and here the line is known.
	if f.failure() == "" {
		if _, err := v.resolve(a.env, a.env.aspect()); err != nil {
			a.failf("%v", err)
		}
	}
}

func cameraWith(a *args) lua.LValue {
	v := *a.self.(*view)
	if v.fit != nil {
		a.changing("camera.fit", fitKeys).readFit(&v)
	} else {
		a.changing("camera", cameraKeys).readView(&v)
	}
	return a.env.push(a.l, &v)
}

// failure is why a thing to be framed did not load, or "".
func (f *fit) failure() string {
	for _, t := range f.things {
		if t.form.failure != "" {
			return t.form.failure
		}
	}
	return ""
}

// resolve works the camera out for a picture of the aspect ratio, width over height.
func (v *view) resolve(e *Env, aspect float64) (model.Camera, error) {
	if v.fit == nil {
		c := v.Camera
		if v.fov > 0 {
			c.FocalMM = aim.FocalFromFOV(v.fov, c.SensorMM, aspect)
		}
		return c, nil
	}
	key := v.key(e, aspect)
	done, ok := e.fits[key]
	if !ok {
		done = v.solve(e, aspect)
		if len(e.fits) >= maxAnswers {
			clear(e.fits)
		}
		e.fits[key] = done
	}
	return done.camera, done.err
}

// key tells one fit from another.
func (v *view) key(e *Env, aspect float64) string {
	f := v.fit
	b := appendFloats(nil, f.direction[:]...)
	b = appendFloats(b, v.Up[:]...)
	b = appendFloats(b, f.margin, aspect, float64(v.Projection), v.FocalMM, v.SensorMM, v.FNumber)
	return string(thingsKey(b, e, inView(f.things), f.sweep))
}

// thingsKey appends what a fit sees of the things.
func thingsKey(b []byte, e *Env, things []*thing, sweep bool) []byte {
	b = fmt.Appendf(b, "%t", sweep)
	for _, t := range things {
		pl := t.framing(sweep)
		b = appendFloats(b, float64(t.form.planSerial(e)))
		b = appendFloats(b, pl.At[:]...)
		b = appendFloats(b, pl.Turn[:]...)
		b = appendFloats(b, pl.Scale[:]...)
	}
	return b
}

func appendFloats(b []byte, values ...float64) []byte {
	for _, v := range values {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(v))
	}
	return b
}

// solve asks for the fit.
func (v *view) solve(e *Env, aspect float64) fitted {
	f := v.fit
	things, err := built(e, inView(f.things), f.sweep)
	if err != nil {
		return fitted{err: err}
	}
	var c model.Camera
	e.engine(func() {
		c, err = aim.Fit(aim.FitSpec{
			Things: things, Sweep: f.sweep, Direction: f.direction, Up: v.Up, Margin: f.margin, Aspect: aspect,
			Projection: v.Projection, FocalMM: v.FocalMM, SensorMM: v.SensorMM,
		})
	})
	c.FNumber = v.FNumber
	return fitted{c, err}
}

func (*view) kind() string { return kindCamera }

func (v *view) maker() string {
	if v.fit != nil {
		return "camera.fit"
	}
	return "camera"
}

func (v *view) fields() []string {
	return namesOf("position target up focal sensor fov focus shift height f_number exposure projection")
}

// field reads the camera as it is for a picture of the size in force.
func (v *view) field(e *Env, l *lua.LState, name string) lua.LValue {
	c, err := v.resolve(e, e.aspect())
	if err != nil {
		c = v.Camera
	}
	perspective := c.Projection == model.Perspective
	switch name {
	case "position":
		return pointTable(l, c.Position)
	case "target":
		return pointTable(l, c.Target)
	case "up":
		return pointTable(l, c.Up)
	case "focal":
		return unless(!perspective || v.fov > 0, lua.LNumber(c.FocalMM))
	case "sensor":
		return unless(!perspective, lua.LNumber(c.SensorMM))
	case "fov":
		return unless(v.fov == 0, lua.LNumber(v.fov))
	case "focus":
		return unless(c.FocusDistance == 0, lua.LNumber(c.FocusDistance))
	case "shift":
		t := l.CreateTable(2, 0)
		t.Append(lua.LNumber(c.Shift[0]))
		t.Append(lua.LNumber(c.Shift[1]))
		return t
	case "height":
		return unless(perspective, lua.LNumber(c.Height))
	case "f_number":
		return unless(c.FNumber == 0, lua.LNumber(c.FNumber))
	case "exposure":
		return unless(!v.exposure.given, lua.LNumber(v.exposure.stops))
	}
	return lua.LString(projections[c.Projection])
}
