package main

import (
	"fmt"
	"math"
	"time"

	"lampbook/engine/render"
	"lampbook/engine/run"
)

// meter counts what a run has done, and from it how much is left. It belongs to one goroutine.
type meter struct {
	frames   int            // in the plan
	casts    []render.Stats // the most that each cast takes
	total    int64          // camera rays of all casts
	before   int64          // camera rays of the casts before the one under way
	now      int            // the cast under way; -1 before the first
	inCast   int64          // its camera rays so far
	rays     int64          // all rays so far
	finished int            // frames done or failed
	failed   int
}

func newMeter(frames int, casts []render.Cast) *meter {
	m := &meter{frames: frames, now: -1}
	for _, c := range casts {
		rays := render.Estimate(c)
		m.casts = append(m.casts, rays)
		m.total += rays.CameraRays
	}
	return m
}

// take counts an event.
func (m *meter) take(e run.Event) {
	switch e.Kind {
	case run.CastStarted:
		if m.now >= 0 {
			m.before += m.casts[m.now].CameraRays
		}
		m.now, m.inCast = e.Cast, 0
	case run.RaysCast:
		m.inCast += e.Rays.CameraRays
		m.rays += e.Rays.CameraRays + e.Rays.ShadowRays
	case run.FrameDone:
		m.finished++
	case run.FrameFailed:
		m.finished++
		m.failed++
	}
}

// share returns how much of the work is done, in [0, 1]: camera rays, for their number is known beforehand.
func (m *meter) share() float64 {
	if m.total == 0 {
		return 0
	}
	return min(1, float64(m.before+m.inCast)/float64(m.total))
}

// left returns the time that the rest takes at the pace so far; false where it is too early to say.
func (m *meter) left(elapsed time.Duration) (time.Duration, bool) {
	s := m.share()
	if s < 0.01 || elapsed < time.Second {
		return 0, false
	}
	return time.Duration(float64(elapsed) * (1 - s) / s), true
}

// line says where the run stands: how much of the rays is cast, frames, rays per second, time left.
func (m *meter) line(elapsed time.Duration) string {
	return fmt.Sprintf("%.0f %%, %s", math.Floor(100*m.share()), m.details(elapsed))
}

// details is line without the share, which a bar shows itself.
func (m *meter) details(elapsed time.Duration) string {
	text := fmt.Sprintf("%d of %s", m.finished, count(m.frames, "frame"))
	if m.rays > 0 && elapsed > 0 {
		text += ", " + rate(m.rays, elapsed)
	}
	if left, ok := m.left(elapsed); ok {
		if left < time.Second {
			text += ", under 1 s left"
		} else {
			text += ", " + span(left) + " left"
		}
	}
	return text
}

// rate words rays per second.
func rate(rays int64, d time.Duration) string {
	r := float64(rays) / max(d.Seconds(), 1e-9)
	if r < 1e5 {
		return fmt.Sprintf("%.1f krays/s", r/1e3)
	}
	return fmt.Sprintf("%.1f Mrays/s", r/1e6)
}

// span words a duration as a person would say it.
func span(d time.Duration) string {
	switch {
	case d < 50*time.Millisecond:
		return fmt.Sprintf("%.0f ms", d.Seconds()*1e3)
	case d < 10*time.Second:
		return fmt.Sprintf("%.1f s", d.Seconds())
	case d < 2*time.Minute:
		return fmt.Sprintf("%.0f s", d.Seconds())
	case d < 2*time.Hour:
		return fmt.Sprintf("%.0f min", d.Minutes())
	}
	return fmt.Sprintf("%.1f h", d.Hours())
}

// bytesText words a number of bytes.
func bytesText(n int64) string {
	units := []string{"KB", "MB", "GB", "TB"}
	v, unit := float64(n)/1e3, 0
	for v >= 1000 && unit < len(units)-1 {
		v, unit = v/1e3, unit+1
	}
	if v < 10 {
		return fmt.Sprintf("%.1f %s", v, units[unit])
	}
	return fmt.Sprintf("%.0f %s", v, units[unit])
}

// count words a number of things: "1 frame", "12 frames".
func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// raysText words a number of rays.
func raysText(n int64) string {
	switch {
	case n < 1_000_000:
		return fmt.Sprintf("%d", n)
	case n < 10_000_000_000:
		return fmt.Sprintf("%.1f million", float64(n)/1e6)
	}
	return fmt.Sprintf("%.1f thousand million", float64(n)/1e9)
}
