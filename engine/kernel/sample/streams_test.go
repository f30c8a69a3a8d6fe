package sample

// pixelKey returns a key for each pair of coordinates, so that tests have as many independent streams as they want.
func pixelKey(seed uint32, x, y int) Key {
	h := mix(seed + golden)
	h = mix(h ^ uint32(x))
	h = mix(h + golden ^ uint32(y))
	return Key(h)
}
