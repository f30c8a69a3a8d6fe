// Package aim works out what a scene asks for before any ray is cast: cameras that frame things, the incident light
// meter, lights turned about an axis, and the lights a frame gets when it names none.
//
// It turns descriptions into descriptions, in float64. Single-threaded functions without state; safe to share.
// May import: geom, lamp, model, mesh. Start at Fit and Meter.
package aim
