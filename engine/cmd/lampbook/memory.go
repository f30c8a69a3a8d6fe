package main

import "lampbook/engine/run"

// halfOfMemory is half of what the machine has, in bytes; run.DefaultMemory where it does not say.
func halfOfMemory() int64 {
	if n := machineMemory(); n > 0 {
		return max(n/2, leastMemory)
	}
	return run.DefaultMemory
}
