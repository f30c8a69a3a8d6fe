package run

import (
	"cmp"
	"fmt"

	"lampbook/engine/model"
	"lampbook/engine/render"
)

// DefaultMemory is the bound on the pictures that a run holds, in bytes, where Options give none: 1 GiB.
const DefaultMemory = 1 << 30

// Casts divides the plan's frames into casts, in the order in which the plan first names each. Frames whose camera and
// shadow rays are the same share a cast, unless o.Alone; a group whose pictures would not fit into half of o.Memory (one half
// is rendered while the other is written) is cast in parts. Frames with a Failure are left out. The plan must be valid.
func Casts(p *model.Plan, o Options) []render.Cast {
	budget := cmp.Or(o.Memory, DefaultMemory) / 2
	type group struct {
		frames []int
		bytes  int64
	}
	var groups []*group
	hasher := model.NewHasher(p)
	open := map[model.Hash]*group{} // the part of each group that still has room
	for i := range p.Frames {
		f := &p.Frames[i]
		if f.Failure != "" {
			continue
		}
		size := PictureBytes(f.Settings)
		if o.Alone {
			groups = append(groups, &group{frames: []int{i}})
			continue
		}
		key := render.CastKey(hasher, p, i)
		g := open[key]
		if g == nil || g.bytes+size > budget {
			g = &group{}
			open[key] = g
			groups = append(groups, g)
		}
		g.frames = append(g.frames, i)
		g.bytes += size
	}
	casts := make([]render.Cast, len(groups))
	for i, g := range groups {
		casts[i] = render.Cast{Plan: p, Frames: g.frames}
	}
	return casts
}

// Refuse gives every frame of the plan whose picture alone would not fit into memory bytes a Failure that names what it needs. A run
// of the plan then holds no more pictures than memory allows.
func Refuse(p *model.Plan, memory int64) {
	for i := range p.Frames {
		f := &p.Frames[i]
		if need := PictureBytes(f.Settings); f.Failure == "" && need > memory {
			f.Failure = fmt.Sprintf("the picture of %d × %d pixels needs %s of memory, and %s are allowed: make it smaller, or allow more by --memory",
				f.Settings.Width, f.Settings.Height, mebibytes(need), mebibytes(memory))
		}
	}
}

func mebibytes(n int64) string { return fmt.Sprintf("%.4g MiB", float64(n)/(1<<20)) }

// castBytes is what the finished pictures of a cast hold.
func castBytes(c render.Cast) int64 {
	sum := int64(0)
	for _, i := range c.Frames {
		sum += PictureBytes(c.Plan.Frames[i].Settings)
	}
	return sum
}

// PictureBytes returns what one finished frame with these settings holds in memory: the planes of its linear picture, the passes
// asked for, and the display picture, four bytes a value.
func PictureBytes(s model.Settings) int64 {
	planes := 4 + 4
	for _, p := range s.Passes {
		switch p {
		case model.PassDepth, model.PassSamples, model.PassNoise:
			planes++
		default:
			planes += 3
		}
	}
	return int64(s.Width) * int64(s.Height) * int64(planes) * 4
}
