package model

import "lampbook/engine/kernel/tint"

// Background is what shows where nothing covers the picture. It is a display colour: neither exposure nor tone touch it.
type Background struct {
	Transparent bool     // alpha stays; Color is ignored
	Color       tint.RGB // linear display light, [0, 1]
}

// Mesh describes a mesh; package mesh builds it. Only the fields of its Kind count.
type Mesh struct {
	Kind MeshKind
	// Size: plane width, 0, depth; box width, height, depth; sphere radius; cylinder radius, height;
	// cone bottom radius, top radius, height; disk radius; torus radius, tube radius. Metres, unused entries 0.
	Size     [3]float64
	Segments int          // around, >= 3, where the form is round; 0 means the default
	Profile  [][2]float64 // lathe: (radius, y) from bottom to top; extrude: the (x, y) outline, counter-clockwise or not
	Depth    float64      // extrude: along z, metres
	Crease   float64      // lathe: edges of the profile turning by more than this many degrees stay sharp
	Raw      *RawMesh     // raw
	File     string       // file: path as the engine opens it
	FileHash string       // file: SHA-256 of its content and of the files that it names, in hexadecimal
	Unit     float64      // file: metres to one unit of the file, > 0
	ZUp      bool         // file: the file's up axis is Z
	Smooth   float64      // file, raw: angle in degrees under which faces without normals are smoothed; 0 flat
}

// MeshKind is a sort of mesh.
type MeshKind uint8

// The kinds of mesh.
const (
	MeshPlane MeshKind = iota
	MeshBox
	MeshSphere
	MeshCylinder
	MeshCone
	MeshDisk
	MeshTorus
	MeshLathe
	MeshExtrude
	MeshTestForm
	MeshRaw
	MeshFile
)

// RawMesh is a mesh given as tables.
type RawMesh struct {
	Positions [][3]float64
	Triangles [][3]uint32  // indices from 0
	Normals   [][3]float64 // one a position, or none
	UVs       [][2]float64 // one a position, or none
}

// Material is a surface. Kind says which model; for now there is one.
type Material struct {
	Kind       MaterialKind
	Diffuse    tint.RGB // Cd, reflectance [0, 1]
	Specular   tint.RGB // Cs, [0, 1]
	Ambient    tint.RGB // Ca, [0, 1]
	Emission   tint.RGB // Ce, nit
	Shininess  float64  // S, [0, 100000]
	Normalized bool     // specular times (S + 8) / 8 · N·L
	Opacity    float64  // (0, 1]; the share of rays that the surface stops
}

// MaterialKind is a surface model.
type MaterialKind uint8

// The surface models.
const (
	BlinnPhong MaterialKind = iota
)

// Light is a source. Only the fields of its Kind count.
type Light struct {
	Name       string // unique in its frame, never empty; keys the light's sample points
	Kind       LightKind
	Color      tint.RGB   // linear, multiplies Intensity
	Intensity  float64    // candela (point, spot), lux (directional), nit (area, ambient); >= 0
	Direction  [3]float64 // directional: the way the light travels; not zero
	Position   [3]float64 // point, spot, area: metres
	Target     [3]float64 // spot, area: where the axis points
	Up         [3]float64 // area rectangle: which way Height runs
	Inner      float64    // spot: half angle in degrees inside which all is lit, [0, Outer]
	Outer      float64    // spot: half angle in degrees outside which nothing is, (0, 90]
	Range      float64    // point, spot: metres; 0 means no end
	NoFalloff  bool       // point, spot: intensity / 1 m² at every distance
	Shape      AreaShape
	Width      float64 // area rectangle: metres across
	Height     float64 // area rectangle: metres along Up
	Radius     float64 // area disk, sphere: metres
	TwoSided   bool    // area rectangle, disk: the back emits too
	Visible    bool    // area: the camera sees it
	NoShadow   bool    // what stands between takes no light away
	Components Components
}

// Components are a light's own weights in the four components. Defaults: 1, 1, 1, 0.
type Components struct {
	Diffuse, Specular, Ambient, Emission tint.RGB
}

// LightKind is a sort of light.
type LightKind uint8

// The kinds of light.
const (
	LightDirectional LightKind = iota
	LightPoint
	LightSpot
	LightArea
	LightAmbient
)

// AreaShape is the form of an area light.
type AreaShape uint8

// The shapes of area lights.
const (
	AreaRectangle AreaShape = iota
	AreaDisk
	AreaSphere
)
