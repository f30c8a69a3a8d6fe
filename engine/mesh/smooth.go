package mesh

import (
	"math"
	"slices"

	"lampbook/engine/kernel/geom"
)

// smoothing says how vertices without normals get them.
type smoothing struct {
	deg    float64  // neighbours whose planes differ by less are smoothed: degrees, [0, 180]
	groups []uint32 // one a triangle: members of one group are smoothed at any angle, and with nothing else; 0 no group; nil none
	given  []bool   // one a vertex: its normal stands; nil: none does
}

// smooth gives m normals. Around every position the corners of triangles that are smooth across their common edges share one
// normal, the sum of theirs weighted by the corner's angle (Thürmer & Wüthrich 1998); where an edge is sharp, vertices are split.
// Positions count as one by their value, so a seam in the texture does not show. Time is linear in the number of triangles.
func smooth(m *Mesh, how smoothing) {
	parent := joinCorners(m, how)
	class, sums := sumNormals(m, parent)
	var welded welder
	welded.reserve(len(sums))
	out := Mesh{Positions: make([]geom.Vec3, 0, len(sums)), Normals: make([]geom.Vec3, 0, len(sums))}
	for t := range m.Triangles {
		for k, v := range m.Triangles[t] {
			keep := how.given != nil && how.given[v]
			c := class[3*t+k]
			key := [3]uint32{v, c + 1, 0}
			if keep {
				key[1] = 0
			}
			id, fresh := welded.id(key)
			m.Triangles[t][k] = id
			if !fresh {
				continue
			}
			out.Positions = append(out.Positions, m.Positions[v])
			if m.UVs != nil {
				out.UVs = append(out.UVs, m.UVs[v])
			}
			n := geom.Vec3{Y: 1} // of a triangle without an area, which nothing can hit
			if keep {
				n = m.Normals[v]
			} else if unit, ok := unitNormal(sums[c].X, sums[c].Y, sums[c].Z); ok {
				n = unit
			}
			out.Normals = append(out.Normals, n)
		}
	}
	m.Positions, m.Normals, m.UVs = out.Positions, out.Normals, out.UVs
}

// sumNormals numbers the sets of the forest in the order of their first corners and sums the normals of each. class holds each
// corner's set; it is parent, written over.
func sumNormals(m *Mesh, parent []uint32) (class []uint32, sums []geom.Vec3d) {
	for c := range parent { // from the first corner on, so that every parent, which is lower, is a root by then
		parent[c] = parent[parent[c]]
	}
	for t := range m.Triangles {
		n := faceNormal(m, t)
		for k := range 3 {
			c := uint32(3*t + k)
			if root := parent[c]; root == c {
				parent[c] = uint32(len(sums))
				sums = append(sums, geom.Vec3d{})
			} else {
				parent[c] = parent[root] // the root's number by now
			}
			sums[parent[c]] = sums[parent[c]].Add(n.Scale(cornerAngle(m, t, k)))
		}
	}
	return parent, sums
}

// joinCorners returns a union-find forest over the corners (3·triangle + corner): one tree for each set that shares a normal.
func joinCorners(m *Mesh, how smoothing) []uint32 {
	var places, edges welder
	places.reserve(len(m.Positions))
	place := make([]uint32, len(m.Positions))
	for v, p := range m.Positions {
		place[v], _ = places.id(positionKey(p))
	}
	parent := make([]uint32, 3*len(m.Triangles))
	for i := range parent {
		parent[i] = uint32(i)
	}
	cosLimit := 1.0
	if how.deg < 180 {
		cosLimit, _ = cosSinDeg(how.deg)
		cosLimit += 1e-7 // so that a turn of exactly the angle, rounded, stays sharp
	} else {
		cosLimit = -2
	}
	edges.reserve(3 * len(m.Triangles) / 2)
	last := make([]uint32, 0, 3*len(m.Triangles)/2) // by edge: the corner that begins it in the triangle that had it last
	for t, tri := range m.Triangles {
		for k := range 3 {
			next := (k + 1) % 3
			a, b := place[tri[k]], place[tri[next]]
			id, fresh := edges.id([3]uint32{min(a, b), max(a, b), 0})
			begin := uint32(3*t + k)
			if fresh {
				last = append(last, begin)
				continue
			}
			other := last[id]
			last[id] = begin
			if !smoothAcross(m, how, cosLimit, t, int(other/3)) {
				continue
			}
			otherEnd := other - other%3 + (other+1)%3
			if place[m.Triangles[other/3][other%3]] != a { // the usual case: neighbours run along their edge in opposite directions
				other, otherEnd = otherEnd, other
			}
			union(parent, begin, other)
			union(parent, uint32(3*t+next), otherEnd)
		}
	}
	return parent
}

// smoothAcross reports whether the edge between triangles t and s is smooth.
func smoothAcross(m *Mesh, how smoothing, cosLimit float64, t, s int) bool {
	if how.groups != nil && (how.groups[t] != 0 || how.groups[s] != 0) {
		return how.groups[t] == how.groups[s]
	}
	return faceNormal(m, t).Dot(faceNormal(m, s)) > cosLimit
}

// faceNormal is the unit normal of triangle t, or zero if it has no area.
func faceNormal(m *Mesh, t int) geom.Vec3d {
	tri := m.Triangles[t]
	a := m.Positions[tri[0]].Wide()
	n := m.Positions[tri[1]].Wide().Sub(a).Cross(m.Positions[tri[2]].Wide().Sub(a))
	l := math.Sqrt(n.Dot(n))
	if l == 0 {
		return geom.Vec3d{}
	}
	return geom.Vec3d{X: n.X / l, Y: n.Y / l, Z: n.Z / l}
}

// cornerAngle is the angle of triangle t at corner k, in radians, to 7e-5: enough for a weight, and the same bits on every
// machine. Source: Abramowitz & Stegun 1964, eq. 4.4.45.
func cornerAngle(m *Mesh, t, k int) float64 {
	tri := m.Triangles[t]
	p := m.Positions[tri[k]].Wide()
	a, b := m.Positions[tri[(k+1)%3]].Wide().Sub(p), m.Positions[tri[(k+2)%3]].Wide().Sub(p)
	l := math.Sqrt(float64(a.Dot(a) * b.Dot(b)))
	if l == 0 {
		return 0
	}
	c := min(1, max(-1, a.Dot(b)/l))
	x := math.Abs(c)
	angle := -0.0187293
	for _, coefficient := range [...]float64{0.0742610, -0.2121144, 1.5707288} {
		angle = float64(angle*x) + coefficient
	}
	angle = float64(angle * math.Sqrt(1-x))
	if c < 0 {
		return math.Pi - angle
	}
	return angle
}

// find returns the root of i, halving the path on the way.
func find(parent []uint32, i uint32) uint32 {
	for parent[i] != i {
		parent[i] = parent[parent[i]]
		i = parent[i]
	}
	return i
}

// union joins two trees under the lower root.
func union(parent []uint32, i, j uint32) {
	i, j = find(parent, i), find(parent, j)
	parent[max(i, j)] = min(i, j)
}

// welder numbers distinct keys in the order in which they are first seen: a hash table with linear probing that stores
// keys by value. The numbering does not depend on the hash.
type welder struct {
	keys  [][3]uint32
	table []uint32 // 1 + the number of a key; 0 is free; a power of two long, at most half full
}

// id returns the number of a key, and whether it is new.
func (w *welder) id(key [3]uint32) (id uint32, fresh bool) {
	if 2*len(w.keys) >= len(w.table) {
		w.grow()
	}
	mask := uint32(len(w.table) - 1)
	for at := hash3(key) & mask; ; at = (at + 1) & mask {
		n := w.table[at]
		if n == 0 {
			w.keys = append(w.keys, key)
			w.table[at] = uint32(len(w.keys))
			return uint32(len(w.keys) - 1), true
		}
		if w.keys[n-1] == key {
			return n - 1, false
		}
	}
}

// reserve makes room for n keys, so that the table need not grow to hold them.
func (w *welder) reserve(n int) {
	w.keys = slices.Grow(w.keys, n)
	for size := 1024; ; size *= 2 {
		if size > 2*n {
			w.resize(size)
			return
		}
	}
}

// grow doubles the table.
func (w *welder) grow() { w.resize(max(1024, 2*len(w.table))) }

func (w *welder) resize(size int) {
	w.table = make([]uint32, size)
	mask := uint32(len(w.table) - 1)
	for i, key := range w.keys {
		at := hash3(key) & mask
		for w.table[at] != 0 {
			at = (at + 1) & mask
		}
		w.table[at] = uint32(i + 1)
	}
}

// hash3 mixes three words. Source: the 64-bit finaliser of MurmurHash3 (Appleby, public domain).
func hash3(k [3]uint32) uint32 {
	h := uint64(k[0]) | uint64(k[1])<<32
	h ^= uint64(k[2]) * 0x9e3779b97f4a7c15
	h ^= h >> 33
	h *= 0xff51afd7ed558ccd
	h ^= h >> 33
	h *= 0xc4ceb9fe1a85ec53
	h ^= h >> 33
	return uint32(h)
}

// positionKey is equal for equal positions; both zeros are one.
func positionKey(p geom.Vec3) [3]uint32 {
	return [3]uint32{math.Float32bits(p.X + 0), math.Float32bits(p.Y + 0), math.Float32bits(p.Z + 0)}
}
