package aim

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
	"lampbook/engine/model"
)

// FitSpec says what a camera is to frame, and from where.
type FitSpec struct {
	Things     []Thing
	Sweep      bool       // frame each thing over a whole turn about the vertical through its own At
	Direction  [3]float64 // from the things towards the camera; any length but 0
	Up         [3]float64 // zero means {0, 1, 0}
	Margin     float64    // free border on the tightest side, as a share of the picture's height, [0, 0.45]
	Aspect     float64    // width over height of the picture, > 0
	Projection model.Projection
	FocalMM    float64 // perspective, > 0
	SensorMM   float64 // perspective, > 0
}

// sweepSteps is how many points of a full turn stand for the circle that a point of a turning thing runs through. A chord of
// 1/96 turn leaves the circle by 1 - cos(π/96), a twentieth of a percent of its radius.
const sweepSteps = 96

// Fit returns the camera nearest to the things that shows all of them with the margin free on every side, looking along -Direction, with
// the things in the middle of the picture. The fit is exact: each side of the frustum has a fixed normal, so the nearest
// eye follows from the points' largest offsets along the four normals.
//
// It fails if there are no points, the direction is zero or along Up, or a number is out of its range.
func Fit(f FitSpec) (model.Camera, error) {
	if !(f.Margin >= 0 && f.Margin <= 0.45) {
		return model.Camera{}, fmt.Errorf("margin must be between 0 and 0.45 of the picture's height, got %v", f.Margin)
	}
	up := vec(f.Up)
	if up == (geom.Vec3d{}) {
		up = geom.Vec3d{Y: 1}
	}
	forward := vec(f.Direction).Unit().Neg()
	right := forward.Cross(up).Unit()
	if forward == (geom.Vec3d{}) {
		return model.Camera{}, errors.New("direction must not be zero")
	}
	if right.Len() < 0.5 || forward.Cross(up).Len() < 1e-9*up.Len() {
		return model.Camera{}, fmt.Errorf("direction %s runs along up %s: give another up", shown(f.Direction), shown(arr(up)))
	}
	upward := right.Cross(forward)

	var pts []geom.Vec3d
	for _, t := range f.Things {
		if f.Sweep {
			pts = append(pts, swept(t)...)
		} else {
			pts = append(pts, Points(t)...)
		}
	}
	if len(pts) == 0 {
		return model.Camera{}, errors.New("nothing to frame: the things have no triangles")
	}

	// Half extents of the picture at distance 1 (perspective), less the margin on each side.
	inner := 1 - 2*f.Margin
	innerAcross := 1 - 2*f.Margin/f.Aspect
	cam := model.Camera{Projection: f.Projection, FocalMM: f.FocalMM, SensorMM: f.SensorMM, Up: arr(up)}
	tanX, tanY := 0.0, 0.0 // an orthographic frustum has parallel sides
	if f.Projection == model.Perspective {
		tanX = f.SensorMM / f.FocalMM / 2
		tanY = tanX / f.Aspect * inner
		tanX *= innerAcross
	}
	if innerAcross <= 0.05 {
		return model.Camera{}, fmt.Errorf("margin %v leaves no room in a picture this narrow", f.Margin)
	}

	// Largest offsets of the points along the outward normals of the four sides, in the camera's axes.
	low := math.Inf(-1)
	rightMost, leftMost, topMost, bottomMost, near := low, low, low, low, math.Inf(1)
	for _, p := range pts {
		x, y, z := right.Dot(p), upward.Dot(p), forward.Dot(p)
		rightMost = max(rightMost, x-float64(tanX*z))
		leftMost = max(leftMost, -x-float64(tanX*z))
		topMost = max(topMost, y-float64(tanY*z))
		bottomMost = max(bottomMost, -y-float64(tanY*z))
		near = min(near, z)
	}
	ex, ey := (rightMost-leftMost)/2, (topMost-bottomMost)/2
	centre, radius := boundsOf(pts)
	radius = max(radius, 1e-6)
	zMiddle := forward.Dot(centre)
	var ez float64
	if f.Projection == model.Orthographic {
		halfX, halfY := (rightMost+leftMost)/2, (topMost+bottomMost)/2
		cam.Height = 2 * max(halfY/inner, halfX/innerAcross/f.Aspect, 1e-9)
		ez = near - radius
	} else {
		ez = min(-(rightMost+leftMost)/(2*tanX), -(topMost+bottomMost)/(2*tanY))
		ez = min(ez, near-float64(1e-3*radius)) // a single point, or a flat thing edge on, still stands in front of the camera
	}
	eye := right.Scale(ex).Add(upward.Scale(ey)).Add(forward.Scale(ez))
	cam.Position = settledPoint(eye, radius)
	cam.Target = settledPoint(eye.Add(forward.Scale(max(zMiddle-ez, 1e-3*radius))), radius)
	cam.Height = settled(cam.Height)
	return cam, nil
}

// shown is a point as scenes write it.
func shown(p [3]float64) string { return fmt.Sprintf("{%v, %v, %v}", p[0], p[1], p[2]) }

// boundsOf returns the centre and half diagonal of the points' box.
func boundsOf(pts []geom.Vec3d) (centre geom.Vec3d, radius float64) {
	lo, hi := pts[0], pts[0]
	for _, p := range pts {
		lo = geom.Vec3d{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
		hi = geom.Vec3d{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
	}
	return lo.Add(hi).Scale(0.5), hi.Sub(lo).Len() / 2
}

// swept returns points on the circles that the thing's outermost points run through in a turn about the vertical through its At.
// Only the upper hull of (radius, height) can matter to a fit, so the rest is dropped first.
func swept(t Thing) []geom.Vec3d {
	axis := t.Placement.At
	type ring struct{ r, y float64 }
	var rings []ring
	for _, p := range Points(t) {
		rings = append(rings, ring{geom.Vec3d{X: p.X - axis[0], Z: p.Z - axis[2]}.Len(), p.Y})
	}
	slices.SortFunc(rings, func(a, b ring) int {
		switch {
		case a.y != b.y:
			return cmpFloat(a.y, b.y)
		default:
			return cmpFloat(a.r, b.r)
		}
	})
	// Outer chain by Andrew's monotone scan: going up, keep left turns out (largest radius).
	var hull []ring
	for _, q := range rings {
		for len(hull) > 0 && hull[len(hull)-1].y == q.y {
			hull = hull[:len(hull)-1] // same height, smaller radius
		}
		for len(hull) > 1 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if float64((b.y-a.y)*(q.r-a.r))-float64((b.r-a.r)*(q.y-a.y)) < 0 {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, q)
	}
	var pts []geom.Vec3d
	for _, h := range hull {
		for i := range sweepSteps {
			sin, cos := num.SinCosWide(2 * math.Pi * float64(i) / sweepSteps)
			pts = append(pts, geom.Vec3d{X: axis[0] + float64(h.r*cos), Y: h.y, Z: axis[2] + float64(h.r*sin)})
		}
	}
	return pts
}

func cmpFloat(a, b float64) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}
