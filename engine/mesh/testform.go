package mesh

import (
	"math"

	"lampbook/engine/model"
)

// testFormHeight is the height of the test form in metres.
const testFormHeight = 0.2

// testForm is a standing lamp bowl, thought out for judging surfaces: what a sphere hides, it shows. It stands on y = 0, closed.
//
//	 ______________
//	(   \______/   )   lip of small radius, flat rim, sharp edge, hollow bowl that catches its own light
//	 `--.      .--´
//	     )    (        neck: tight concave curve
//	 .--´      `--.    shoulder: straight cone, then the crease
//	/              \
//	\              /   belly: large radius, the place to read highlights
//	 `-.        .-´
//	    )      (       waist: wide concave curve, running into the belly without an edge
//	  _´        `_     inner crease
//	 (____________)    foot: flat step, straight band, small round-overs
func testForm(m model.Mesh, _ Reader) (*Mesh, error) {
	var p pen
	p.line(34) // underside of the foot
	p.arc(4, 90)
	p.line(5)
	p.arc(3, 90)
	p.line(5)
	p.corner(-32)
	p.arc(-26, 113) // waist
	p.arc(58, 92)   // belly
	p.corner(38)
	p.line(20)      // shoulder
	p.arc(-14, 145) // neck
	p.line(16)
	p.arc(6, 160) // lip
	p.line(5)
	p.corner(55)
	_, sin := cosSinDeg(55)
	p.arc(-p.r/sin, 55) // bowl, ending level on the axis
	p.close()

	top := 0.0
	for _, s := range p.sections {
		for _, q := range s {
			top = max(top, q.y)
		}
	}
	for _, s := range p.sections {
		for i := range s {
			s[i].r *= testFormHeight / top
			s[i].y *= testFormHeight / top
			s[i].v /= p.along
		}
	}
	return revolve(p.sections, m.Segments)
}

// pen draws a profile of lines and arcs that run into each other, with their true normals. It starts on the axis at y = 0, heading
// outward; turning left rounds the solid, turning right hollows it. Lengths are in the profile's own unit.
type pen struct {
	r, y     float64
	heading  float64 // degrees, [0, 360): 0 outward, 90 up
	along    float64 // length drawn
	sections []section
	cut      bool // the next point begins a section
}

// put adds the present point with the normal to the right of the heading.
func (p *pen) put() {
	c, s := cosSinDeg(p.heading)
	if len(p.sections) == 0 || p.cut {
		p.sections, p.cut = append(p.sections, nil), false
	}
	last := &p.sections[len(p.sections)-1]
	*last = append(*last, turnedPoint{r: p.r, y: p.y, nr: s, ny: -c, v: p.along})
}

// begin puts the present point if a section begins with it.
func (p *pen) begin() {
	if len(p.sections) == 0 || p.cut {
		p.put()
	}
}

// line goes on straight.
func (p *pen) line(length float64) {
	p.begin()
	c, s := cosSinDeg(p.heading)
	p.r += float64(length * c)
	p.y += float64(length * s)
	p.along += length
	p.put()
}

// arc goes on along a circle for so many degrees, to the left for a positive radius, to the right for a negative one, in steps of 3
// degrees or less: the chords of the belly stray from it by R·(1 - cos 1.5°), 0.02 in a form 180 high.
func (p *pen) arc(radius, deg float64) {
	p.begin()
	steps := math.Ceil(deg / 3)
	turn := math.Copysign(deg, radius)
	from := p.heading
	c0, s0 := cosSinDeg(from)
	r0, y0 := p.r-float64(radius*s0), p.y+float64(radius*c0) // the centre
	for i := 1.0; i <= steps; i++ {
		p.heading = math.Mod(from+float64(turn*i)/steps+360, 360)
		c, s := cosSinDeg(p.heading)
		p.r, p.y = r0+float64(radius*s), y0-float64(radius*c)
		p.along += float64(float64(math.Abs(radius)*deg) / steps * (math.Pi / 180))
		p.put()
	}
}

// corner turns on the spot: a crease. Left is positive.
func (p *pen) corner(deg float64) {
	p.heading = math.Mod(p.heading+deg+360, 360)
	p.cut = true
}

// close puts the last point exactly on the axis, where rounding left it next to it.
func (p *pen) close() {
	last := p.sections[len(p.sections)-1]
	last[len(last)-1].r = 0
}
