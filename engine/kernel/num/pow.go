package num

import "math"

// The tables cut [1, 2) into tableSize steps. With 64 of them, the series below need so few terms that a power costs
// about as much as two square roots, and the 1.5 KiB stay in the first-level cache.
const (
	tableBits = 6
	tableSize = 1 << tableBits
)

// logStart is the float32 pattern at which the cells of logTable begin. It is chosen so that 1 lies well inside a cell,
// whose centre is then taken as exactly 1: logarithms near 1 keep their relative precision, which large exponents need.
// Mantissa steps above 1 are twice those below, so two thirds of the cell lie below: 22 cells and two thirds before 1.
const logStart = 0x3f800000 - 22*(1<<(23-tableBits)) - (1<<(23-tableBits))*2/3

// logCell is one cell of mantissas about a centre c.
type logCell struct {
	inv float64 // 1/c
	log float64 // log2 c
}

var (
	logTable  [tableSize]logCell
	exp2Table [tableSize]uint64 // bits of 2^(i/64), less i << (52 - tableBits)
)

func init() {
	for i := range logTable {
		lo := math.Float32frombits(logStart + uint32(i)<<(23-tableBits))
		hi := math.Float32frombits(logStart + uint32(i+1)<<(23-tableBits))
		if lo <= 1 && 1 < hi {
			logTable[i] = logCell{1, 0}
			continue
		}
		inv := 1 / (0.5 * (float64(lo) + float64(hi)))
		logTable[i] = logCell{inv, -seriesLog2(inv)}
	}
	// root[b] is 2^(2^b/64); the entries are products of them.
	var root [tableBits]float64
	r := 2.0
	for b := tableBits - 1; b >= 0; b-- {
		r = math.Sqrt(r)
		root[b] = r
	}
	for i := range exp2Table {
		p := 1.0
		for b := range root {
			if i>>b&1 != 0 {
				p *= root[b]
			}
		}
		exp2Table[i] = math.Float64bits(p) - uint64(i)<<(52-tableBits)
	}
}

// seriesLog2 returns log2 x for x in [1/2, 2] by 2/ln 2 · artanh((x-1)/(x+1)).
func seriesLog2(x float64) float64 {
	return 2 / math.Ln2 * artanhSmall((x-1)/(x+1))
}

// artanhSmall is artanh t for |t| <= 1/3, by its Taylor series, summed from the smallest term: 3^-41/41 is below 2^-64.
func artanhSmall(t float64) float64 {
	t2 := t * t
	sum := 0.0
	for k := 39; k >= 1; k -= 2 {
		sum = float64(sum*t2) + 1/float64(k)
	}
	return float64(t * sum)
}

// AtanhWide returns the inverse hyperbolic tangent of t in (-1, 1), half the logarithm of (1+t)/(1-t), accurate to
// 1e-15 relative. It is ±Inf at ±1 and NaN beyond. It sums a long series: not for inner loops.
func AtanhWide(t float64) float64 {
	if math.Abs(t) <= 1.0/3 {
		return artanhSmall(t)
	}
	switch {
	case t == 1 || t == -1:
		return math.Inf(int(t))
	case !(t > -1 && t < 1):
		return math.NaN()
	}
	m, e := math.Frexp((1 + t) / (1 - t))
	return float64(float64(e)*(math.Ln2/2)) + artanhSmall((m-1)/(m+1))
}

// Coefficients of log2(1+r) = r/ln 2 · (1 - r/2 + r²/3 - …), Taylor; with |r| < 1/127 the first term left out is
// 6e-12 of the result.
const (
	log1 = 1 / math.Ln2
	log2 = -1 / (2 * math.Ln2)
	log3 = 1 / (3 * math.Ln2)
	log4 = -1 / (4 * math.Ln2)
	log5 = 1 / (5 * math.Ln2)
)

// Coefficients of 2^r, Taylor; with |r| <= 1/128 the first term left out is 4e-11 of the result.
const (
	exp1 = math.Ln2
	exp2 = math.Ln2 * math.Ln2 / 2
	exp3 = math.Ln2 * math.Ln2 * math.Ln2 / 6
)

// round6 added to and taken from a float64 of magnitude below 2^45 rounds it to a multiple of 1/64, and leaves that
// multiple, as an integer, in the low bits of the sum.
const round6 = 0x1.8p46

const (
	minNormal = 0x00800000 // float32 pattern of the smallest normal number
	infBits   = 0x7f800000 // float32 pattern of +Inf
)

// Pow returns x^y. x >= 0, or the result is NaN. x^0 = 1^y = 1 exactly, 0^y is 0 for y > 0 and +Inf for y < 0.
// Accurate to 0.51 ulp for every y, also where a large y magnifies the error of the logarithm.
// Pow(x, y) has the bits of Exp2Wide(float64(y)·Log2Wide(x)); use those where x or y repeats.
func Pow(x, y float32) float32 {
	ix := math.Float32bits(x)
	if ix-minNormal >= infBits-minNormal {
		return powEdge(x, y)
	}
	t := ix - logStart
	c := &logTable[t>>(23-tableBits)&(tableSize-1)]
	r := float64(float64(math.Float32frombits(ix-t&0xff800000))*c.inv) - 1
	r2 := r * r
	p := float64(log2*r) + log1 + float64(r2*(log3+float64(r*(log4+float64(r*log5)))))
	z := float64(float64(y) * (c.log + float64(int32(t)>>23) + float64(r*p)))
	if !(z > -151 && z < 129) {
		return exp2Edge(z)
	}
	kd := z + round6
	k := math.Float64bits(kd)
	s := math.Float64frombits(exp2Table[k&(tableSize-1)] + k<<(52-tableBits))
	f := z - (kd - round6)
	return float32(s + float64(float64(s*f)*(float64(exp2*f)+exp1+float64(float64(f*f)*exp3))))
}

// Log2Wide returns log2 x with a relative error below 1e-11, exact at powers of two. It is -Inf at 0 and NaN below.
func Log2Wide(x float32) float64 {
	ix := math.Float32bits(x)
	shift := 0.0
	if ix-minNormal >= infBits-minNormal {
		switch {
		case x == 0:
			return math.Inf(-1)
		case x < 0 || x != x:
			return math.NaN()
		case ix == infBits:
			return math.Inf(1)
		}
		ix = math.Float32bits(x * 0x1p23) // subnormal
		shift = -23
	}
	t := ix - logStart
	c := &logTable[t>>(23-tableBits)&(tableSize-1)]
	r := float64(float64(math.Float32frombits(ix-t&0xff800000))*c.inv) - 1
	r2 := r * r
	p := float64(log2*r) + log1 + float64(r2*(log3+float64(r*(log4+float64(r*log5)))))
	return c.log + float64(int32(t)>>23) + float64(r*p) + shift
}

// Exp2Wide returns 2^z, correctly rounded but for one result in about a thousand, which is the neighbour.
func Exp2Wide(z float64) float32 {
	if !(z > -151 && z < 129) {
		return exp2Edge(z)
	}
	kd := z + round6
	k := math.Float64bits(kd)
	s := math.Float64frombits(exp2Table[k&(tableSize-1)] + k<<(52-tableBits))
	f := z - (kd - round6)
	return float32(s + float64(float64(s*f)*(float64(exp2*f)+exp1+float64(float64(f*f)*exp3))))
}

// Exp2 returns 2^x.
func Exp2(x float32) float32 { return Exp2Wide(float64(x)) }

// Log2 returns the logarithm of x to base 2. It is -Inf at 0 and NaN below.
func Log2(x float32) float32 { return float32(Log2Wide(x)) }

// Exp returns e^x.
func Exp(x float32) float32 { return Exp2Wide(float64(float64(x) * (1 / math.Ln2))) }

// exp2Edge is 2^z where the result is 0, infinite or not a number.
func exp2Edge(z float64) float32 {
	switch {
	case z <= -151:
		return 0
	case z >= 129:
		return float32(math.Inf(1))
	}
	return float32(math.NaN())
}

// powEdge is x^y for x zero, subnormal, negative, infinite or not a number.
func powEdge(x, y float32) float32 {
	if y == 0 {
		return 1
	}
	return Exp2Wide(float64(float64(y) * Log2Wide(x)))
}
