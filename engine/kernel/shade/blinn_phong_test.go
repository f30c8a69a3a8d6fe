package shade

import (
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/tint"

	"pgregory.net/rapid"
)

// TestTextbookSum evaluates the reflection of worked examples, at E0 = π.
func TestTextbookSum(t *testing.T) {
	m := BlinnPhong{Diffuse: tint.RGB{R: 0.8, G: 0.5, B: 0.3}, Specular: tint.Grey(0.5), Lobe: Lobe{Shininess: 32}}
	n := geom.Vec3{Z: 1}
	wo, wi := geom.Vec3{Y: -1, Z: 3}.Unit(), geom.Vec3{X: 1, Y: 2, Z: 2}.Unit()
	// Reference BP4-POINT: the sum less emission (0.05, 0, 0) and ambient 0.04; standard formula.
	want := [3]float64{0.7499242456399666 - 0.09, 0.4999242456399666 - 0.04, 0.3665909123066333 - 0.04}
	d, s := m.Reflect(n, wi, wo, tint.Grey(math.Pi))
	sum := d.Add(s)
	for k, got := range []float32{sum.R, sum.G, sum.B} {
		if math.Abs(float64(got)-want[k]) > 1e-6 {
			t.Errorf("component %d: %v, want %v (reference BP4-POINT)", k, got, want[k])
		}
	}
	if nh := HalfCosine(n, wi, wo); math.Abs(float64(nh)-0.9579818178817235) > 1e-6 {
		t.Errorf("N·H = %v, want 0.95798 (reference BP4-POINT)", nh)
	}
	// Reference BP4-SPOT: a lamp straight above, its attenuation 0.71942 and spot factor 0.96098 given with the row (its cone is not ours).
	d, s = m.Reflect(n, geom.Vec3{Z: 1}, wo, tint.Grey(float32(math.Pi*0.7194244604316546*0.9609803444828173)))
	sum = d.Add(s)
	want = [3]float64{0.8711426665920167 - 0.09, 0.6137368368475237 - 0.04, 0.47546628368452837 - 0.04}
	for k, got := range []float32{sum.R, sum.G, sum.B} {
		if math.Abs(float64(got)-want[k]) > 1e-6 {
			t.Errorf("component %d: %v, want %v (reference BP4-SPOT)", k, got, want[k])
		}
	}
	if d, s := m.Reflect(n, wi.Neg(), wo, tint.Grey(1)); !d.Black() || !s.Black() {
		t.Errorf("light from behind gives %v and %v", d, s)
	}
}

// integrate returns the integral of f over the hemisphere of directions, by the midpoint rule in cosine and azimuth.
func integrate(f func(wi geom.Vec3) float64) float64 {
	const rings, sectors = 1200, 128
	sum := 0.0
	for i := range rings {
		z := (float64(i) + 0.5) / rings
		r := math.Sqrt(1 - z*z)
		for j := range sectors {
			sin, cos := math.Sincos(2 * math.Pi * (float64(j) + 0.5) / sectors)
			sum += f(geom.Vec3{X: float32(r * cos), Y: float32(r * sin), Z: float32(z)})
		}
	}
	return sum * 2 * math.Pi / (rings * sectors)
}

// TestLobeIntegrals compares the lobe with published integrals over the hemisphere.
func TestLobeIntegrals(t *testing.T) {
	n := geom.Vec3{Z: 1}
	tests := []struct {
		shininess float32
		mu        float64 // cosine of the view
		want      float64 // ∫ (N·H)^S N·L dω
		source    string
	}{
		{4, 1, 2.2252947962927703, "reference BP-NORM-4"},
		{10, 1, 1.5006714907772674, "reference BP-NORM-10"},
		{32, 1, 0.6570654434756406, "reference BP-NORM-32"},
		{128, 1, 0.18747033084358672, "reference BP-NORM-128"},
		{256, 1, 0.09591505298974205, "reference BP-NORM-256"},
		{10, 0.5, 0.6007543568937392, "reference BP-ALB-10-0.500"},
		{10, 0.2, 0.2856171481028659, "reference BP-ALB-10-0.200"},
		{64, 0.866025403784, 0.27159946772515103, "reference BP-ALB-64-0.866"},
		{64, 0.5, 0.09811479437377185, "reference BP-ALB-64-0.500"},
	}
	for _, tt := range tests {
		wo := geom.Vec3{X: float32(math.Sqrt(1 - tt.mu*tt.mu)), Z: float32(tt.mu)}
		plain, norm := Lobe{Shininess: tt.shininess}, Lobe{Shininess: tt.shininess, Normalized: true}
		got := integrate(func(wi geom.Vec3) float64 {
			return float64(plain.At(HalfCosine(n, wi, wo), wi.Z)) * float64(wi.Z)
		})
		if math.Abs(got-tt.want) > 1e-3*tt.want {
			t.Errorf("S %v, view %v: integral %v, want %v (%s)", tt.shininess, tt.mu, got, tt.want, tt.source)
		}
		// Normalized: times (S + 8)/8, and over π the approximate factor of the reference's albedo_with_n8_8pi.
		albedo := integrate(func(wi geom.Vec3) float64 { return float64(norm.At(HalfCosine(n, wi, wo), wi.Z)) }) / math.Pi
		if want := tt.want * (float64(tt.shininess) + 8) / (8 * math.Pi); math.Abs(albedo-want) > 1e-3*want {
			t.Errorf("S %v, view %v: normalized albedo %v, want %v (%s, albedo_with_n8_8pi)", tt.shininess, tt.mu, albedo, want, tt.source)
		}
	}
	// Reference PHONG-NORM rows: ∫ cos^n dω = 2π/(n+1), by the same rule; it checks the rule that judges the lobes.
	for _, row := range []struct{ n, want float64 }{{1, 0.3183098861837907}, {10, 1.7507043740108488}, {50, 8.116902097686662}} {
		got := integrate(func(wi geom.Vec3) float64 { return math.Pow(float64(wi.Z), row.n) })
		if math.Abs(1/got-row.want) > 1e-3*row.want {
			t.Errorf("∫ cos^%v dω = %v, want %v (reference PHONG-NORM-%v)", row.n, got, 1/row.want, row.n)
		}
	}
}

// TestLobeEdges checks shininess 0, light along the surface, and opposite directions.
func TestLobeEdges(t *testing.T) {
	flat := Lobe{}
	for _, nh := range []float32{0, 0.3, 1} {
		if got := flat.At(nh, 0.5); got != 1 {
			t.Errorf("shininess 0 at N·H %v gives %v, want 1", nh, got)
		}
	}
	if got := (Lobe{Shininess: 5}).At(0, 0.5); got != 0 {
		t.Errorf("N·H 0 gives %v, want 0", got)
	}
	if got := HalfCosine(geom.Vec3{Z: 1}, geom.Vec3{X: 1}, geom.Vec3{X: -1}); got != 0 {
		t.Errorf("opposite directions give N·H %v, want 0", got)
	}
}

// TestReciprocity checks that exchanging light and eye leaves the plain lobe and the half cosine as they are.
func TestReciprocity(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		dir := func(name string) geom.Vec3 {
			g := rapid.Float32Range(-1, 1)
			return geom.Vec3{X: g.Draw(t, name+".x"), Y: g.Draw(t, name+".y"), Z: rapid.Float32Range(0.01, 1).Draw(t, name+".z")}.Unit()
		}
		a, b, n := dir("a"), dir("b"), geom.Vec3{Z: 1}
		if x, y := HalfCosine(n, a, b), HalfCosine(n, b, a); x != y {
			t.Fatalf("N·H is %v one way and %v the other", x, y)
		}
		s := rapid.Float32Range(0, 1e5).Draw(t, "S")
		f := Lobe{Shininess: s}.At(HalfCosine(n, a, b), 1)
		if !(f >= 0 && f <= 1) {
			t.Fatalf("a lobe of shininess %v gives %v", s, f)
		}
	})
}
