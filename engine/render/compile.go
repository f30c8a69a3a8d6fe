package render

import (
	"fmt"
	"math"
	"slices"

	"lampbook/engine/aim"
	"lampbook/engine/kernel/bvh"
	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/lamp"
	"lampbook/engine/kernel/num"
	"lampbook/engine/kernel/sample"
	"lampbook/engine/kernel/shade"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// cast is a group of frames compiled to flat slices. Immutable once made; every worker reads it.
type cast struct {
	settings model.Settings // those that belong to the rays: size, samples, seed, filter
	camera   camera
	scene    *bvh.Scene
	placed   []placed
	surfaces []surface   // one for each slot of each placement
	lights   []castLight // every light shape of the group, once
	globes   []globe     // lights that the camera sees
	looks    []look

	translucent bool // some surface lets rays through
	adapts      bool // some look asks how noisy it is
	wantDepth   bool
	wantNormal  bool
}

// placed is a mesh where it stands.
type placed struct {
	mesh            *mesh.Mesh
	worldFromObject geom.Affine
	identity        bool
	mirror          float64 // -1 where worldFromObject mirrors, else 1
	firstSurface    int32
	stretch         float32 // largest factor by which a length grows from object to world space
	reach           float32 // largest coordinate of the mesh in object space, times the largest stretch, plus the move: metres
}

// surface is one slot of one placement, with what its looks have in common.
type surface struct {
	opacity float32
	lobes   []shade.Lobe // distinct highlights of the looks
}

// castLight is a light's shape and place, for which shadow rays are cast once.
type castLight struct {
	lamp    lamp.Lamp
	purpose uint32 // keys its sample points; from the light's name
	rays    int    // shadow rays a camera ray
	shadow  bool   // things in the way take light away
	ambient bool   // some look uses its ambient weight
}

// look is a frame's own share: materials, light colours, exposure.
type look struct {
	frame    int
	settings model.Settings
	surfaces []surfaceLook // by surface
	lights   []lookLight   // in the frame's order
	ambient  tint.RGB      // sum of the ambient lights, nit
	emission tint.RGB      // what Ce is multiplied by
	exposure float32       // 2^stops
	globes   []tint.RGB    // radiance of the cast's globes, nit

	wantNoise bool // for its pass
}

// surfaceLook is a surface's material in a look.
type surfaceLook struct {
	material shade.BlinnPhong
	lobe     int32 // which of the surface's lobes
}

// lookLight is a light's colour in a look: what the cast's unit light is multiplied by, over π.
type lookLight struct {
	light                      int // into cast.lights
	diffuse, specular, ambient tint.RGB
}

// globe is an area light that the camera sees.
type globe struct {
	shape    lamp.Lamp
	twoSided bool
}

// compile makes the cast of a group. build gives each mesh with its hierarchy.
func compile(c Cast, build func(model.MeshID) (*mesh.Mesh, *bvh.Tree, error)) (*cast, error) {
	p := c.Plan
	first := &p.Frames[c.Frames[0]]
	out := &cast{
		settings: first.Settings,
		camera:   newCamera(first.Camera, first.Settings.Width, first.Settings.Height),
	}
	var stands []bvh.Placement
	for i, t := range first.Things {
		m, tree, err := build(t.Mesh)
		if err != nil {
			return nil, err
		}
		if n := len(t.Materials); n != 1 && n != len(m.SlotNames) {
			return nil, fmt.Errorf("thing %d: %d materials for a mesh of %d slots", i, n, len(m.SlotNames))
		}
		worldFromObject := aim.WorldFromObject(t)
		pl := placed{
			mesh: m, worldFromObject: worldFromObject, identity: worldFromObject == geom.Identity(),
			mirror: math.Copysign(1, worldFromObject.Det()), firstSurface: int32(len(out.surfaces)), reach: reach(tree.Bounds(), worldFromObject),
			stretch: float32(max(math.Abs(t.Scale[0]), math.Abs(t.Scale[1]), math.Abs(t.Scale[2]))),
		}
		out.placed = append(out.placed, pl)
		for range m.SlotNames {
			out.surfaces = append(out.surfaces, surface{opacity: 1})
		}
		var mask bvh.Mask
		if !t.Hidden {
			mask |= bvh.SeenByCamera
		}
		if !t.NoShadow {
			mask |= bvh.CastsShadow
		}
		stands = append(stands, bvh.Placement{Tree: tree, WorldFromObject: worldFromObject, Mask: mask})
	}
	out.scene = bvh.NewScene(stands)
	for _, l := range first.Lights {
		if light := p.Lights[l]; light.Kind == model.LightArea && light.Visible {
			out.globes = append(out.globes, globe{lampOf(light), light.TwoSided})
		}
	}
	for _, i := range c.Frames {
		out.addLook(p, i)
	}
	return out, nil
}

// reach bounds the size of the coordinates that rounding errors of a hit scale with.
func reach(box geom.Box, a geom.Affine) float32 {
	if box.Empty() {
		return 0
	}
	b := a.Box(box)
	m := float32(0)
	for _, v := range [...]geom.Vec3{b.Min, b.Max} {
		m = max(m, abs(v.X), abs(v.Y), abs(v.Z))
	}
	return m
}

// addLook compiles frame i as a look of the cast.
func (c *cast) addLook(p *model.Plan, i int) {
	f := &p.Frames[i]
	lk := look{
		frame: i, settings: f.Settings,
		exposure: num.Exp2Wide(f.Settings.Exposure),
		emission: tint.Grey(1),
	}
	for k, t := range f.Things {
		slots := len(c.placed[k].mesh.SlotNames)
		for s := range slots {
			id := t.Materials[0]
			if len(t.Materials) > 1 {
				id = t.Materials[s]
			}
			lk.surfaces = append(lk.surfaces, c.surfaceLook(len(lk.surfaces), p.Materials[id]))
		}
	}
	var ownEmission tint.RGB
	for _, id := range f.Lights {
		l := p.Lights[id]
		ownEmission = ownEmission.Add(l.Components.Emission)
		if l.Kind == model.LightAmbient {
			lk.ambient = lk.ambient.Add(l.Color.Scale(float32(l.Intensity)).Mul(l.Components.Ambient))
			continue
		}
		const perPi = 1 / math.Pi
		power := l.Color.Scale(float32(l.Intensity * perPi))
		lk.lights = append(lk.lights, lookLight{
			light:    c.lightIndex(l),
			diffuse:  power.Mul(l.Components.Diffuse),
			specular: power.Mul(l.Components.Specular),
			ambient:  power.Mul(l.Components.Ambient),
		})
		if l.Kind == model.LightArea && l.Visible {
			lk.globes = append(lk.globes, l.Color.Scale(float32(l.Intensity)))
		}
	}
	if !ownEmission.Black() {
		lk.emission = ownEmission
	}
	c.wantDepth = c.wantDepth || wants(f.Settings, model.PassDepth)
	c.wantNormal = c.wantNormal || wants(f.Settings, model.PassNormal)
	lk.wantNoise = wants(f.Settings, model.PassNoise)
	c.adapts = c.adapts || lk.wantNoise || f.Settings.Noise > 0
	c.looks = append(c.looks, lk)
}

// surfaceLook compiles a material for surface s and notes its highlight there.
func (c *cast) surfaceLook(s int, m model.Material) surfaceLook {
	lobe := shade.Lobe{Shininess: float32(m.Shininess), Normalized: m.Normalized}
	sl := surfaceLook{material: shade.BlinnPhong{
		Diffuse: m.Diffuse, Specular: m.Specular, Ambient: m.Ambient, Emission: m.Emission, Lobe: lobe,
	}}
	sf := &c.surfaces[s]
	sf.opacity = float32(m.Opacity)
	c.translucent = c.translucent || m.Opacity < 1
	if m.Specular.Black() {
		sl.lobe = -1
		return sl
	}
	k := slices.Index(sf.lobes, lobe)
	if k < 0 {
		k = len(sf.lobes)
		sf.lobes = append(sf.lobes, lobe)
	}
	sl.lobe = int32(k)
	return sl
}

// lightIndex finds or adds the shape of a light.
func (c *cast) lightIndex(l model.Light) int {
	cl := castLight{lamp: lampOf(l), purpose: sample.Name(l.Name), rays: 1, shadow: !l.NoShadow}
	if l.Kind == model.LightArea {
		cl.rays = c.settings.LightSamples
	}
	wantsAmbient := !l.Components.Ambient.Black()
	for i := range c.lights {
		same := c.lights[i]
		same.ambient = false
		if same == cl {
			c.lights[i].ambient = c.lights[i].ambient || wantsAmbient
			return i
		}
	}
	cl.ambient = wantsAmbient
	c.lights = append(c.lights, cl)
	return len(c.lights) - 1
}

func abs(x float32) float32 { return max(x, -x) }
