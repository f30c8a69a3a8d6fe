package sample

import "math/bits"

// Pixel is a pixel's place in the streams of a picture. All pixels of a picture draw from one stream a purpose, each a run of its own,
// and the runs lie along a Z-order curve (Morton 1966): the pixels of every aligned square of 2^k by 2^k take one aligned run
// together, so that their points complete each other as those of one pixel do. The error of such a picture is spread as
// fine grain, which the eye averages away, and little of it is left in broad blotches.
// Source: Ahmed & Wonka 2020, "Screen-space blue-noise diffusion of Monte Carlo sampling error via hierarchical ordering
// of pixels".
type Pixel struct {
	seed  Key
	order uint32 // along the curve
}

// PixelAt returns a pixel's place; x and y in [0, 16384). It depends on nothing but its arguments.
func PixelAt(seed uint32, x, y int) Pixel {
	return Pixel{Key(mix(seed + golden)), spread(uint32(x)) | spread(uint32(y))<<1}
}

// spread moves bit k of x to bit 2k, for the lower 16 bits.
func spread(x uint32) uint32 {
	x &= 0xffff
	x = (x | x<<8) & 0x00ff00ff
	x = (x | x<<4) & 0x0f0f0f0f
	x = (x | x<<2) & 0x33333333
	x = (x | x<<1) & 0x55555555
	return x
}

// Stream is a pixel's run of points for one purpose.
type Stream struct {
	key   Key
	first uint32
}

// For returns the pixel's run of count points at most, for one purpose; see Name. count >= 1.
func (p Pixel) For(purpose uint32, count int) Stream {
	k := bits.Len32(uint32(count - 1)) // runs are of 2^k points
	at := uint64(p.order) << k
	// Where a picture needs more than 2^32 points, it is cut into squares with streams of their own.
	return Stream{Key(mix(uint32(p.seed.For(purpose)) + uint32(at>>32)*golden)), uint32(at)}
}

// Points fills uv with the points first, first+1, … of the run; see Key.Points. Any aligned run of them is a net.
func (s Stream) Points(first uint32, uv [][2]float32) { s.key.Points(s.first+first, uv) }

// Float returns the i-th number of the run; see Key.Float.
func (s Stream) Float(i uint32) float32 { return s.key.Float(s.first + i) }

// Layer returns the run of a further purpose beside this one.
func (s Stream) Layer(purpose uint32) Stream { return Stream{s.key.For(purpose), s.first} }
