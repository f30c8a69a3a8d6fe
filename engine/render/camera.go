package render

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
	"lampbook/engine/model"
)

// camera makes rays in world space. All vectors world space; set up in float64, used in float32.
type camera struct {
	eye                  geom.Vec3
	forward              geom.Vec3 // unit, into the scene
	across, down         geom.Vec3 // from one side of the picture to the other, at distance 1 (perspective) or in metres
	corner               geom.Vec3 // from the eye's axis point to the picture's upper left corner, like across and down
	orthographic         bool
	lensX, lensY         geom.Vec3 // lens radius along the picture's axes, metres; zero for a pinhole
	focus                float32   // metres along forward to the plane in focus
	perPixelX, perPixelY float32   // one over width and height
}

// newCamera sets a valid camera up for a picture of width by height pixels.
func newCamera(c model.Camera, width, height int) camera {
	eye, target := vec(c.Position), vec(c.Target)
	forward := target.Sub(eye).Unit()
	right := forward.Cross(vec(c.Up)).Unit()
	up := right.Cross(forward)

	aspect := float64(width) / float64(height)
	var sizeX, sizeY float64
	if c.Projection == model.Orthographic {
		sizeY = c.Height
		sizeX = sizeY * aspect
	} else {
		sizeX = c.SensorMM / c.FocalMM
		sizeY = sizeX / aspect
	}
	across := right.Scale(sizeX)
	down := up.Scale(-sizeY)
	// Shifting the picture right on the sensor shows more of the scene's left; as a view it is the window that moves.
	corner := across.Scale(-0.5 + c.Shift[0]).Add(down.Scale(-0.5 - c.Shift[1]))

	focus := c.FocusDistance
	if focus == 0 {
		focus = target.Sub(eye).Len()
	}
	cam := camera{
		eye: eye.Narrow(), forward: forward.Narrow(), across: across.Narrow(), down: down.Narrow(), corner: corner.Narrow(),
		orthographic: c.Projection == model.Orthographic, focus: float32(focus),
		perPixelX: float32(1 / float64(width)), perPixelY: float32(1 / float64(height)),
	}
	if c.FNumber > 0 && c.Projection == model.Perspective {
		// Thin lens: the aperture's diameter is the focal length over the f-number.
		radius := c.FocalMM / 1000 / c.FNumber / 2
		cam.lensX, cam.lensY = right.Scale(radius).Narrow(), up.Scale(radius).Narrow()
	}
	return cam
}

// ray returns the ray through the raster point (x, y), in pixels from the upper left corner, and the lens point (u, v) in [0, 1)².
// Its direction is unit, so t is metres.
func (c *camera) ray(x, y, u, v float32) geom.Ray {
	s, t := x*c.perPixelX, y*c.perPixelY
	onWindow := c.corner.AddScaled(s, c.across).AddScaled(t, c.down)
	r := geom.Ray{Org: c.eye, Dir: c.forward, TMax: math.MaxFloat32}
	if c.orthographic {
		r.Org = c.eye.Add(onWindow)
		return r
	}
	dir := c.forward.Add(onWindow)
	if c.lensX != (geom.Vec3{}) {
		lx, ly := sample.Disk(u, v)
		onLens := c.lensX.Scale(lx).AddScaled(ly, c.lensY)
		r.Org = c.eye.Add(onLens)
		dir = dir.Scale(c.focus).Sub(onLens)
	}
	r.Dir = dir.Unit()
	return r
}

func vec(a [3]float64) geom.Vec3d { return geom.Vec3d{X: a[0], Y: a[1], Z: a[2]} }
