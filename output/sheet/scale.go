package sheet

import (
	"image"
	"image/color"
	"image/draw"
	"math"
	"sync"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/pixmap"
	"lampbook/output/encode"
)

// decoded gives the linear light of each 8-bit sRGB code.
var decoded = sync.OnceValue(func() *[256]float32 {
	t := new([256]float32)
	for i := range t {
		t[i] = tint.DecodeSRGB(float32(i) / 255)
	}
	return t
})

// light is a picture in linear light, premultiplied: red, green, blue, alpha by turns, row by row.
type light struct {
	width, height int
	pix           []float32
}

// lightOf decodes a picture.
func lightOf(img image.Image) light {
	n := straight(img)
	b := n.Bounds()
	l := light{b.Dx(), b.Dy(), make([]float32, 4*b.Dx()*b.Dy())}
	t := decoded()
	for y := range l.height {
		row := n.Pix[n.PixOffset(b.Min.X, b.Min.Y+y):]
		for x := range l.width {
			from, to := row[4*x:4*x+4], l.pix[4*(y*l.width+x):]
			a := float32(from[3]) / 255
			to[0], to[1], to[2], to[3] = t[from[0]]*a, t[from[1]]*a, t[from[2]]*a, a
		}
	}
	return l
}

// straight returns the picture in 8 bits with straight alpha.
func straight(img image.Image) *image.NRGBA {
	if n, ok := img.(*image.NRGBA); ok {
		return n
	}
	b := img.Bounds()
	n := image.NewNRGBA(image.Rect(0, 0, b.Dx(), b.Dy()))
	if o, ok := img.(interface{ Opaque() bool }); ok && o.Opaque() {
		draw.Draw(&image.RGBA{Pix: n.Pix, Stride: n.Stride, Rect: n.Rect}, n.Rect, img, b.Min, draw.Src) // opaque: the two kinds are alike
		return n
	}
	for y := range b.Dy() {
		for x := range b.Dx() {
			n.SetNRGBA(x, y, color.NRGBAModel.Convert(img.At(b.Min.X+x, b.Min.Y+y)).(color.NRGBA))
		}
	}
	return n
}

// kernelWeights gives, for each of n places of a row of m values scaled to n, the first value that counts and the weights.
type kernelWeights struct {
	first   []int
	weights [][]float32
}

// weightsFor is the cubic of Keys 1981 with a = -1/2, which passes through the samples and keeps edges crisp; made wider when
// scaling down so that every value counts. Weights sum to 1.
func weightsFor(m, n int) kernelWeights {
	k := kernelWeights{make([]int, n), make([][]float32, n)}
	ratio := float64(m) / float64(n)
	stretch := max(1, ratio)
	for i := range n {
		middle := float64((float64(i)+0.5)*ratio) - 0.5
		lo, hi := int(math.Ceil(middle-2*stretch)), int(math.Floor(middle+2*stretch))
		lo, hi = max(lo, 0), min(hi, m-1)
		k.first[i] = lo
		sum := 0.0
		w := make([]float64, hi-lo+1)
		for j := range w {
			w[j] = cubic((float64(lo+j) - middle) / stretch)
			sum += w[j]
		}
		k.weights[i] = make([]float32, len(w))
		for j := range w {
			k.weights[i][j] = float32(w[j] / sum)
		}
	}
	return k
}

// cubic is the kernel, of support 2. Source: Keys 1981, "Cubic convolution interpolation for digital image processing", eq. 15.
func cubic(x float64) float64 {
	x = math.Abs(x)
	x2 := x * x
	x3 := x2 * x
	switch {
	case x < 1:
		return float64(1.5*x3) - float64(2.5*x2) + 1
	case x < 2:
		return float64(-0.5*x3) + float64(2.5*x2) - float64(4*x) + 2
	}
	return 0
}

// to scales a picture, rows first. Sums run in the order of the weights, each product rounded.
func (l light) to(width, height int) light {
	across := weightsFor(l.width, width)
	mid := light{width, l.height, make([]float32, 4*width*l.height)}
	for y := range l.height {
		row := l.pix[4*y*l.width:]
		for x := range width {
			out := mid.pix[4*(y*width+x):][:4]
			for j, w := range across.weights[x] {
				in := row[4*(across.first[x]+j):][:4]
				for c := range 4 {
					out[c] += float32(w * in[c])
				}
			}
		}
	}
	down := weightsFor(l.height, height)
	res := light{width, height, make([]float32, 4*width*height)}
	for y := range height {
		out := res.pix[4*y*width:][:4*width]
		for j, w := range down.weights[y] {
			in := mid.pix[4*(down.first[y]+j)*width:][:4*width]
			for i := range out {
				out[i] += float32(w * in[i])
			}
		}
	}
	return res
}

// over lays the picture on a neutral paper, in linear light, and encodes it in 8 bits with dither.
func (l light) over(paper uint8) (*image.NRGBA, error) {
	under := decoded()[paper]
	m := pixmap.New(l.width, l.height, "R", "G", "B")
	for i := range l.width * l.height {
		px := l.pix[4*i:][:4]
		rest := float32(min(max(1-px[3], 0), 1) * under)
		for c := range 3 {
			m.Planes[c].Pix[i] = tint.EncodeSRGB(min(max(px[c]+rest, 0), 1))
		}
	}
	return encode.Quantize8(m)
}

// opaque reports whether a picture hides what is under it.
func opaque(img image.Image) bool {
	o, ok := img.(interface{ Opaque() bool })
	return ok && o.Opaque()
}
