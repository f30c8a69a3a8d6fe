//go:build !unix && !windows

package host

import "time"

// processorTime is the clock where the system does not tell what a process has used.
func processorTime() time.Duration { return time.Since(programStart) }

var programStart = time.Now()
