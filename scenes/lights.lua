-- The kinds of light on one form, and how the size of a lamp makes its shadow hard or soft.
local rigs, stands = require "rigs", require "stands"

local form = place{
  mesh = mesh.test_form{ segments = 160 }, -- the workshop's form for judging surfaces, 20 cm high
  material = material.blinn_phong{ diffuse = color "#cdbfa6", specular = color.grey(0.06), shininess = 200, normalized = true },
}
local view = camera.fit{ things = { form }, direction = {0, 0.42, 1}, margin = 0.13 }

settings{ size = {360, 320}, samples = 64, exposure = 0 }

-- Every lamp stands in one place, 88 cm from the middle of the form. The meter says by how many stops it would have to be brighter to
-- show a grey card there as grey at an exposure of 0, and so bright it is made: what differs between two pictures is the kind of light.
local from, middle, facing = {-0.36, 0.81, 0.38}, {0, 0.1, 0}, {-0.36, 0.71, 0.38}
local function metered(lamp) return lamp:with{ stops = rig{ lamp }:meter{ at = middle, facing = facing } } end

local function show(tags, ...)
  frame{ tags = tags, lights = { ... }, things = { form, stands.table() }, camera = view }
end

local room = light.ambient{ name = "room", intensity = 0.1 } -- a tenth, so that no shadow is black

-- Lux: parallel light from no place, the same everywhere.
show({ kind = "directional" }, metered(light.directional{ direction = {0.36, -0.71, -0.38} }), room)
-- Candela: from one point to all sides, weaker with the square of the distance.
show({ kind = "point" }, metered(light.point{ position = from }), room)
-- Candela: all of it within inner, nothing beyond outer, half angles in degrees.
show({ kind = "spot" }, metered(light.spot{ position = from, target = middle, inner = 9, outer = 14 }), room)
-- Candela per square metre (nit), surfaces that emit: their form is seen in highlights, their size in where shadows end.
show({ kind = "area rectangle" }, metered(light.area{ position = from, target = middle, width = 0.2, height = 0.6 }), room)
show({ kind = "area disk" }, metered(light.area{ shape = "disk", position = from, target = middle, radius = 0.3 }), room)
show({ kind = "area sphere" }, metered(light.area{ shape = "sphere", position = from, radius = 0.12 }), room)
-- Nit: from everywhere at once, and so it shows no form.
show({ kind = "ambient" }, metered(light.ambient{}))
-- Lights add up: key, fill, rim and room in one rig. An illuminance of π lux shows a grey card as grey at an exposure of 0.
show({ kind = "three-point rig" }, rigs.three_point{ subject = form, lux = math.pi })

-- One lamp, ever larger: the shadow is sharp where the form stands on the table, softer with the distance.
for _, edge in ipairs{ 2, 10, 30, 90 } do
  show({ lamp_cm = edge }, metered(light.area{ position = from, target = middle, width = cm(edge) }), room)
end

sheet{ title = "Kinds of light", columns = "kind", per_line = 4, where = { kind = {
  "directional", "point", "spot", "area rectangle", "area disk", "area sphere", "ambient", "three-point rig" } } }
sheet{ title = "Hard and soft shadow: a square lamp, its edge", columns = "lamp_cm", per_line = 4, where = { lamp_cm = { 2, 10, 30, 90 } } }
