// Package run takes a plan's frames through the engine: grouped into casts, rendered one cast after another, handed to a sink.
//
// It knows no file format and draws nothing on a terminal: finished pictures go to the Sink, news goes out as Events.
// One bad frame fails alone; a cancelled context stops in good order with what is finished kept; a sink that cannot write ends
// the run. Run may be called from several goroutines at once, each with its own plan.
// May import: render and what render may. Start at Run; Casts says how a plan is divided without casting a ray.
package run
