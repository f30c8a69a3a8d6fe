package run

import "lampbook/engine/render"

// Event is news of a run. Only the fields of its Kind count.
type Event struct {
	Kind   EventKind
	Cast   int          // CastStarted: which, from 0, as Casts lists them
	Frames int          // CastStarted: how many frames share it
	Rays   render.Stats // RaysCast: how many since the last such event
	Frame  int          // FrameDone, FrameFailed: index in the plan
	Reason string       // FrameFailed: why
}

// EventKind is a sort of news.
type EventKind uint8

// The kinds of Event.
const (
	CastStarted EventKind = iota
	RaysCast
	FrameDone   // the sink has taken it
	FrameFailed // the sink has been told
)

// send gives an event to whoever reads them.
func (o Options) send(e Event) {
	if o.Events != nil {
		o.Events <- e
	}
}
