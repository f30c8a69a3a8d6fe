package main

import "golang.org/x/sys/windows"

// processorSeconds returns the time that this process has used on all cores; 0 where the system does not say.
func processorSeconds() float64 {
	var created, exited, kernel, user windows.Filetime
	if err := windows.GetProcessTimes(windows.CurrentProcess(), &created, &exited, &kernel, &user); err != nil {
		return 0
	}
	ticks := func(t windows.Filetime) float64 { return float64(uint64(t.HighDateTime)<<32 | uint64(t.LowDateTime)) }
	return (ticks(kernel) + ticks(user)) * 100e-9 // a tick is 100 ns
}
