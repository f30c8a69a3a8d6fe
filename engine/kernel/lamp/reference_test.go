package lamp

import (
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
)

type v3 = geom.Vec3d

var (
	up, down = v3{Y: 1}, v3{Y: -1}
	origin   v3
)

// lit is one lamp, one place and the illuminance there. Rows IR-DISK: Howell, "A catalog of radiation heat transfer
// configuration factors", B-12, B-13, B-15; IR-SPH: the same, element to sphere; IR-RECT: B-3, B-4; IR-PT and IR-COS3:
// inverse square and cosine laws. Confidence B or C (standard formulas), computed with 30 digits.
type lit struct {
	id   string
	spec Spec
	p, n v3
	want float64
}

func areaRows() []lit {
	deg := math.Pi / 180
	disk := func(r float64, at v3) Spec { return Spec{Kind: Disk, Position: at, Radius: r} }
	ball := func(d float64) Spec { return Spec{Kind: Sphere, Position: v3{Y: d}, Radius: 1} }
	tilted := func(angle float64) v3 { return v3{X: math.Sin(angle * deg), Y: math.Cos(angle * deg)} }
	// A rectangle a by b at the height c, one corner above the origin.
	ceiling := func(a, b, c float64) Spec {
		return Spec{Kind: Rectangle, Position: v3{X: a / 2, Y: c, Z: b / 2}, Up: v3{Z: 1}, Width: a, Height: b}
	}
	// A wall of height a and width b at the distance c, one lower corner opposite the origin.
	wall := func(a, b, c float64) Spec {
		return Spec{Kind: Rectangle, Position: v3{X: c, Y: a / 2, Z: b / 2}, Direction: v3{X: -1}, Up: up, Width: b, Height: a}
	}
	return []lit{
		{"IR-DISK-AX-1-1", disk(1, v3{Y: 1}), origin, up, 1.5707963267948966},
		{"IR-DISK-AX-2-1", disk(2, v3{Y: 1}), origin, up, 2.5132741228718345},
		{"IR-DISK-AX-1-10", disk(1, v3{Y: 10}), origin, up, 0.031104877758314785},
		{"IR-DISK-TILT-1-2-60", disk(1, v3{Y: 2}), origin, tilted(60), 0.3141592653589793},
		{"IR-DISK-OFF-1-0.5-1", disk(1, v3{X: 0.5, Y: 1}), origin, up, 1.375963021307188},
		{"IR-DISK-OFF-1-1-1", disk(1, v3{X: 1, Y: 1}), origin, up, 0.868314853690824},
		{"IR-DISK-OFF-1-2-1", disk(1, v3{X: 2, Y: 1}), origin, up, 0.16583338058675134},
		{"IR-DISK-PERP-1-2-1", disk(1, v3{X: 2, Y: 1}), origin, v3{X: 1}, 0.26832404625866063},
		{"IR-SPH-2-1-60", ball(2), origin, tilted(60), 0.39269908169872414},
		{"IR-SPH-2-1-75", ball(2), origin, tilted(75), 0.22120088005301797},
		{"IR-SPH-2-1-90", ball(2), origin, tilted(90), 0.09058607370607955},
		{"IR-SPH-1.25-1-90", ball(1.25), origin, tilted(90), 0.4472952180016122},
		{"IR-RECT-PAR-1-1-1", ceiling(1, 1, 1), origin, up, 0.4352098756835516},
		{"IR-RECT-PAR-0.5-0.5-1", ceiling(0.5, 0.5, 1), origin, up, 0.18806867211352687},
		{"IR-RECT-PAR-1-2-1", ceiling(1, 2, 1), origin, up, 0.5258241015415469},
		{"IR-RECT-PAR-2-2-1", ceiling(2, 2, 1), origin, up, 0.6526882577540378},
		{"IR-RECT-PAR-10-10-1", ceiling(10, 10, 1), origin, up, 0.7790251546008615},
		{"IR-RECT-PERP-1-1-1", wall(1, 1, 1), origin, up, 0.17509414385694835},
		{"IR-RECT-PERP-2-1-1", wall(2, 1, 1), origin, up, 0.2986647456419607},
		{"IR-RECT-PERP-1-2-0.5", wall(1, 2, 0.5), origin, up, 0.4256493525515959},
		{"IR-RECT-CENTRE", ceiling(2, 2, 1), v3{X: 1, Z: 1}, up, 1.7408395027342063},
		{"MC-RECT-1-1-1-0", ceiling(1, 1, 1), v3{X: 0.5, Z: 0.5}, up, 0.7522746884541074},
		{"MC-RECT-2-2-1-1", ceiling(2, 2, 1), v3{X: 2, Z: 1}, up, 1.0516482030830936},
		{"MC-RECT-1-1-0.25-0", ceiling(1, 1, 0.25), v3{X: 0.5, Z: 0.5}, up, 2.610753031016151},
	}
}

func punctualRows() []lit {
	deg := math.Pi / 180
	var out []lit
	for _, c := range []struct {
		id             string
		cd, d, incline float64
		want           float64
	}{
		{"IR-PT-100-1-0", 100, 1, 0, 100.0},
		{"IR-PT-100-2-0", 100, 2, 0, 25.0},
		{"IR-PT-100-3-0", 100, 3, 0, 11.11111111111111},
		{"IR-PT-100-2-60", 100, 2, 60, 12.5},
		{"IR-PT-1000-2.5-30", 1000, 2.5, 30, 138.5640646055102},
		{"IR-COS3-1000-2.5-30", 1000, 2.5 / math.Cos(30*deg), 30, 103.92304845413264},
		{"IR-COS3-800-3-45", 800, 3 / math.Cos(45*deg), 45, 31.426968052735447},
	} {
		n := v3{X: math.Sin(c.incline * deg), Y: math.Cos(c.incline * deg)}
		out = append(out, lit{c.id, Spec{Kind: Point, Position: v3{Y: c.d}}, origin, n, c.want / c.cd})
	}
	// RANGE-KHR: max(min(1 - (d/range)⁴, 1), 0) / d². Source: KHR_lights_punctual, "Range Property".
	for _, c := range []struct {
		id             string
		d, reach, want float64
	}{
		{"RANGE-KHR-1-10", 1, 10, 0.9999},
		{"RANGE-KHR-8-10", 8, 10, 0.009225},
		{"RANGE-KHR-10-10", 10, 10, 0.0},
		{"RANGE-KHR-12-10", 12, 10, 0.0},
		{"RANGE-KHR-2-4", 2, 4, 0.234375},
	} {
		out = append(out, lit{c.id, Spec{Kind: Point, Position: v3{Y: c.d}, Range: c.reach}, origin, up, c.want})
	}
	// SPOT-KHR. Source: KHR_lights_punctual, "Inner and Outer Cone Angles", reference code. One metre away.
	for _, c := range []struct {
		id                        string
		inner, outer, angle, want float64
	}{
		{"SPOT-KHR-0-45-0", 0, 45, 0, 1.0},
		{"SPOT-KHR-0-45-0.25", 0, 45, 11.25, 0.8730974616202651},
		{"SPOT-KHR-0-45-0.5", 0, 45, 22.5, 0.5477605437034696},
		{"SPOT-KHR-0-45-0.75", 0, 45, 33.75, 0.18028623394352927},
		{"SPOT-KHR-0-45-1", 0, 45, 45, 0.0},
		{"SPOT-KHR-20-30-0", 20, 30, 20, 1.0},
		{"SPOT-KHR-20-30-0.5", 20, 30, 25, 0.29900729724455766},
		{"SPOT-KHR-20-30-1", 20, 30, 30, 0.0},
		{"SPOT-KHR-30-60-0", 30, 60, 30, 1.0},
		{"SPOT-KHR-30-60-0.25", 30, 60, 37.5, 0.6423320889996432},
		{"SPOT-KHR-30-60-0.5", 30, 60, 45, 0.32015934382394773},
		{"SPOT-KHR-30-60-1", 30, 60, 60, 0.0},
		{"SPOT-KHR-30-60-1.2", 30, 60, 66, 0.0},
		{"SPOT-KHR-0-90-0", 0, 90, 0, 1.0},
		{"SPOT-KHR-0-90-0.5", 0, 90, 45, 0.5},
		{"SPOT-KHR-0-90-0.75", 0, 90, 67.5, 0.14644660940672624},
		{"SPOT-KHR-0-90-1", 0, 90, 90, 0.0},
		{"SPOT-KHR-0-90-1.2", 0, 90, 108, 0.0},
		{"SPOT-KHR-29-30-0", 29, 30, 29, 1.0},
		{"SPOT-KHR-29-30-0.25", 29, 30, 29.25, 0.5668500512279879},
		{"SPOT-KHR-29-30-0.75", 29, 30, 29.75, 0.06395319492591796},
		{"SPOT-KHR-29-30-1", 29, 30, 30, 0.0},
		{"SPOT-KHR-29-30-1.2", 29, 30, 30.2, 0.0},
		{"SPOT-KHR-EPS", 9.99, 10, 9.99, 0.0009176249399768424},
	} {
		p := v3{X: math.Sin(c.angle * deg), Y: -math.Cos(c.angle * deg)}
		out = append(out, lit{c.id, Spec{Kind: Spot, Direction: down, Inner: c.inner, Outer: c.outer}, p, p.Neg(), c.want})
	}
	// SYN-SPOT: 200 cd, cone 0.3 to 0.6 rad, range 10 m, 3 m above the plane, red channel. Source: KHR_lights_punctual.
	spot := Spec{Kind: Spot, Position: v3{Y: 3}, Direction: down, Inner: 0.3 / deg, Outer: 0.6 / deg, Range: 10}
	for _, c := range []struct{ x, want float64 }{
		{0.5, 21.144953315056323},
		{1, 16.910478333248065},
		{1.5, 4.434539237676948},
		{2, 0.033573138284011886},
		{2.5, 0.0},
	} {
		out = append(out, lit{"SYN-SPOT", spot, v3{X: c.x}, up, c.want / 200})
	}
	return append(out,
		lit{"SYN-SUN", Spec{Kind: Directional, Direction: v3{Y: -math.Sqrt(0.75), Z: -0.5}}, v3{X: 3}, up, math.Sqrt(0.75)},
		lit{"no falloff", Spec{Kind: Point, Position: v3{Y: 5}, NoFalloff: true}, origin, up, 1},
		lit{"no falloff, range", Spec{Kind: Point, Position: v3{Y: 2}, NoFalloff: true, Range: 4}, origin, up, 1 - 1.0/16},
	)
}

// TestIrradiance checks the closed forms against the rows.
func TestIrradiance(t *testing.T) {
	for _, c := range append(areaRows(), punctualRows()...) {
		l := New(c.spec)
		if got := l.Irradiance(c.p, c.n); math.Abs(got-c.want) > 1e-6*c.want+1e-7 {
			t.Errorf("%s: %.9g, want %.9g", c.id, got, c.want)
		}
	}
}

// TestPolygon checks Lambert's formula with the horizon cut. Source: rows IR-POLY, Lambert 1760; Stark 2000,
// "Vertex-based formulations of irradiance from polygonal sources". Without the cut IR-POLY-CLIP-RECT gives 0.
func TestPolygon(t *testing.T) {
	for _, c := range []struct {
		id      string
		corners [][3]float64
		n       [3]float64
		want    float64
	}{
		{"IR-POLY-TRI1", [][3]float64{{1, 0, 1}, {0, 1, 1}, {-1, -1, 1}}, [3]float64{0, 0, 1}, 0.9435748091199684},
		{"IR-POLY-TRI2", [][3]float64{{1, 0, 2}, {2, 1, 1}, {0, 2, 3}}, [3]float64{0, 0, 1}, 0.23086919476802015},
		{"IR-POLY-CLIP-RECT", [][3]float64{{1, -1, -1}, {1, 1, -1}, {1, 1, 1}, {1, -1, 1}}, [3]float64{0, 0, 1}, 0.3501882877138967},
		{"IR-POLY-CLIP-TRI-2BELOW", [][3]float64{{2, -1, -1}, {2, 1, -1}, {2, 0, 1}}, [3]float64{0, 0, 1}, 0.017946565717600185},
		{"IR-POLY-HORIZON-TOUCH", [][3]float64{{-1, -1, 1}, {1, -1, 1}, {1, 1, 1}, {-1, 1, 1}}, [3]float64{1, 0, 1}, 1.2309594173407747},
		{"IR-POLY-CLIP-TILTED-N2", [][3]float64{{-1, -1, 1}, {1, -1, 1}, {1, 1, 1}, {-1, 1, 1}}, [3]float64{1, 0, 0}, 0.3501882877138967},
		{"IR-POLY-PENTAGON", [][3]float64{{1, 0, 1.5}, {0.30901699437494745, 0.95105651629515353, 1.5}, {-0.80901699437494734, 0.58778525229247325, 1.5}, {-0.80901699437494756, -0.58778525229247303, 1.5}, {0.30901699437494723, -0.95105651629515364, 1.5}}, [3]float64{0, 0, 1}, 0.788282288753734},
		{"IR-POLY-BELOW", [][3]float64{{-1, -1, -1}, {1, -1, -1}, {1, 1, -1}, {-1, 1, -1}}, [3]float64{0, 0, 1}, 0.0},
	} {
		vec := func(a [3]float64) v3 { return v3{X: a[0], Y: a[1], Z: a[2]} }
		var corners []v3
		for _, a := range c.corners {
			corners = append(corners, vec(a))
		}
		if got := math.Abs(polygonIrradiance(corners, vec(c.n).Unit())); math.Abs(got-c.want) > 1e-9 {
			t.Errorf("%s: %.12g, want %.12g", c.id, got, c.want)
		}
	}
}

// TestConfiguration averages the closed forms over receivers. Source: rows CF, Howell, "A catalog of radiation heat
// transfer configuration factors", C-11, C-14, C-41; printed values in engineering texts named there.
func TestConfiguration(t *testing.T) {
	const n = 64
	// mean averages E/π over the rectangle corner + s·u + t·v, with normal n, by midpoints.
	mean := func(s Spec, corner, u, v, normal v3) float64 {
		l, sum := New(s), 0.0
		for i := range n {
			for j := range n {
				p := corner.Add(u.Scale((float64(i) + 0.5) / n)).Add(v.Scale((float64(j) + 0.5) / n))
				sum += l.Irradiance(p, normal)
			}
		}
		return sum / (n * n * math.Pi)
	}
	check := func(id string, got, want, tol float64) {
		t.Helper()
		if math.Abs(got/want-1) > tol {
			t.Errorf("%s: %.6f, want %.6f", id, got, want)
		}
	}
	for _, c := range []struct {
		id      string
		a, b, c float64
		want    float64
	}{
		{"CF-C11-1-1-1", 1, 1, 1, 0.19982489569838738},
		{"CF-C11-0.5-0.5-1", 0.5, 0.5, 1, 0.06858958881855244},
		{"CF-C11-2-2-1", 2, 2, 1, 0.41525328357714675},
		{"CF-C11-1-1.5-0.5", 1, 1.5, 0.5, 0.4755764365329529},
	} {
		s := Spec{Kind: Rectangle, Position: v3{X: c.a / 2, Y: c.c, Z: c.b / 2}, Up: v3{Z: 1}, Width: c.a, Height: c.b}
		check(c.id, mean(s, origin, v3{X: c.a}, v3{Z: c.b}, up), c.want, 1e-4)
	}
	// Floor to wall: the floor starts at the wall's foot, the wall spans z0 to z1 and y0 to y1, the floor w by l.
	wall := func(y0, y1, z0, z1 float64) Spec {
		return Spec{Kind: Rectangle, Position: v3{Y: (y0 + y1) / 2, Z: (z0 + z1) / 2}, Direction: v3{X: 1}, Up: up, Width: z1 - z0, Height: y1 - y0}
	}
	for _, c := range []struct {
		id      string
		h, w, l float64
		want    float64
	}{
		{"CF-C14-1-1-1", 1, 1, 1, 0.20004377607540316},
		{"CF-C14-2-1-1", 2, 1, 1, 0.23285260279536188},
		{"CF-C14-1-2-1", 1, 2, 1, 0.11642630139768094},
		{"CF-C14-0.5-1-2", 0.5, 1, 2, 0.16685539497330043},
	} {
		check(c.id, mean(wall(0, c.h, 0, c.l), origin, v3{X: c.w}, v3{Z: c.l}, up), c.want, 5e-3)
	}
	check("CF-EES-F3D10", mean(wall(0.2, 0.5, 0, 0.5), origin, v3{X: 0.5}, v3{Z: 0.5}, up), 0.07234785017522313, 1e-3)
	check("CF-EES-F3D12", mean(wall(0, 0.5, 0.2, 0.5), origin, v3{X: 0.1}, v3{Z: 0.2}, up), 0.06050478314663109, 1e-3)
	for _, c := range []struct {
		id        string
		r1, r2, h float64
		want      float64
	}{
		{"CF-C41-0.1-0.2-0.5", 0.1, 0.2, 0.5, 0.1339312526814945},
		{"CF-C41-2-1-2", 2, 1, 2, 0.11721778146268129},
		{"CF-C41-1-0.5-4", 1, 0.5, 4, 0.014504950352738284},
	} {
		// The share of the flux of disk 1, π·π·r1², that meets disk 2; rings by midpoints of their area.
		l, sum := New(Spec{Kind: Disk, Position: v3{Y: c.h}, Radius: c.r1}), 0.0
		const rings = 1000
		for i := range rings {
			r := c.r2 * math.Sqrt((float64(i)+0.5)/rings)
			sum += l.Irradiance(v3{Z: r}, up) / rings
		}
		check(c.id, sum*math.Pi*c.r2*c.r2/(math.Pi*math.Pi*c.r1*c.r1), c.want, 1e-4)
	}
	// FDiff_5: flux of 1 cd on a rectangle 1 by 2 at 0.5 m, the source opposite a corner.
	sum := mean(Spec{Kind: Point, Position: v3{Y: 0.5}}, origin, v3{X: 1}, v3{Z: 2}, up) * math.Pi * 2
	check("CF-EES-FDIFF5", sum, 1.0506004410136267, 1e-4)
}

// TestPower checks rows UNIT (SI brochure; CIE S 017; from memory) and SPOT-FLUX (integral of the KHR cone).
func TestPower(t *testing.T) {
	for _, c := range []struct {
		id        string
		spec      Spec
		flux      float64
		intensity float64
	}{
		{"UNIT-ISO", Spec{Kind: Point}, 12.566370614359172, 1},
		{"UNIT-100CD", Spec{Kind: Point}, 1600, 127.32395447351627},
		{"SPOT-FLUX-20-30", Spec{Kind: Spot, Inner: 20, Outer: 30}, 0.533210697487303, 1},
		{"UNIT-LAMB-DISK, as a rectangle", Spec{Kind: Rectangle, Width: 1, Height: 0.25}, 78.53981633974483, 100},
		{"UNIT-LAMB-DISK", Spec{Kind: Disk, Radius: math.Sqrt(0.25 / math.Pi)}, 78.53981633974483, 100},
		{"UNIT-LAMB-DISK, both sides", Spec{Kind: Disk, Radius: math.Sqrt(0.25 / math.Pi), TwoSided: true}, 78.53981633974483, 50},
		{"UNIT-LAMB-SPHERE", Spec{Kind: Sphere, Radius: 0.5}, 9.869604401089358, 1},
	} {
		if got := IntensityFromPower(c.spec, c.flux); math.Abs(got/c.intensity-1) > 1e-9 {
			t.Errorf("%s: %v lm make %v, want %v", c.id, c.flux, got, c.intensity)
		}
	}
	// UNIT-CONE: a hard cone, up to the 0.001 of cosine that its edge is wide at least, a third of which is lit.
	for _, c := range []struct{ deg, want float64 }{{30, 0.8417872144769329}, {90, 6.283185307179586}} {
		want := c.want - 2*math.Pi*0.001*2/3
		if got := FluxOf(Spec{Kind: Spot, Inner: c.deg, Outer: c.deg}); math.Abs(got-want) > 1e-9 {
			t.Errorf("hard cone of %v degrees: %v lm, want %v", c.deg, got, want)
		}
	}
	// A cone narrower than that never reaches full strength; by quadrature.
	narrow := Spec{Kind: Spot, Direction: down, Inner: 1, Outer: 2}
	l, sum := New(narrow), 0.0
	const steps = 20000
	for i := range steps {
		a := (float64(i) + 0.5) / steps * 2.5 * math.Pi / 180
		p := v3{X: math.Sin(a), Y: -math.Cos(a)}
		sum += l.Irradiance(p, p.Neg()) * 2 * math.Pi * math.Sin(a) * 2.5 * math.Pi / 180 / steps
	}
	if got := FluxOf(narrow); math.Abs(got/sum-1) > 1e-6 {
		t.Errorf("narrow cone: %v lm, by quadrature %v", got, sum)
	}
	if got := IntensityFromPower(Spec{Kind: Directional}, 100); got != 0 {
		t.Errorf("a directional light of 100 lm has %v lx", got)
	}
}
