package render

import (
	"fmt"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
)

// film is one look's picture in the making.
type film struct {
	linear, display *pixmap.Image
	rgba            [4][]float32     // planes of linear
	shown           [4][]float32     // planes of display
	parts           [4]*[3][]float32 // diffuse, specular, ambient, emission, where asked for
	depth           []float32
	normal          [3][]float32
	samples         []float32
	noise           []float32
	tallies         []tally // by block, row by row
}

// tally is how a block of pixels was sampled.
type tally struct {
	samples int32   // that each of its pixels took
	pixels  int32   // fewer at the picture's edge
	noise   float32 // estimated standard error, L*; 0 where none was asked for
}

// partNames are the component passes' layer names, in the order of film.parts.
var partNames = [4]string{"diffuse", "specular", "ambient", "emission"}

// newFilm makes the planes that the settings ask for.
func newFilm(s model.Settings) *film {
	f := &film{
		linear:  pixmap.New(s.Width, s.Height, "R", "G", "B", "A"),
		display: pixmap.New(s.Width, s.Height, "R", "G", "B", "A"),
		tallies: make([]tally, blocksIn(s.Width)*blocksIn(s.Height)),
	}
	for i := range 4 {
		f.rgba[i], f.shown[i] = f.linear.Planes[i].Pix, f.display.Planes[i].Pix
	}
	for _, pass := range s.Passes {
		switch pass {
		case model.PassDiffuse, model.PassSpecular, model.PassAmbient, model.PassEmission:
			name := partNames[pass]
			f.parts[pass] = &[3][]float32{f.linear.Add(name + ".R"), f.linear.Add(name + ".G"), f.linear.Add(name + ".B")}
		case model.PassDepth:
			f.depth = f.linear.Add("depth.Z")
		case model.PassNormal:
			f.normal = [3][]float32{f.linear.Add("normal.X"), f.linear.Add("normal.Y"), f.linear.Add("normal.Z")}
		case model.PassSamples:
			f.samples = f.linear.Add("samples.N")
		case model.PassNoise:
			f.noise = f.linear.Add("noise.L")
		}
	}
	return f
}

// light is a pixel's light in float64, nit.
type light [3]float64

// addScaled adds s·c.
func (a *light) addScaled(s float64, c tint.RGB) {
	a[0] += float64(s * float64(c.R))
	a[1] += float64(s * float64(c.G))
	a[2] += float64(s * float64(c.B))
}

// shade sums a look's light from what the pixel's rays found: the four components, before exposure, per camera ray.
func (lk *look) shade(c *cast, s *pixelSums, perSample float64) (parts [4]light) {
	for k, surface := range s.surfaces {
		sl := &lk.surfaces[surface]
		m := &sl.material
		diffuse := s.diffuse[k*len(c.lights):]
		ambient := s.ambient[k*len(c.lights):]
		lobes := len(c.surfaces[surface].lobes)
		for _, ll := range lk.lights {
			parts[0].addScaled(diffuse[ll.light], m.Diffuse.Mul(ll.diffuse))
			if sl.lobe >= 0 {
				parts[1].addScaled(s.lobe[k][ll.light*lobes+int(sl.lobe)], m.Specular.Mul(ll.specular))
			}
			parts[2].addScaled(ambient[ll.light], m.Ambient.Mul(ll.ambient))
		}
		parts[2].addScaled(s.count[k], m.Ambient.Mul(lk.ambient))
		parts[3].addScaled(s.count[k], m.Emission.Mul(lk.emission))
	}
	for g, n := range s.globe {
		parts[3].addScaled(n, lk.globes[g])
	}
	for i := range parts {
		for j := range parts[i] {
			parts[i][j] *= perSample
		}
	}
	return parts
}

// expose writes pixel i of a look from the sums of so many samples, and develops it.
func (f *film) expose(c *cast, lk *look, s *pixelSums, samples, i int) {
	perSample := 1 / float64(samples)
	alpha := float32(s.covered * perSample)
	var rgb tint.RGB
	if s.covered > 0 {
		parts := lk.shade(c, s, perSample*float64(lk.exposure))
		rgb = tint.RGB{
			R: float32(parts[0][0] + parts[1][0] + parts[2][0] + parts[3][0]),
			G: float32(parts[0][1] + parts[1][1] + parts[2][1] + parts[3][1]),
			B: float32(parts[0][2] + parts[1][2] + parts[2][2] + parts[3][2]),
		}
		for k, planes := range f.parts {
			if planes != nil {
				for j := range planes {
					planes[j][i] = float32(parts[k][j])
				}
			}
		}
		f.exposeGeometry(s, i)
	}
	f.rgba[0][i], f.rgba[1][i], f.rgba[2][i], f.rgba[3][i] = rgb.R, rgb.G, rgb.B, alpha
	shown, a := Develop(rgb, alpha, lk.settings)
	f.shown[0][i], f.shown[1][i], f.shown[2][i], f.shown[3][i] = shown.R, shown.G, shown.B, a
}

// exposeGeometry writes the depth and normal passes: means over what the pixel's rays hit.
func (f *film) exposeGeometry(s *pixelSums, i int) {
	points := 0.0
	for _, n := range s.count {
		points += n
	}
	if points == 0 {
		return
	}
	if f.depth != nil {
		f.depth[i] = float32(s.depth / points)
	}
	if f.normal[0] != nil {
		n := vec(s.normal).Unit().Narrow()
		f.normal[0][i], f.normal[1][i], f.normal[2][i] = n.X, n.Y, n.Z
	}
}

// Develop makes display values of one pixel: light is linear after exposure, premultiplied by alpha in [0, 1]. The tone curve
// acts on what covers the pixel; the background is laid under it in linear display light, so that neither exposure nor tone
// changes it. The result is sRGB-encoded (IEC 61966-2-1) in [0, 1], straight, with alpha 1 unless the background is transparent.
func Develop(light tint.RGB, alpha float32, s model.Settings) (tint.RGB, float32) {
	var straight tint.RGB
	if alpha > 0 {
		straight = tone(light.Scale(1/alpha), s)
	}
	if !s.Background.Transparent {
		straight = straight.Scale(alpha).Add(s.Background.Color.Scale(1 - alpha))
		alpha = 1
	}
	return tint.RGB{R: encode(straight.R), G: encode(straight.G), B: encode(straight.B)}, alpha
}

// encode limits to [0, 1] and applies the sRGB transfer function.
func encode(x float32) float32 { return tint.EncodeSRGB(min(max(x, 0), 1)) }

// tone applies the settings' tone curve; the result may still be above 1 where the curve does not end.
func tone(c tint.RGB, s model.Settings) tint.RGB {
	switch s.Tone {
	case model.ToneShoulder:
		return tint.Shoulder(c)
	case model.ToneNeutral:
		return tint.Neutral(c)
	case model.ToneReinhard:
		return tint.Reinhard(c, float32(s.White))
	case model.ToneACES:
		return tint.ACES(c)
	}
	return c
}

// ShowPass returns a display image of one pass of a linear image: components developed like the picture, over black; normals as
// half the vector plus a half; depth from white (nearest in this picture) to near black (farthest), samples from black to white at
// the most there may be, noise from black to white at 4 L*, all three without a transfer function. Uncovered pixels keep alpha 0 where the background is transparent, and are the background's colour otherwise.
func ShowPass(linear *pixmap.Image, pass model.Pass, s model.Settings) (*pixmap.Image, error) {
	planes := map[model.Pass][]string{
		model.PassDepth:   {"depth.Z", "depth.Z", "depth.Z"},
		model.PassNormal:  {"normal.X", "normal.Y", "normal.Z"},
		model.PassSamples: {"samples.N", "samples.N", "samples.N"},
		model.PassNoise:   {"noise.L", "noise.L", "noise.L"},
	}[pass]
	if int(pass) < len(partNames) {
		n := partNames[pass]
		planes = []string{n + ".R", n + ".G", n + ".B"}
	}
	var in [3][]float32
	for i, n := range planes {
		in[i] = linear.Plane(n)
	}
	cover := linear.Plane("A")
	if in[0] == nil || cover == nil {
		return nil, fmt.Errorf("picture has no pass %d", pass)
	}
	near, far := depthRange(in[0], cover)
	out := pixmap.New(linear.Width, linear.Height, "R", "G", "B", "A")
	r, g, b, a := out.Planes[0].Pix, out.Planes[1].Pix, out.Planes[2].Pix, out.Planes[3].Pix
	for i := range cover {
		value := tint.RGB{R: in[0][i], G: in[1][i], B: in[2][i]}
		alpha := cover[i]
		switch pass {
		case model.PassDepth:
			value = tint.Grey(0.95)
			if far > near {
				value = tint.Grey(0.95 - float32(0.9*(in[0][i]-near))/(far-near))
			}
			value, alpha = layOver(value, alpha, s)
		case model.PassNormal:
			value, alpha = layOver(value.Add(tint.Grey(1)).Scale(0.5), alpha, s)
		case model.PassSamples:
			value, alpha = tint.Grey(min(value.R/float32(s.Samples), 1)), 1
		case model.PassNoise:
			value, alpha = tint.Grey(min(value.R/mostNoise, 1)), 1
		default:
			value, alpha = Develop(value, alpha, s)
		}
		r[i], g[i], b[i], a[i] = value.R, value.G, value.B, alpha
	}
	return out, nil
}

// mostNoise is the error, in L*, that the noise pass shows as white.
const mostNoise = 4

// layOver lays an encoded value over the background, where there is one.
func layOver(value tint.RGB, alpha float32, s model.Settings) (tint.RGB, float32) {
	if s.Background.Transparent {
		return value, alpha
	}
	under := s.Background.Color
	back := tint.RGB{R: encode(under.R), G: encode(under.G), B: encode(under.B)}
	return value.Scale(alpha).Add(back.Scale(1 - alpha)), 1
}

// depthRange returns the least and the largest value where anything covers the picture.
func depthRange(depth, cover []float32) (near, far float32) {
	found := false
	for i, d := range depth {
		if cover[i] == 0 {
			continue
		}
		if !found {
			near, far, found = d, d, true
		}
		near, far = min(near, d), max(far, d)
	}
	return near, far
}
