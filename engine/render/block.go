package render

import (
	"math"

	"lampbook/engine/kernel/num"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// blockSide is the edge, in pixels, of the blocks that take their samples together.
const blockSide = 4

// firstRound is the number of samples after which a pixel's noise is first looked at, where noise decides: fewer could all agree in a penumbra
// by chance. An estimate compares two rounds, so that no pixel stops below twice as many.
const firstRound = 16

// adaptive is what a look remembers of a block while samples are added.
type adaptive struct {
	done bool
	last [blockSide * blockSide]float32 // luminance after the round before, straight after exposure
}

// drawBlock casts a block's rays and exposes every look's film. Looks without a noise target are exposed from all samples. For the others
// the samples double, round by round, and a look is exposed as soon as its error is below its target; what other looks still need
// makes no difference to it.
func (c *cast) drawBlock(w *worker, films []*film, b tile) {
	pixels := (b.x1 - b.x0) * (b.y1 - b.y0)
	w.block = grow(w.block, pixels)
	for i := range w.block {
		w.block[i].reset(len(c.globes))
	}
	w.errors = grow(w.errors, len(c.looks))
	open := len(c.looks)
	for k := range w.errors {
		w.errors[k].done = false
	}
	end := c.settings.Samples
	if c.adapts {
		end = min(firstRound, (end+1)/2) // an estimate takes two rounds
	}
	for first := 0; open > 0; first, end = end, min(2*end, c.settings.Samples) {
		for i := range w.block {
			c.castPixel(w, &w.block[i], b.x0+i%(b.x1-b.x0), b.y0+i/(b.x1-b.x0), first, end)
		}
		for k := range c.looks {
			state, lk := &w.errors[k], &c.looks[k]
			last := end == c.settings.Samples
			if state.done || lk.settings.Noise == 0 && !last && !lk.wantNoise {
				continue
			}
			var worst float32
			if c.adapts {
				worst = state.update(c, lk, w.block, first, end)
			}
			if !last && !(lk.settings.Noise > 0 && first > 0 && worst <= float32(lk.settings.Noise)) {
				continue
			}
			state.done = true
			open--
			for i := range w.block {
				at := (b.y0+i/(b.x1-b.x0))*c.settings.Width + b.x0 + i%(b.x1-b.x0)
				films[k].expose(c, lk, &w.block[i], end, at)
				films[k].account(end, worst, at)
			}
			films[k].tallies[b.y0/blockSide*blocksIn(c.settings.Width)+b.x0/blockSide] = tally{int32(end), int32(pixels), worst}
		}
	}
}

// update takes the look's luminances after samples [0, end) and returns the block's standard error in L*. The samples before first and those
// since make two halves, each a picture of its own; half their difference is an estimate of the error of their mean, which errs on the
// large side as the halves of one scrambled net complete each other. A pixel's estimate rests on one difference alone, so it is
// pooled over quads of two by two pixels, and the worst quad speaks for the block.
func (a *adaptive) update(c *cast, lk *look, block []pixelSums, first, end int) float32 {
	var square [blockSide * blockSide]float32
	for i := range block {
		now := lk.luminance(c, &block[i], end)
		if first > 0 {
			share := float32(first) / float32(end)
			// now is the mean of all; before and after are the means of the halves.
			before := a.last[i]
			after := (now - float32(share*before)) / (1 - share)
			d := lightness(after) - lightness(before)
			// For halves of unequal size the error of the mean is √(share·(1 - share)) of the difference, one half for equal ones.
			square[i] = float32(d*d) * float32(share*(1-share))
		}
		a.last[i] = now
	}
	if first == 0 {
		return 100
	}
	if len(block) < blockSide*blockSide {
		return rms(square[:len(block)]) // at the picture's edge
	}
	worst := float32(0)
	for y := 0; y < blockSide; y += 2 {
		for x := 0; x < blockSide; x += 2 {
			i := y*blockSide + x
			worst = max(worst, rms([]float32{square[i], square[i+1], square[i+blockSide], square[i+blockSide+1]}))
		}
	}
	return worst
}

// rms is the root of the mean of squares.
func rms(squares []float32) float32 {
	sum := 0.0
	for _, s := range squares {
		sum += float64(s)
	}
	return float32(math.Sqrt(sum / float64(len(squares))))
}

// luminance is the pixel's exposed luminance over the background, as far as noise in it is seen: light beyond white counts as white.
func (lk *look) luminance(c *cast, s *pixelSums, samples int) float32 {
	perSample := 1 / float64(samples)
	alpha := float32(s.covered * perSample)
	var sum light
	if s.covered > 0 {
		for _, part := range lk.shade(c, s, perSample*float64(lk.exposure)) {
			for j := range sum {
				sum[j] += part[j]
			}
		}
	}
	y := tint.RGB{R: float32(sum[0]), G: float32(sum[1]), B: float32(sum[2])}.Luminance()
	under := lk.settings.Background.Color
	if lk.settings.Background.Transparent {
		under = tint.Grey(0.18)
	}
	return y + float32((1-alpha)*under.Luminance())
}

// lightness is CIE 1976 L* of a luminance relative to white (ISO 11664-4), at most 100.
func lightness(y float32) float32 {
	const bend = 216.0 / 24389
	switch {
	case !(y > 0):
		return 0
	case y < bend:
		return y * (24389.0 / 27)
	case y >= 1:
		return 100
	}
	return float32(116*num.Pow(y, 1.0/3)) - 16
}

// account writes the passes that tell how a pixel was sampled.
func (f *film) account(samples int, worst float32, i int) {
	if f.samples != nil {
		f.samples[i] = float32(samples)
	}
	if f.noise != nil {
		f.noise[i] = worst
	}
}

// blocksIn is how many blocks lie along an edge of so many pixels.
func blocksIn(side int) int { return (side + blockSide - 1) / blockSide }

// sampled returns the mean number of camera rays that a pixel took, and the root mean square of the blocks' errors as estimated, L*.
func (f *film) sampled() (samples, noise float64) {
	var pixels, rays int64
	sum := 0.0
	for _, t := range f.tallies {
		pixels += int64(t.pixels)
		rays += int64(t.samples) * int64(t.pixels)
		sum += float64(float64(t.noise) * float64(t.noise) * float64(t.pixels))
	}
	return float64(rays) / float64(pixels), math.Sqrt(sum / float64(pixels))
}

// wants reports whether the settings ask for a pass.
func wants(s model.Settings, pass model.Pass) bool {
	for _, p := range s.Passes {
		if p == pass {
			return true
		}
	}
	return false
}
