package sample

import (
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
	"pgregory.net/rapid"
)

// TestWarpMoments integrates each warp over a net. Source: WARP rows, closed forms; C: from memory.
func TestWarpMoments(t *testing.T) {
	const n = 4096
	uv := make([][2]float32, n)
	pixelKey(1, 2, 3).Points(0, uv)
	for _, c := range []struct {
		name, source string
		want, sigma  float64 // sigma of one sample
		of           func(u, v float32) float64
	}{
		{"cosine hemisphere, z²", "WARP-cosine-hemisphere-E-z-2-", 0.5, math.Sqrt(1.0/3 - 0.25), func(u, v float32) float64 {
			z := float64(CosineHemisphere(u, v).Z)
			return z * z
		}},
		{"cone of versine 1, z", "WARP-uniform-hemisphere-E-z-", 0.5, math.Sqrt(1.0 / 12), func(u, v float32) float64 {
			return float64(Cone(1, u, v).Z)
		}},
		{"disk, r²", "WARP-uniform-disk-E-r-2-", 0.5, math.Sqrt(1.0 / 12), func(u, v float32) float64 {
			x, y := DiskWide(u, v)
			return x*x + y*y
		}},
		{"disk, xy²x", "symmetry", 0, 0.3, func(u, v float32) float64 {
			x, y := DiskWide(u, v)
			return x * y * y
		}},
		{"disk, x² y²", "closed form 1/24", 1.0 / 24, 0.05, func(u, v float32) float64 {
			x, y := DiskWide(u, v)
			return x * x * y * y
		}},
		{"triangle, b0", "WARP-uniform-triangle-E-b0-", 1.0 / 3, math.Sqrt(1.0 / 18), func(u, v float32) float64 {
			b, _ := Triangle(u, v)
			return float64(b)
		}},
		{"triangle, b1", "symmetry", 1.0 / 3, math.Sqrt(1.0 / 18), func(u, v float32) float64 {
			_, b := Triangle(u, v)
			return float64(b)
		}},
		{"triangle, b0²", "WARP-uniform-triangle-E-b0-2-", 1.0 / 6, math.Sqrt(1.0/15 - 1.0/36), func(u, v float32) float64 {
			b, _ := Triangle(u, v)
			return float64(b) * float64(b)
		}},
		{"triangle, b0 b1", "closed form 1/12", 1.0 / 12, 0.1, func(u, v float32) float64 {
			a, b := Triangle(u, v)
			return float64(a) * float64(b)
		}},
		{"sphere, z", "symmetry", 0, math.Sqrt(1.0 / 3), func(u, v float32) float64 { return float64(Sphere(u, v).Z) }},
		{"sphere, x²", "symmetry: a third of 1", 1.0 / 3, 0.3, func(u, v float32) float64 {
			x := float64(Sphere(u, v).X)
			return x * x
		}},
	} {
		sum := 0.0
		for _, p := range uv {
			sum += c.of(p[0], p[1])
		}
		// A net errs far less than independent samples: a quarter of their sigma still leaves room.
		if got, tol := sum/n, c.sigma/math.Sqrt(n)/4; math.Abs(got-c.want) > tol {
			t.Errorf("%s: mean %.6f, want %.6f within %.1g (%s)", c.name, got, c.want, tol, c.source)
		}
	}
}

// TestWarpUniform bins each warp in cells of equal probability by coordinates that are uniform by theory.
func TestWarpUniform(t *testing.T) {
	turn := func(x, y float32) float64 {
		return math.Mod(math.Atan2(float64(y), float64(x))/(2*math.Pi)+1, 1)
	}
	for name, of := range map[string]func(u, v float32) (a, b float64){
		"disk": func(u, v float32) (float64, float64) {
			x, y := Disk(u, v)
			return float64(x*x + y*y), turn(x, y)
		},
		"sphere": func(u, v float32) (float64, float64) {
			d := Sphere(u, v)
			return float64(d.Z+1) / 2, turn(d.X, d.Y)
		},
		"cosine hemisphere": func(u, v float32) (float64, float64) {
			d := CosineHemisphere(u, v)
			return float64(d.Z * d.Z), turn(d.X, d.Y)
		},
		"cone": func(u, v float32) (float64, float64) {
			d := Cone(0.3, u, v)
			return (1 - float64(d.Z)) / 0.3, turn(d.X, d.Y)
		},
		"triangle": func(u, v float32) (float64, float64) {
			// b0 has the distribution function 1 - (1-b0)²; b1/(1-b0) is uniform.
			a, b := Triangle(u, v)
			return 1 - float64(1-a)*float64(1-a), float64(b) / float64(1-a)
		},
	} {
		counts := make([]int, 64)
		for n := range 64 * 64 {
			k := pixelKey(9, n%64, n/64) // independent points: chi-square supposes them
			u, v := k.Point(0)
			a, b := of(u, v)
			counts[min(int(a*8), 7)<<3|min(int(b*8), 7)]++
		}
		if c := chi2(counts); c > chi63 {
			t.Errorf("%s: chi-square %.1f of 8 x 8 cells, want below %.1f (CHI2-63)", name, c, chi63)
		}
	}
}

// TestWarpDomain checks that results lie where they should for any u, v, edges included.
func TestWarpDomain(t *testing.T) {
	edge := rapid.SampledFrom([]float32{0, 0.25, 0.5, 0.75, 1 - 0x1p-24, 1})
	rapid.Check(t, func(t *rapid.T) {
		number := rapid.OneOf(edge, rapid.Float32Range(0, 1))
		u, v := number.Draw(t, "u"), number.Draw(t, "v")
		versine := rapid.Float32Range(1e-12, 2).Draw(t, "versine")
		if x, y := Disk(u, v); !(x*x+y*y <= 1+1e-6) {
			t.Fatalf("Disk = %v, %v", x, y)
		}
		for _, d := range []geom.Vec3{Sphere(u, v), CosineHemisphere(u, v), Cone(versine, u, v)} {
			if l := d.Len(); !(math.Abs(float64(l)-1) < 1e-6) {
				t.Fatalf("length %v of %v", l, d)
			}
		}
		if d := Cone(versine, u, v); !(1-d.Z <= versine*(1+1e-6)+1e-7) {
			t.Fatalf("Cone(%v) reaches %v", versine, d)
		}
		if a, b := Triangle(u, v); !(a >= 0 && b >= 0 && a+b <= 1+1e-7) {
			t.Fatalf("Triangle = %v, %v", a, b)
		}
		if x := BlackmanHarrisOffset(u); !(x >= -FilterRadius && x <= FilterRadius) {
			t.Fatalf("offset %v", x)
		}
	})
}

// TestConeWhole has a point on the disc's rim that rounding put outside it, where the whole sphere is the cone.
func TestConeWhole(t *testing.T) {
	if d := Cone(2, 0, 0.0088994205); !d.Finite() || math.Abs(float64(d.Len())-1) > 1e-6 {
		t.Errorf("direction %v", d)
	}
}

// TestNarrowCone checks what the versine is for: a cone of 1e-4 rad keeps its shape in float32.
func TestNarrowCone(t *testing.T) {
	const angle = 1e-4
	versine := float32(2 * math.Pow(math.Sin(angle/2), 2))
	for _, u := range []float32{0, 0.1, 0.3} {
		d := Cone(versine, u, 0.5)
		want := angle * float64(1-2*u) // on the axis of the square the radius is |2u - 1|
		if got := math.Hypot(float64(d.X), float64(d.Y)); math.Abs(got/want-1) > 1e-5 {
			t.Errorf("u = %v: sine %g, want %g", u, got, want)
		}
	}
	if got, want := float64(ConePDF(versine)), 1/(math.Pi*angle*angle); math.Abs(got/want-1) > 1e-5 {
		t.Errorf("density %g, want %g (small cap, π·angle²)", got, want)
	}
}

// TestFilter compares the distribution of offsets with the window's integral by quadrature, and its symmetry.
func TestFilter(t *testing.T) {
	window := func(x float64) float64 {
		p := 2 * math.Pi * (x + FilterRadius) / (2 * FilterRadius)
		return 0.35875 - 0.48829*math.Cos(p) + 0.14128*math.Cos(2*p) - 0.01168*math.Cos(3*p)
	}
	// Source: Harris 1978, table I, minimum four-term window; the trapezoidal rule over a full period is exact here.
	const steps = 3000
	integral, at := make([]float64, steps+1), 0.0
	for i := 1; i <= steps; i++ {
		a, b := -FilterRadius+float64(i-1)*2*FilterRadius/steps, -FilterRadius+float64(i)*2*FilterRadius/steps
		at += (window(a) + 4*window((a+b)/2) + window(b)) / 6 * (b - a)
		integral[i] = at
	}
	const n = 65536
	below, worst := 0, 0.0
	i := 0
	for k := range n {
		x := float64(BlackmanHarrisOffset((float32(k) + 0.5) / n))
		for i < steps && -FilterRadius+float64(i)*2*FilterRadius/steps < x {
			worst = max(worst, math.Abs(float64(below)/n-integral[i]/at))
			i++
		}
		below++
		if m := float64(BlackmanHarrisOffset(1 - (float32(k)+0.5)/n)); math.Abs(m+x) > 1e-6 {
			t.Fatalf("offsets %v and %v of opposite numbers do not mirror", x, m)
		}
	}
	// Within a cell of the table the window is taken as flat: half a cell at most, reached in the tails alone.
	if limit := 0.5 / filterCells; worst > limit {
		t.Errorf("the distribution departs by %.2g from the window's integral, want below %.2g", worst, limit)
	}
	if got := BlackmanHarrisOffset(0); got != -FilterRadius {
		t.Errorf("offset of 0 is %v", got)
	}
}
