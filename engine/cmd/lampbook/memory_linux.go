package main

import (
	"os"
	"regexp"
	"strconv"
	"strings"
)

// memTotal is the line of proc(5), meminfo, that tells the usable memory, in units of 1024 bytes whatever it says.
var memTotal = regexp.MustCompile(`(?m)^MemTotal: +([0-9]+) kB$`)

// machineMemory returns the bytes of memory that this process may use: the machine's, or its control group's if that is less
// (Linux kernel, "Control Group v2", memory.max). 0 where it cannot be found.
func machineMemory() int64 {
	text, err := os.ReadFile("/proc/meminfo")
	if err != nil {
		return 0
	}
	found := memTotal.FindSubmatch(text)
	if found == nil {
		return 0
	}
	kib, err := strconv.ParseInt(string(found[1]), 10, 43)
	if err != nil {
		return 0
	}
	n := kib << 10
	if text, err := os.ReadFile("/sys/fs/cgroup/memory.max"); err == nil {
		if most, err := strconv.ParseInt(strings.TrimSpace(string(text)), 10, 64); err == nil && most > 0 { // "max" is no number
			n = min(n, most)
		}
	}
	return n
}
