package render

import (
	"context"
	"sync"
	"sync/atomic"
)

// tileSide is the edge of a tile in pixels: small enough to share out evenly, large enough that its rays stay among the same boxes.
const tileSide = 16

// tile is a rectangle of pixels, half-open.
type tile struct{ x0, y0, x1, y1 int }

// tilesOf cuts a picture into tiles, row by row.
func tilesOf(width, height int) []tile {
	var ts []tile
	for y := 0; y < height; y += tileSide {
		for x := 0; x < width; x += tileSide {
			ts = append(ts, tile{x, y, min(x+tileSide, width), min(y+tileSide, height)})
		}
	}
	return ts
}

// eachTile calls draw once a tile on n goroutines and waits. A goroutine draws with the worker number that it is given. draw writes
// only its own tile's pixels, so that the picture depends neither on n nor on timing. It stops early, between tiles, when ctx is done.
// A panic in draw is raised again in the caller's goroutine.
func eachTile(ctx context.Context, n int, tiles []tile, draw func(worker int, t tile)) error {
	var next atomic.Int64
	var group sync.WaitGroup
	var fault atomic.Pointer[any]
	for w := range n {
		group.Go(func() {
			defer func() {
				if r := recover(); r != nil {
					fault.CompareAndSwap(nil, &r)
				}
			}()
			for ctx.Err() == nil && fault.Load() == nil {
				i := int(next.Add(1)) - 1
				if i >= len(tiles) {
					return
				}
				draw(w, tiles[i])
			}
		})
	}
	group.Wait()
	if r := fault.Load(); r != nil {
		panic(*r)
	}
	return ctx.Err()
}
