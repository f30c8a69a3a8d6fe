package host

import (
	"context"
	"errors"
	"fmt"
	"runtime"
	"runtime/metrics"
	"time"
)

// tick is how many instructions pass between two looks at the clock; pulse, how much time between two looks at the heap. A virtual
// machine writes at most some ten megabytes in a pulse.
const (
	tick  = 32
	pulse = time.Millisecond
)

// meter counts what an evaluation uses and ends it at the bounds. It is the context of the Lua state: the virtual machine asks
// Done before every instruction, so Done counts. Once it has stopped it stays so, and no pcall can go on. Single-threaded.
type meter struct {
	limits  Limits
	outer   context.Context
	closed  chan struct{}
	metrics []metrics.Sample
	trace   func() *Error // fills the place of a stop; nil before the state stands
	stopped *Error

	left, slice int64  // instructions until the next look, and what that began with
	used        int64  // steps before this slice
	pledged     int64  // bytes of strings since the last look at the heap
	allocated   uint64 // by the process, ever, when last asked

	last    time.Time     // when time and heap were last looked at
	started time.Duration // processor time when Lua last began
	spent   time.Duration // processor time of Lua before that

	origin, base uint64 // the heap at the start, and what of it now is not Lua's
	checked      uint64 // the heap after the last collection that weigh asked for

	busy     bool // the engine is at work
	building time.Duration
	built    uint64 // bytes that the heap grew by meanwhile
}

// newMeter starts counting. The heap as it is now is not the scene's.
func newMeter(ctx context.Context, limits Limits) *meter {
	m := &meter{limits: limits, outer: ctx, closed: make(chan struct{}),
		metrics: []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}, {Name: "/gc/heap/allocs:bytes"}}}
	close(m.closed)
	m.left, m.slice = tick, tick
	m.origin = m.heap()
	m.base = m.origin
	m.allocated = m.metrics[1].Value.Uint64()
	m.started = processorTime()
	m.last = time.Now()
	return m
}

// Done counts one instruction. It returns nil, on which nobody can receive, while the scene may go on.
func (m *meter) Done() <-chan struct{} {
	m.left--
	if m.left > 0 {
		return nil
	}
	m.look()
	if m.stopped != nil {
		m.left = 0
		return m.closed
	}
	return nil
}

// Err says why the meter stopped; the virtual machine makes it the message of the error that it raises.
func (m *meter) Err() error {
	if m.stopped != nil {
		return errors.New(m.stopped.Msg)
	}
	return nil
}

// Deadline and Value complete a context; nothing asks for them.
func (m *meter) Deadline() (time.Time, bool) { return time.Time{}, false }

// Value holds nothing.
func (m *meter) Value(any) any { return nil }

// charge counts work done outside the virtual machine's instructions. It reports whether the scene may go on.
func (m *meter) charge(steps int64) bool {
	m.used += max(steps, 0)
	if m.stopped == nil && m.used > m.limits.Steps {
		m.look()
	}
	return m.stopped == nil
}

// inside is charge for a binding that runs long and allocates: it looks at the bounds as the virtual machine would.
func (m *meter) inside(steps int) bool {
	m.used += int64(max(steps, 0))
	m.look()
	return m.stopped == nil
}

// reserve is asked before a string of n bytes is made. It reports whether it may be.
func (m *meter) reserve(n int64) bool {
	m.pledged += n
	if m.charge(n/bytesPerStep+1) && m.pledged > maxString {
		m.weigh()
	}
	return m.stopped == nil
}

// bytesPerStep is how many bytes, allocated or copied, count as one step.
const bytesPerStep = 32

// look compares what is used with the bounds: the steps always, the rest once in a pulse.
func (m *meter) look() {
	m.used += m.slice - max(m.left, 0)
	m.left, m.slice = tick, tick
	if m.stopped != nil {
		return
	}
	now := time.Now()
	if now.Sub(m.last) >= pulse {
		m.last = now
		if err := m.outer.Err(); err != nil {
			m.stop(interrupted(err), err)
			return
		}
		m.weigh()
		if m.spent+processorTime()-m.started > m.limits.Time {
			m.stop(fmt.Sprintf("the scene does not come to an end: stopped after %v of processor time", m.limits.Time), nil)
		}
	}
	if m.used > m.limits.Steps {
		m.stop(fmt.Sprintf("the scene does not come to an end: stopped after %s steps of work", grouped(m.limits.Steps)), nil)
	}
}

// weigh counts what was allocated as work and compares the heap with its bound. What looks too much may be garbage, so that is
// collected before the verdict; then a quarter of the bound may be allocated before it is collected again.
func (m *meter) weigh() {
	m.pledged = 0
	heap := m.heap()
	if now := m.metrics[1].Value.Uint64(); now > m.allocated {
		m.used += int64(now-m.allocated) / bytesPerStep
		m.allocated = now
	}
	bound := m.base + uint64(m.limits.Memory)
	if heap <= max(bound, m.checked+uint64(m.limits.Memory/4)) {
		return
	}
	runtime.GC()
	if m.checked = m.heap(); m.checked > bound {
		m.stop(fmt.Sprintf("the scene holds more than %d MiB", m.limits.Memory>>20), nil)
	}
}

// heap returns the bytes of objects on the heap, dead ones that are not swept yet included.
func (m *meter) heap() uint64 {
	metrics.Read(m.metrics)
	return m.metrics[0].Value.Uint64()
}

// stop ends the evaluation for good. The first reason counts.
func (m *meter) stop(msg string, cause error) {
	if m.stopped != nil {
		return
	}
	m.stopped = &Error{Msg: msg, Cause: cause}
	if m.trace != nil {
		at := m.trace()
		m.stopped.Pos, m.stopped.Trace = at.Pos, at.Trace
	}
	m.left, m.slice = 0, 0
}

// engine runs work of the engine that the scene asked for: reading a file, building a mesh. Its time and memory have bounds of their own.
func (m *meter) engine(work func()) { m.aside(work, true) }

// compute runs work of the engine that leaves nothing behind, such as fitting a camera to meshes: its time has the bound of engine.
func (m *meter) compute(work func()) { m.aside(work, false) }

// aside runs work outside the scene's own time; with keeps, what the heap grows by is not the scene's either.
func (m *meter) aside(work func(), keeps bool) {
	if m.busy {
		work()
		return
	}
	m.busy = true
	begin, before := processorTime(), m.heap()
	m.spent += begin - m.started
	defer func() {
		m.busy = false
		m.started = processorTime()
		m.building += m.started - begin
		if after := m.heap(); keeps && after > before {
			m.built += after - before
			m.base += after - before
		}
		m.allocated = m.metrics[1].Value.Uint64()
		switch {
		case m.outer.Err() != nil:
			m.stop(interrupted(m.outer.Err()), m.outer.Err())
		case m.building > m.limits.Build:
			m.stop(fmt.Sprintf("reading files, building meshes and framing them takes more than %v of processor time", m.limits.Build), nil)
		case m.built > uint64(m.limits.Meshes):
			m.settle()
		}
	}()
	work()
}

// end stops counting: what the mesh library does after the evaluation is not the scene's.
func (m *meter) end() { m.busy = true }

// settle looks again at what meshes hold once their garbage is gone.
func (m *meter) settle() {
	runtime.GC()
	held := m.heap()
	held -= min(held, m.origin)
	if held > uint64(m.limits.Meshes+m.limits.Memory) {
		m.stop(fmt.Sprintf("the scene's files and meshes hold more than %d MiB", m.limits.Meshes>>20), nil)
		return
	}
	m.built, m.base = held, m.origin+held
}

// interrupted says how an evaluation was ended from outside.
func interrupted(err error) string {
	if errors.Is(err, context.DeadlineExceeded) {
		return "stopped: the time given for the evaluation is over"
	}
	return "stopped: interrupted"
}

// grouped writes a number with thin groups of three digits, as 150,000,000.
func grouped(n int64) string {
	s := fmt.Sprint(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}
