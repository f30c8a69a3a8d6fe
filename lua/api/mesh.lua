---@meta

--- A mesh: a surface of triangles, in metres. Primitives are centred on the origin.
---@class mesh
---@field low point its lowest coordinates, metres
---@field high point its highest coordinates, metres
---@field slots string[] names of the parts that may have a material of their own
---@field failure string? why its file did not load; nil if all is well
mesh = {}

---@class mesh.plane.keys
---@field width number along x, metres, > 0
---@field depth? number along z, metres, > 0; default as wide

--- A rectangle that lies flat and faces up.
--- Example: mesh.plane{ width = 2 }
---@param keys mesh.plane.keys
---@return mesh
function mesh.plane(keys) end

---@class mesh.box.keys
---@field width number along x, metres, > 0
---@field height? number along y, metres, > 0; default as wide
---@field depth? number along z, metres, > 0; default as wide

--- A box.
--- Example: mesh.box{ width = cm(12), height = cm(4) }
---@param keys mesh.box.keys
---@return mesh
function mesh.box(keys) end

---@class mesh.sphere.keys
---@field radius number metres, > 0
---@field segments? integer around, 3 to 1024; default 96

--- A sphere.
--- Example: mesh.sphere{ radius = 0.05 }
---@param keys mesh.sphere.keys
---@return mesh
function mesh.sphere(keys) end

---@class mesh.cylinder.keys
---@field radius number metres, > 0
---@field height number along y, metres, > 0
---@field segments? integer around, 3 to 1024; default 96

--- A closed cylinder that stands upright.
--- Example: mesh.cylinder{ radius = 0.04, height = 0.1 }
---@param keys mesh.cylinder.keys
---@return mesh
function mesh.cylinder(keys) end

---@class mesh.cone.keys
---@field radius number of its foot, metres, at least 0
---@field top? number radius of its upper end, metres, at least 0; default 0, a point
---@field height number along y, metres, > 0
---@field segments? integer around, 3 to 1024; default 96

--- A closed cone, or a frustum, that stands upright.
--- Example: mesh.cone{ radius = 0.06, top = 0.03, height = 0.1 }
---@param keys mesh.cone.keys
---@return mesh
function mesh.cone(keys) end

---@class mesh.disk.keys
---@field radius number metres, > 0
---@field segments? integer around, 3 to 1024; default 96

--- A flat disk that faces up.
--- Example: mesh.disk{ radius = 0.1 }
---@param keys mesh.disk.keys
---@return mesh
function mesh.disk(keys) end

---@class mesh.torus.keys
---@field radius number from the middle to the middle of the tube, metres, > 0
---@field tube number radius of the tube, metres, > 0, less than radius
---@field segments? integer around, 3 to 1024; default 96

--- A ring that lies flat.
--- Example: mesh.torus{ radius = 0.08, tube = 0.02 }
---@param keys mesh.torus.keys
---@return mesh
function mesh.torus(keys) end

---@class mesh.lathe.keys
---@field profile number[][] points {radius, y} in metres, outward along the foot, up the outside and back down the inside
---@field segments? integer around, 3 to 1024; default 96
---@field crease? number edges of the profile that turn by more degrees stay sharp, 0 to 180; default 30

--- A form turned about the vertical, as on a potter's wheel.
--- Example: mesh.lathe{ profile = {{0, 0}, {0.06, 0}, {0.13, 0.06}, {0.15, 0.11}, {0.145, 0.11}, {0, 0.02}} }
---@param keys mesh.lathe.keys
---@return mesh
function mesh.lathe(keys) end

---@class mesh.extrude.keys
---@field outline number[][] corners {x, y} in metres, in order, either way round, not crossing themselves
---@field depth number along z, metres, > 0

--- A flat outline given thickness.
--- Example: mesh.extrude{ outline = {{0, 0}, {0.1, 0}, {0.1, 0.02}, {0.02, 0.02}, {0.02, 0.1}, {0, 0.1}}, depth = 0.05 }
---@param keys mesh.extrude.keys
---@return mesh
function mesh.extrude(keys) end

---@class mesh.test_form.keys
---@field segments? integer around, 3 to 1024; default 96

--- The workshop's form for judging materials: curves of several radii, a crease, a hollow and a flat.
--- Example: mesh.test_form{}
---@param keys? mesh.test_form.keys default {}
---@return mesh
function mesh.test_form(keys) end

---@class mesh.raw.keys
---@field positions point[] metres, at most 1000000
---@field triangles integer[][] triples of places in positions, counted from 1, counter-clockwise seen from outside
---@field normals? point[] one a position; default worked out, see smooth
---@field uvs? number[][] pairs {u, v}, one a position; default none
---@field smooth? number faces that meet at less degrees are shaded as one where no normals are given, 0 to 180; default 30

--- A mesh from tables of numbers.
--- Example: mesh.raw{ positions = {{0, 0, 0}, {1, 0, 0}, {0, 1, 0}}, triangles = {{1, 2, 3}} }
---@param keys mesh.raw.keys
---@return mesh
function mesh.raw(keys) end

---@class mesh.load.keys
---@field unit? "m"|"cm"|"mm"|"inch"|"foot"|number what one unit of the file is, a number in metres, > 0; default "m"
---@field up? "y"|"z" which axis of the file points up; default "y"
---@field smooth? number faces that meet at less degrees are shaded as one where the file has no normals, 0 to 180; default 30

--- A mesh from an .obj file, with the materials of its .mtl; one that does not load fails the frames that show it, and no others.
--- Example: mesh.load("shapes/jug.obj", { unit = "cm" })
---@param path string beside the scene, or in a folder of --assets
---@param keys? mesh.load.keys default {}
---@return mesh
function mesh.load(path, keys) end

--- A changed copy; keys are those of the call that made the mesh.
--- Example: mesh.sphere{ radius = 0.05 }:with{ segments = 12 }
---@param changes table
---@return mesh
function mesh:with(changes) end
