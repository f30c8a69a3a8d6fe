// Package render turns one cast into pictures: every ray that a group of frames has in common is cast once, and each frame
// of the group is a look, shaded from the same hits and visibilities.
//
// The way through: compile.go makes flat slices of a cast, tiles.go spreads its tiles over the cores, cast.go casts one
// pixel's rays, light.go its shadow rays, film.go sums a look's light and develops it. A look's pixels do not depend on the other looks
// of its cast, on threads or on tile order.
//
// An Engine may be shared; it guards what it keeps. Goroutines that compute are started here and in run alone; the command has two
// more, one that waits for signals and one that shows progress.
// May import: model, mesh, aim, pixmap and the kernels. Start at Engine.Render.
package render
