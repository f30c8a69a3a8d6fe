package host

import (
	"time"

	"golang.org/x/sys/windows"
)

// processorTime is what the process has used, all threads together. Unlike the clock it does not run while others have the machine.
func processorTime() time.Duration {
	var created, exited, kernel, user windows.Filetime
	if err := windows.GetProcessTimes(windows.CurrentProcess(), &created, &exited, &kernel, &user); err != nil {
		return time.Since(programStart)
	}
	ticks := func(t windows.Filetime) int64 { return int64(t.HighDateTime)<<32 | int64(t.LowDateTime) }
	return time.Duration(100 * (ticks(kernel) + ticks(user))) // a tick is 100 ns
}

var programStart = time.Now()
