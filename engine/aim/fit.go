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

	// Largest offsets of the points along the outward normals of the four sides, in the camera's axes, and the points' box.
	low := math.Inf(-1)
	rightMost, leftMost, topMost, bottomMost, near := low, low, low, low, math.Inf(1)
	lo, hi := geom.Vec3d{X: math.Inf(1), Y: math.Inf(1), Z: math.Inf(1)}, geom.Vec3d{X: low, Y: low, Z: low}
	take := func(p geom.Vec3d) {
		x, y, z := right.Dot(p), upward.Dot(p), forward.Dot(p)
		rightMost = max(rightMost, x-float64(tanX*z))
		leftMost = max(leftMost, -x-float64(tanX*z))
		topMost = max(topMost, y-float64(tanY*z))
		bottomMost = max(bottomMost, -y-float64(tanY*z))
		near = min(near, z)
		lo = geom.Vec3d{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
		hi = geom.Vec3d{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
	}
	for _, t := range f.Things {
		if f.Sweep {
			eachSwept(t, take)
		} else {
			eachPoint(t, take)
		}
	}
	if math.IsInf(near, 1) {
		return model.Camera{}, errors.New("nothing to frame: the things have no triangles")
	}
	ex, ey := (rightMost-leftMost)/2, (topMost-bottomMost)/2
	centre, radius := lo.Add(hi).Scale(0.5), max(hi.Sub(lo).Len()/2, 1e-6)
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

// ring is the circle that a point of a turning thing runs through: its radius and height.
type ring struct{ r, y float64 }

// eachSwept calls take for points on the circles that the thing's outermost points run through in a turn about the vertical through its At.
// Only the outer chain of (height, radius) can matter to a fit. A rough chain of some of the points comes first, so that most others are
// seen to lie within it without being sorted.
func eachSwept(t Thing, take func(geom.Vec3d)) {
	axis := t.Placement.At
	ringOf := func(p geom.Vec3d) ring { return ring{geom.Vec3d{X: p.X - axis[0], Z: p.Z - axis[2]}.Len(), p.Y} }
	stride := len(t.Mesh.Positions)/1024 + 1
	var rough []ring
	n := 0
	eachPoint(t, func(p geom.Vec3d) {
		if n%stride == 0 {
			rough = append(rough, ringOf(p))
		}
		n++
	})
	rough = outerChain(rough)
	outer := slices.Clone(rough)
	eachPoint(t, func(p geom.Vec3d) {
		if q := ringOf(p); !within(rough, q) {
			outer = append(outer, q)
		}
	})
	for _, h := range outerChain(outer) {
		for i := range sweepSteps {
			sin, cos := num.SinCosWide(2 * math.Pi * float64(i) / sweepSteps)
			take(geom.Vec3d{X: axis[0] + float64(h.r*cos), Y: h.y, Z: axis[2] + float64(h.r*sin)})
		}
	}
}

// outerChain sorts the rings by height and returns those on the outer side of their convex hull, by Andrew's monotone scan.
func outerChain(rings []ring) []ring {
	slices.SortFunc(rings, func(a, b ring) int {
		if a.y != b.y {
			return cmpFloat(a.y, b.y)
		}
		return cmpFloat(a.r, b.r)
	})
	var chain []ring
	for _, q := range rings {
		for len(chain) > 0 && chain[len(chain)-1].y == q.y {
			chain = chain[:len(chain)-1] // same height, smaller radius
		}
		for len(chain) > 1 && outside(chain[len(chain)-2], q, chain[len(chain)-1]) <= 0 {
			chain = chain[:len(chain)-1]
		}
		chain = append(chain, q)
	}
	return chain
}

// outside is above 0 if p lies farther out than the line from a to b, a lower than b.
func outside(a, b, p ring) float64 {
	return float64((b.y-a.y)*(p.r-a.r)) - float64((b.r-a.r)*(p.y-a.y))
}

// within reports whether q lies inside an outer chain, or on it.
func within(chain []ring, q ring) bool {
	i, _ := slices.BinarySearchFunc(chain, q.y, func(c ring, y float64) int { return cmpFloat(c.y, y) })
	switch {
	case i == len(chain) || i == 0 && chain[0].y != q.y:
		return false // above or below it
	case chain[i].y == q.y:
		return q.r <= chain[i].r
	}
	return outside(chain[i-1], chain[i], q) <= 0
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
