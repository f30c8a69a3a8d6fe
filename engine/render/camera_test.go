package render

import (
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// angleDeg is the angle between two directions.
func angleDeg(a, b geom.Vec3) float64 {
	u, v := a.Wide().Unit(), b.Wide().Unit()
	return math.Atan2(u.Cross(v).Len(), u.Dot(v)) * 180 / math.Pi
}

// TestFieldOfView measures the angles between rays through the picture's edges.
func TestFieldOfView(t *testing.T) {
	tests := []struct {
		focal, h, v, d float64
		source         string
	}{
		{24, 73.73979529168804, 53.13010235415598, 84.06222754839457, "reference CAM-FF-24"},
		{35, 54.43222311461495, 37.84928883210247, 63.439966595414575, "reference CAM-FF-35"},
		{85, 23.913168486298265, 16.071421421069584, 28.558322254779934, "reference CAM-FF-85"},
	}
	for _, tt := range tests {
		c := newCamera(lens([3]float64{1, 2, 3}, [3]float64{-2, 1, 0}, tt.focal), 360, 240)
		dir := func(x, y float32) geom.Vec3 { return c.ray(x, y, 0, 0).Dir }
		for _, m := range []struct {
			name      string
			got, want float64
		}{
			{"horizontal", angleDeg(dir(0, 120), dir(360, 120)), tt.h},
			{"vertical", angleDeg(dir(180, 0), dir(180, 240)), tt.v},
			{"diagonal", angleDeg(dir(0, 0), dir(360, 240)), tt.d},
		} {
			if math.Abs(m.got-m.want) > 1e-4 {
				t.Errorf("%v mm: %s field %v°, want %v (%s)", tt.focal, m.name, m.got, m.want, tt.source)
			}
		}
	}
	// Reference CAM-PINHOLE: a vertical field of 45° at aspect 16:9 shows 2·4.1421 m by 2·7.3638 m at 10 m.
	focal := 18 / (7.363796664410579 / 10)
	c := newCamera(lens([3]float64{0, 0, 10}, origin, focal), 1600, 900)
	corner := c.ray(1600, 0, 0, 0)
	p := corner.At(-corner.Org.Z / corner.Dir.Z)
	if math.Abs(float64(p.X)-7.363796664410579) > 1e-4 || math.Abs(float64(p.Y)-4.14213562373095) > 1e-4 {
		t.Errorf("the upper right corner meets z = 0 at %v (reference CAM-PINHOLE)", p)
	}
}

// TestSphereOutline counts the coverage of a ball: its outline is seen under asin(r/d), not atan.
func TestSphereOutline(t *testing.T) {
	var s studio
	fine := ball
	fine.Segments = 512
	// On the axis at distance 4, at a focal length of which the picture is 1 m wide and high at distance 1.
	img := s.shoot(t, lens([3]float64{0, 0, 4}, origin, 36), square(512, 4), nil, s.thing(fine, spotless))
	if got, want := mean(img.Plane("A")), 0.20943951023931956; off(got, want) > 1e-3 {
		t.Errorf("the ball covers %v of the picture, want %v (reference CAM-SPHERE-PROJ)", got, want)
	}
}

// TestCircleOfConfusion follows two rays from opposite edges of the lens.
func TestCircleOfConfusion(t *testing.T) {
	cam := lens(origin, [3]float64{0, 0, -2}, 50)
	cam.FNumber = 2.8
	c := newCamera(cam, 360, 240)
	spread := func(distance float32) float64 {
		// u = 0 and just under 1 with v = 1/2 are opposite points of the lens's edge in the disk's mapping.
		a, b := c.ray(180, 120, 0, 0.5), c.ray(180, 120, math.Nextafter32(1, 0), 0.5)
		pa, pb := a.At(-distance/a.Dir.Z), b.At(-distance/b.Dir.Z)
		return pa.Sub(pb).Wide().Len()
	}
	if s := spread(2); s > 1e-5 {
		t.Errorf("rays of one pixel are %v m apart in the plane of focus", s)
	}
	// Reference CAM-COC has the sensor at the image distance s·f/(s-f); the pinhole equation's sensor stands at f. Seen from the lens, the blur disc at
	// distance d has the angle c/(image distance).
	imageDistance := 2.0 * 0.05 / (2.0 - 0.05)
	if got, want := spread(4)/4, 0.22893772893772893e-3/imageDistance; off(got, want) > 1e-3 {
		t.Errorf("the blur of a point at 4 m is %v rad wide, want %v (reference CAM-COC)", got, want)
	}
}

func TestShiftAndOrthographic(t *testing.T) {
	cam := lens([3]float64{0, 0, 10}, origin, 36)
	cam.Shift = [2]float64{0.25, -0.5}
	c := newCamera(cam, 100, 100)
	r := c.ray(50, 50, 0, 0)
	p := r.At(-r.Org.Z / r.Dir.Z)
	// The picture is 10 m by 10 m at z = 0: the window has moved 2.5 m right and 5 m down.
	if math.Abs(float64(p.X)-2.5) > 1e-4 || math.Abs(float64(p.Y)+5) > 1e-4 {
		t.Errorf("the middle of a shifted picture shows %v, want (2.5, -5, 0)", p)
	}
	c = newCamera(ortho([3]float64{0, 0, 10}, origin, [3]float64{0, 1, 0}, 4), 200, 100)
	for _, tt := range []struct{ x, y, wantX, wantY float32 }{{0, 0, -4, 2}, {200, 100, 4, -2}, {100, 50, 0, 0}} {
		r := c.ray(tt.x, tt.y, 0, 0)
		if r.Dir != (geom.Vec3{Z: -1}) || abs(r.Org.X-tt.wantX) > 1e-5 || abs(r.Org.Y-tt.wantY) > 1e-5 {
			t.Errorf("raster (%v, %v): ray %v, want from (%v, %v)", tt.x, tt.y, r, tt.wantX, tt.wantY)
		}
	}
}

// TestRasterRunsDown checks which way the picture lies: a ball up and to the right is in the upper right quarter.
func TestRasterRunsDown(t *testing.T) {
	var s studio
	small := s.thing(ball, model.Material{Diffuse: spotless.Diffuse})
	small.At, small.Scale = [3]float64{1, 1, 0}, [3]float64{0.3, 0.3, 0.3}
	img := s.shoot(t, ortho([3]float64{0, 0, 5}, origin, [3]float64{0, 1, 0}, 4), square(40, 4), nil, small)
	a := img.Plane("A")
	if a[10*40+30] != 1 || a[30*40+30] != 0 || a[10*40+10] != 0 {
		t.Errorf("coverage of the quarters' middles: upper right %v, lower right %v, upper left %v; want 1, 0, 0", a[10*40+30], a[30*40+30], a[10*40+10])
	}
}
