package mesh

import (
	"fmt"
	"math"

	"lampbook/engine/model"
)

// onAxis is the share of the largest radius under which a point counts as on the axis: computed profiles end in values
// like 6e-17 where they mean 0.
const onAxis = 1e-9

// lathe turns m.Profile about y. Outside lies to the right of the profile's direction: a profile that goes outward along the
// bottom, up the outside and back down the inside gives outward normals on all three. A profile that bounds a solid (both ends on
// the axis, or its last point equal to its first) is turned round if it would come out inside out, so either direction serves.
//
//	y ↑      ╭ 3        1 → 2 bottom, outside below
//	  │ 5 ╲ ╱ ╱         2 → 3 wall, outside on the right
//	  │    4 ╱          3 → 4 → 5 inside, facing up and in
//	  1 ── 2     → r
//
// Normals are smooth where the profile turns by no more than m.Crease degrees, weighted by the lengths of the two pieces, so
// that a long straight wall stays straight beside a rounded rim; an end on the axis counts as going on mirrored. Equal neighbours
// count once, and pieces along the axis have no surface.
func lathe(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := angle("crease", m.Crease); err != nil {
		return nil, err
	}
	points, err := cleanProfile(m.Profile)
	if err != nil {
		return nil, err
	}
	last := len(points) - 1
	loop := points[0] == points[last] && points[0][0] != 0
	if (loop || points[0][0] == 0 && points[last][0] == 0) && turnedVolume(points) < 0 {
		for i, j := 0, last; i < j; i, j = i+1, j-1 {
			points[i], points[j] = points[j], points[i]
		}
	}
	return revolve(smoothProfile(points, loop, m.Crease), m.Segments)
}

// cleanProfile checks the points, puts those next to the axis on it, and leaves out repetitions. Points are numbered from 1.
func cleanProfile(profile [][2]float64) ([][2]float64, error) {
	if len(profile) < 2 {
		return nil, fmt.Errorf("profile must have at least 2 points, got %d", len(profile))
	}
	if len(profile) > MaxProfile {
		return nil, fmt.Errorf("profile must have at most %d points, got %d", MaxProfile, len(profile))
	}
	widest := 0.0
	for i, p := range profile {
		if !placed(p[0], p[1]) {
			return nil, fmt.Errorf("profile point %d: radius and y must be within ±%v metres, got %v, %v", i+1, maxCoordinate, p[0], p[1])
		}
		widest = max(widest, p[0])
	}
	if widest < minSize {
		for i, p := range profile {
			if p[0] < 0 {
				return nil, fmt.Errorf("profile point %d: radius must be at least 0, got %v", i+1, p[0])
			}
		}
		return nil, fmt.Errorf("profile points 1 to %d are all on the axis: one radius at least must be > 0", len(profile))
	}
	var points [][2]float64
	for i, p := range profile {
		p = [2]float64{float64(float32(p[0])), float64(float32(p[1]))} // what is one to the mesh is one here
		if math.Abs(p[0]) <= widest*onAxis {
			p[0] = 0
		}
		if p[0] < 0 {
			return nil, fmt.Errorf("profile point %d: radius must be at least 0, got %v", i+1, p[0])
		}
		if len(points) == 0 || points[len(points)-1] != p {
			points = append(points, p)
		}
	}
	if len(points) < 2 {
		return nil, fmt.Errorf("profile points 1 to %d are all the same: at least 2 different ones are needed", len(profile))
	}
	return points, nil
}

// turnedVolume is 3/π times the volume to the left of the profile: the sum of its frusta.
func turnedVolume(points [][2]float64) float64 {
	sum := 0.0
	for i := 1; i < len(points); i++ {
		a, b := points[i-1][0], points[i][0]
		sum += float64((points[i][1] - points[i-1][1]) * (float64(a*a) + float64(a*b) + float64(b*b)))
	}
	return sum
}

// piece is a straight piece of a profile from point a to the next, with its direction (dr, dy), unit, and length in metres.
type piece struct {
	a           int
	dr, dy, len float64
}

// smoothProfile cuts the profile into sections at its creases and at the axis, and gives every point its normal.
func smoothProfile(points [][2]float64, loop bool, creaseDeg float64) []section {
	cosCrease, _ := cosSinDeg(creaseDeg)
	cosCrease -= 1e-9 // a turn of exactly the crease angle is smooth, whatever its rounding
	var pieces []piece
	total := 0.0
	for i := 1; i < len(points); i++ {
		dr, dy := points[i][0]-points[i-1][0], points[i][1]-points[i-1][1]
		l := math.Sqrt(float64(dr*dr) + float64(dy*dy))
		if l == 0 || points[i][0] == 0 && points[i-1][0] == 0 {
			continue
		}
		pieces = append(pieces, piece{i - 1, dr / l, dy / l, l})
		total += l
	}
	// joint returns the normal where piece p runs into piece q; ok is false where the edge between them is sharp.
	joint := func(p, q piece) (nr, ny float64, ok bool) {
		if float64(p.dr*q.dr)+float64(p.dy*q.dy) < cosCrease {
			return 0, 0, false
		}
		nr, ny = float64(p.dy*p.len)+float64(q.dy*q.len), -float64(p.dr*p.len)-float64(q.dr*q.len)
		l := math.Sqrt(float64(nr*nr) + float64(ny*ny))
		return nr / l, ny / l, l > 1e-6*(p.len+q.len)
	}
	// end returns the normal of p at a point where nothing joins it.
	end := func(p piece, r float64) (nr, ny float64) {
		if r == 0 && float64(p.dr*p.dr)-float64(p.dy*p.dy) >= cosCrease {
			return 0, math.Copysign(1, -p.dr)
		}
		return p.dy, -p.dr
	}
	var sections []section
	var open section
	along := 0.0
	for i, p := range pieces {
		a, b := points[p.a], points[p.a+1]
		if open == nil {
			nr, ny := end(p, a[0])
			if i == 0 && loop {
				if jr, jy, ok := joint(pieces[len(pieces)-1], p); ok {
					nr, ny = jr, jy
				}
			}
			open = section{{r: a[0], y: a[1], nr: nr, ny: ny, v: along / total}}
		}
		along += p.len
		nr, ny := end(p, b[0])
		goesOn := false
		switch next := (i + 1) % len(pieces); {
		case b[0] == 0 || next == 0 && !loop || next != 0 && pieces[next].a != p.a+1:
		default:
			if jr, jy, ok := joint(p, pieces[next]); ok {
				nr, ny, goesOn = jr, jy, next != 0
			}
		}
		open = append(open, turnedPoint{r: b[0], y: b[1], nr: nr, ny: ny, v: along / total})
		if !goesOn {
			sections, open = append(sections, open), nil
		}
	}
	return sections
}
