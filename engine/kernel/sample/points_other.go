//go:build !amd64 || purego

package sample

// points fills none of uv: this machine makes points one by one.
func (s *stream) points(uint32, [][2]float32) int { return 0 }
