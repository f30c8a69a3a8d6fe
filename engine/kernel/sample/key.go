package sample

// Key names a stream of sample points.
type Key uint32

// For returns the key of an independent stream, for one purpose: the lens, or one light (see Name).
func (k Key) For(purpose uint32) Key {
	return Key(mix(uint32(k) ^ mix(purpose+golden)))
}

// Name returns the purpose that a name stands for: its 32-bit FNV-1a hash (Fowler, Noll & Vo; RFC 9923).
func Name(s string) uint32 {
	h := uint32(2166136261)
	for i := range len(s) {
		h = (h ^ uint32(s[i])) * 16777619
	}
	return h
}

// golden is 2^32 over the golden ratio, odd: it keeps the zero input of mix away from zero output.
const golden = 0x9e3779b9

// mix is a bijection of 32 bits in which each input bit turns each output bit with a probability near one half:
// Murmur3's finaliser form, with the multipliers of C. Wellons' search (2018, "lowbias32").
func mix(h uint32) uint32 {
	h ^= h >> 16
	h *= 0x7feb352d
	h ^= h >> 15
	h *= 0x846ca68b
	h ^= h >> 16
	return h
}
