package pixmap

import "slices"

// Image is a set of planes of Width by Height values, row by row from the top left.
//
// The engine makes two kinds. A linear image has planes "R", "G", "B" (linear Rec. 709 light after exposure, before tone,
// premultiplied) and "A" (coverage), and the passes asked for: "diffuse.R", "depth.Z", "normal.X" and so on, named as OpenEXR
// names layers. A display image has "R", "G", "B" (sRGB-encoded, straight) and "A", all in [0, 1].
type Image struct {
	Width, Height int
	Planes        []Plane
}

// Plane is one channel of an image.
type Plane struct {
	Name string
	Pix  []float32 // len Width·Height
}

// New returns an image of zeros with the named planes.
func New(width, height int, names ...string) *Image {
	m := &Image{Width: width, Height: height}
	for _, n := range names {
		m.Add(n)
	}
	return m
}

// Add appends a plane of zeros and returns its values. The name must be new.
func (m *Image) Add(name string) []float32 {
	if m.Plane(name) != nil {
		panic("pixmap: plane " + name + " twice")
	}
	pix := make([]float32, m.Width*m.Height)
	m.Planes = append(m.Planes, Plane{name, pix})
	return pix
}

// Plane returns the values of the named plane, or nil.
func (m *Image) Plane(name string) []float32 {
	i := slices.IndexFunc(m.Planes, func(p Plane) bool { return p.Name == name })
	if i < 0 {
		return nil
	}
	return m.Planes[i].Pix
}

// Finite reports whether no value of any plane is NaN or infinite.
func (m *Image) Finite() bool {
	for _, p := range m.Planes {
		var s float32
		for _, v := range p.Pix {
			s += float32(v * 0)
		}
		if s != 0 {
			return false
		}
	}
	return true
}
