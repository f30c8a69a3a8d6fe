package lamp

import (
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
)

// shadowed samples the lamp at p, facing up, as a renderer does, and returns the irradiance of the samples that blocked
// lets through. blocked is asked where the way to the lamp crosses the plane y = height.
func shadowed(s Spec, p geom.Vec3, height float32, samples int, blocked func(x, z float32) bool) float64 {
	l := New(s)
	var q Prepared
	l.Prepare(p, &q)
	uv := make([][2]float32, samples)
	sample.Key(314).Points(0, uv)
	sum := 0.0
	for _, c := range uv {
		wi, _, w := q.Sample(c[0], c[1])
		t := (height - p.Y) / wi.Y
		if !blocked(p.X+t*wi.X, p.Z+t*wi.Z) {
			sum += float64(w * max(wi.Y, 0))
		}
	}
	return sum / float64(samples)
}

// TestPenumbraEdge: a rectangle w by l at the height hL over a half-plane that is opaque for x < 0, at the height ho.
// Source: rows PEN-EDGE, Lambert's formula on the visible part; standard formula, from memory. 1 % at 1024 samples of what
// an open surface receives, as the table says for the row.
func TestPenumbraEdge(t *testing.T) {
	for _, c := range []struct {
		w, l, hL, ho, x float64
		want, open      float64
	}{
		{1, 1, 2, 1, -0.5, 0.0, 0.207918813257321},
		{1, 1, 2, 1, -0.4, 0.017330747493195804, 0.21579111529670705},
		{1, 1, 2, 1, -0.25, 0.04994484485602565, 0.22479248590987988},
		{1, 1, 2, 1, 0.0, 0.11541839886508538, 0.23083679773017077},
		{1, 1, 2, 1, 0.1, 0.14134448786400913, 0.22985480344005094},
		{1, 1, 2, 1, 0.25, 0.17484764105385422, 0.22479248590987988},
		{1, 1, 2, 1, 0.4, 0.19846036780351126, 0.21579111529670705},
		{1, 1, 2, 1, 0.5, 0.207918813257321, 0.207918813257321},
		{1, 1, 2, 0.5, -0.16666666666666666, 0.0, 0.22812316876900496},
		{1, 1, 2, 0.5, -0.13333333333333333, 0.02045421408817713, 0.22909499656278798},
		{1, 1, 2, 0.5, -0.08333333333333333, 0.054205021421988006, 0.23015424701800252},
		{1, 1, 2, 0.5, -0.03333333333333333, 0.09054418969920955, 0.2307274028304458},
		{1, 1, 2, 0.5, 0.0, 0.11541839886508538, 0.23083679773017077},
		{1, 1, 2, 0.5, 0.08333333333333333, 0.1759492255960145, 0.23015424701800252},
		{2, 0.5, 3, 1, -0.5, 0.0, 0.09881235473227194},
		{2, 0.5, 3, 1, -0.25, 0.022369221032462826, 0.10205352488737217},
		{2, 0.5, 3, 1, 0.0, 0.05158195283944119, 0.10316390567888238},
		{2, 0.5, 3, 1, 0.1, 0.06349307251022104, 0.10298521866867406},
		{2, 0.5, 3, 1, 0.5, 0.09881235473227194, 0.09881235473227194},
	} {
		s := Spec{Kind: Rectangle, Position: v3{Y: c.hL}, Up: v3{Z: 1}, Width: c.w, Height: c.l}
		got := shadowed(s, geom.Vec3{X: float32(c.x)}, float32(c.ho), 1024, func(x, _ float32) bool { return x < 0 })
		if math.Abs(got-c.want) > 0.01*c.open {
			t.Errorf("%+v: %.6f", c, got)
		}
		l := New(s)
		if open := l.Irradiance(v3{X: c.x}, up); math.Abs(open/c.open-1) > 1e-6 {
			t.Errorf("%+v: nothing in the way, %.9f", c, open)
		}
	}
}

// TestPenumbraDisk: a disk of radius RL at hL over an opaque disk of radius Ro at ho, on one axis, x from it.
// Source: rows PEN-DISK, quadrature over the visible lune; standard formula, from memory.
func TestPenumbraDisk(t *testing.T) {
	for _, c := range []struct{ rL, hL, ro, ho, x, want, open float64 }{
		{1, 4, 0.5, 2, 0.5, 0.05897976102182332, 0.1797848932348761},
		{1, 4, 0.5, 2, 1, 0.10794550167316178, 0.16583607593663335},
		{1, 4, 0.25, 2, 0, 0.13647017398979822, 0.18480253383512074},
	} {
		s := Spec{Kind: Disk, Position: v3{Y: c.hL}, Radius: c.rL}
		r2 := float32(c.ro * c.ro)
		got := shadowed(s, geom.Vec3{X: float32(c.x)}, float32(c.ho), 4096, func(x, z float32) bool { return x*x+z*z < r2 })
		if math.Abs(got-c.want) > 0.01*c.open {
			t.Errorf("%+v: %.6f", c, got)
		}
		l := New(s)
		if open := l.Irradiance(v3{X: c.x}, up); math.Abs(open/c.open-1) > 2e-5 { // the row's quadrature: 0.18480254 for x = 0, where π/17 = 0.18479957 is exact
			t.Errorf("%+v: nothing in the way, %.9f", c, open)
		}
	}
}

// TestUmbra checks where full shadow ends and full light begins. Source: PEN-UMBRA-DISK (umbra to 1, penumbra to 3) and
// PEN-SPHERES (similar cones); standard formulas, from memory.
func TestUmbra(t *testing.T) {
	disk := Spec{Kind: Disk, Position: v3{Y: 4}, Radius: 1}
	screen := func(x, z float32) bool { return x*x+z*z < 1 }
	ball := Spec{Kind: Sphere, Position: v3{Y: 6}, Radius: 1}
	for _, c := range []struct {
		name    string
		got     float64
		dark    bool
		unshade float64 // what full light would be
	}{
		{"disk, just inside the umbra", shadowed(disk, geom.Vec3{X: 0.99}, 2, 1024, screen), true, 0},
		{"disk, just outside the umbra", shadowed(disk, geom.Vec3{X: 1.2}, 2, 4096, screen), false, 0},
		{"disk, at the end of the penumbra", shadowed(disk, geom.Vec3{X: 3.01}, 2, 1024, screen), false, closed(disk, v3{X: 3.01})},
		{"sphere behind a ball of half its size, in the umbra", ballShadow(ball, 0.2519), true, 0},
		{"sphere, just outside the umbra", ballShadow(ball, 0.35), false, 0},
		{"sphere, at the end of the penumbra", ballShadow(ball, 1.3485), false, closed(ball, v3{X: 1.3485})},
	} {
		if c.dark != (c.got == 0) {
			t.Errorf("%s: %v", c.name, c.got)
		}
		if c.unshade > 0 && math.Abs(c.got/c.unshade-1) > 1e-3 {
			t.Errorf("%s: %v, full light is %v", c.name, c.got, c.unshade)
		}
	}
}

func closed(s Spec, p v3) float64 {
	l := New(s)
	return l.Irradiance(p, up)
}

// ballShadow puts an opaque ball of radius 0.5 at (0, 2, 0) between the lamp and the point (x, 0, 0).
func ballShadow(s Spec, x float64) float64 {
	l := New(s)
	var q Prepared
	l.Prepare(geom.Vec3{X: float32(x)}, &q)
	d := v3{X: -x, Y: 2}
	sum := 0.0
	const samples = 4096
	for i := range uint32(samples) {
		wi, _, w := q.Sample(sample.Key(7).Point(i))
		along := d.Dot(wi.Wide())
		if d.Dot(d)-along*along >= 0.25 {
			sum += float64(w*max(wi.Y, 0)) / samples
		}
	}
	return sum
}
