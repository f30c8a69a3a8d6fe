// Package lamp samples lights: from a point in the scene, where does light come from, and how much of it.
//
// Every lamp has unit intensity (1 cd, 1 lx or 1 nit); colour, intensity and what stands in the way are the caller's.
// A Lamp is made once and may be shared; a Prepared belongs to one shading point. Irradiance gives the same light in
// closed form, for meters and tests. May import: geom, num, sample. Start at New, then Lamp.Prepare, Prepared.Sample.
package lamp
