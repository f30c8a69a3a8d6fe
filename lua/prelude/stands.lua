--- What things stand on and before, and greys to judge by. Ground and walls are backdrops: camera.fit and the default lights leave
--- them out. All lengths are in metres; radius is half the subject's largest extent and sets sizes, as in rigs; default 0.1, a vase.
local keys = require "keys"
local stands = {}

--- The matt light grey of tables and coves: a stop above the grey card, so that dark and light glazes both stand out.
local GROUND = 0.38

local function matt(reflectance)
  return material.blinn_phong{ diffuse = color.grey(reflectance), specular = color.grey(0) }
end

--- A table top, large enough to fill the picture behind the subject.
---   radius      of the subject, > 0; default 0.1
---   width       along x, > 0; default 80 radii         depth      along z, > 0; default 80 radii
---   thickness   > 0; default 0.3 radii                 top        height of the surface, y; default 0
---   at          its middle {x, 0, z}; default the origin
---   material    default matt grey, reflectance 0.38
function stands.table(given)
  local o = keys.read("stands.table", given, {
    radius = { 0.1, above = 0, unit = "metres" }, width = { kind = "number", above = 0, unit = "metres" },
    depth = { kind = "number", above = 0, unit = "metres" }, thickness = { kind = "number", above = 0, unit = "metres" },
    top = { 0 }, at = { { 0, 0, 0 } }, material = { kind = "userdata", what = "a material" },
  })
  local thickness = o.thickness or 0.3 * o.radius
  return place{
    mesh = mesh.box{ width = o.width or 80 * o.radius, depth = o.depth or 80 * o.radius, height = thickness },
    at = { o.at[1], o.at[2] + o.top - thickness / 2, o.at[3] }, material = o.material or matt(GROUND), backdrop = true,
  }
end

--- A seamless cove: a floor that sweeps up into a wall behind the subject, so that no horizon cuts through the picture.
---   radius     of the subject, > 0; default 0.1
---   distance   from the origin back to the wall, > 0; default 9 radii
---   bend       radius of the sweep, > 0, at most distance; default 6 radii
---   width      along x, > 0; default 60 radii          height     of the wall, > bend; default 40 radii
---   front      how far the floor comes forward, > 0; default 40 radii
---   top        height of the floor, y; default 0
---   turn       degrees about the vertical, counter-clockwise seen from above; default 0: the wall stands at -z
---   material   default matt grey, reflectance 0.38
function stands.cove(given)
  local function length() return { kind = "number", above = 0, unit = "metres" } end
  local o = keys.read("stands.cove", given, {
    radius = { 0.1, above = 0, unit = "metres" }, distance = length(), bend = length(), width = length(), height = length(), front = length(),
    top = { 0 }, turn = { 0 }, material = { kind = "userdata", what = "a material" },
  })
  local r = o.radius
  local back, bend, height = o.distance or 9 * r, o.bend or math.min(6 * r, o.distance or 6 * r), o.height or 40 * r
  if bend > back then error("stands.cove: bend must be at most distance, " .. back .. " metres, got " .. bend, 0) end
  if height <= bend then error("stands.cove: height must be > bend, " .. bend .. " metres, got " .. height, 0) end
  -- The section in y and z with its true normals: floor, quarter circle, wall. It is cut into cells no longer than a 48th of the longest
  -- way across, so that none is a sliver; the curve has twelve at least, for its form.
  local floor, arc, width = (o.front or 40 * r) + back - bend, math.pi / 2 * bend, o.width or 60 * r
  local cell = math.max(width, floor, arc, height - bend) / 48
  local function pieces(length) return math.ceil(length / cell - 1e-9) end
  local section = {}
  local function along(count, first, point) for k = first, count do section[#section + 1] = point(k / count) end end
  along(pieces(floor), 0, function(u) return { 0, bend - back + floor * (1 - u), 1, 0 } end)
  along(math.max(12, pieces(arc)), 1, function(u)
    local c, s = math.cos(math.pi / 2 * u), math.sin(math.pi / 2 * u)
    return { bend - bend * c, bend - back - bend * s, c, s }
  end)
  along(pieces(height - bend), 1, function(u) return { bend + (height - bend) * u, -back, 0, 1 } end)
  local positions, normals, triangles = {}, {}, {}
  local columns = pieces(width)
  for i, p in ipairs(section) do
    local y, z, normal = keys.round(p[1]), keys.round(p[2]), { 0, keys.round(p[3]), keys.round(p[4]) }
    for k = 0, columns do
      positions[#positions + 1] = { keys.round(width * (k / columns - 0.5)), y, z }
      normals[#normals + 1] = normal
      if i > 1 and k > 0 then
        local a, b = #positions - columns - 2, #positions - 1 -- left on the row before, left on this one
        triangles[#triangles + 1] = { a, a + 1, b + 1 }
        triangles[#triangles + 1] = { a, b + 1, b }
      end
    end
  end
  return place{
    mesh = mesh.raw{ positions = positions, normals = normals, triangles = triangles }, at = { 0, o.top, 0 }, turn = { 0, o.turn, 0 },
    material = o.material or matt(GROUND), backdrop = true,
  }
end

--- A grey reference sphere, perfectly matt: it shows exposure, the light's direction and its colour. 18 % reflects as the grey card does;
--- where it faces a metered light it shows as 0.18, L* 49.5, sRGB 118 (deeper with tone = "neutral": that curve takes off
--- 0.04 for a reflection that matt things lack).
---   radius        its own, > 0; default 0.03
---   at            where it stands, its lowest point; default the origin
---   reflectance   0 to 1; default 0.18
function stands.grey_sphere(given)
  local o = keys.read("stands.grey_sphere", given, {
    radius = { 0.03, above = 0, unit = "metres" }, at = { { 0, 0, 0 } }, reflectance = { 0.18, low = 0, high = 1 },
  })
  return place{
    mesh = mesh.sphere{ radius = o.radius }, at = { o.at[1], o.at[2] + o.radius, o.at[3] }, material = matt(o.reflectance), name = "grey sphere",
  }
end

--- Reflectances of the ramp's patches: one stop a step through the grey card. Evenly lit, and exposed so that the grey card reads 0.18,
--- they show with the default tone as
---   reflectance   0.0225   0.045   0.09   0.18   0.36   0.72
---   L*            16.7     25.3    36.0   49.5   66.5   88.0
---   sRGB          41       60      85     118    162    221
stands.ramp_values = { 0.0225, 0.045, 0.09, 0.18, 0.36, 0.72 }

--- A neutral ramp: a row of matt patches of stated reflectance, dark to light from left to right. Gives a list of things, named
--- "ramp 0.18" and so on.
---   width    of the row, > 0; default 0.12              at      middle of its front edge, on the ground; default the origin
---   lean     degrees that it is raised, 0 flat to 90 upright; default 60
---   turn     degrees about the vertical, counter-clockwise seen from above; default 0: it faces +z
---   values   list of reflectances, 0 to 1; default stands.ramp_values
function stands.ramp(given)
  local o = keys.read("stands.ramp", given, {
    width = { 0.12, above = 0, unit = "metres" }, at = { { 0, 0, 0 } }, lean = { 60, low = 0, high = 90, unit = "degrees" },
    turn = { 0 }, values = { kind = "any" },
  })
  local values = o.values or stands.ramp_values
  if type(values) ~= "table" or #values < 1 then error("stands.ramp: values must be a list of reflectances", 0) end
  local edge = o.width / #values
  local thick = edge / 12
  local c, s = math.cos(math.rad(o.lean)), math.sin(math.rad(o.lean))
  local ct, st = math.cos(math.rad(o.turn)), math.sin(math.rad(o.turn))
  local patch = mesh.box{ width = edge, depth = edge, height = thick }
  local row = {}
  for i, value in ipairs(values) do
    -- The middle of a patch whose lower front edge lies on the ground; then the row is turned as one.
    local x, y, z = (i - (#values + 1) / 2) * edge, edge / 2 * s + thick / 2 * c, -edge / 2 * c - thick / 2 * s
    row[i] = place{
      mesh = patch, material = matt(value), name = "ramp " .. value, turn = { o.lean, o.turn, 0 },
      at = { keys.round(o.at[1] + ct * x + st * z), keys.round(o.at[2] + y), keys.round(o.at[3] - st * x + ct * z) },
    }
  end
  return row
end

return stands
