--- Light rigs, sized to what they light: the same call suits a cup of 5 cm and a lamp of 2 m.
---
--- Every function takes, besides its own keys,
---   subject   the thing (or the mesh at the origin) that is lit; its size and middle give radius and centre
---   radius    half the subject's largest extent, metres, > 0; default 0.1, a vase. Ignored where subject is given
---   centre    its middle, metres; default {0, radius, 0}: it stands at the origin. Ignored where subject is given
---   lux       illuminance at the centre of the light that is metered (each function says which), > 0; default 1000
---   kelvin    colour temperature of all lights, 1000 to 40000; default neutral white
--- and gives a rig, whose lights have the names that are stated: rig:without "rim", rig:with{ key = { stops = 1 } }.
---
--- Angles are in degrees. 0 to the side is the front, +z, where cameras stand unless told otherwise.
local keys = require "keys"
local rigs = {}

--- Where a thing's own box has its middle after scale, turns and move, and how far its corner is from there.
local function extent(subject)
  local ok, m = pcall(function() return subject.mesh end) -- a mesh has no mesh
  local thing = ok and subject or place{ mesh = subject }
  m = thing.mesh
  if m.failure then return { 0, 0.1, 0 }, 0.1 end -- the frame fails with that reason; the rig only has to exist
  local middle, reach = {}, 0
  for i = 1, 3 do
    middle[i] = (m.low[i] + m.high[i]) / 2 * thing.scale[i]
    reach = reach + ((m.high[i] - m.low[i]) / 2 * thing.scale[i]) ^ 2
  end
  local pairs_of_axes = { { 2, 3 }, { 3, 1 }, { 1, 2 } } -- about x, then y, then z
  for axis, plane in ipairs(pairs_of_axes) do
    local a, b = plane[1], plane[2]
    local c, s = math.cos(math.rad(thing.turn[axis])), math.sin(math.rad(thing.turn[axis]))
    middle[a], middle[b] = c * middle[a] - s * middle[b], s * middle[a] + c * middle[b]
  end
  for i = 1, 3 do middle[i] = keys.round(middle[i] + thing.at[i]) end
  return middle, keys.round(math.sqrt(reach))
end

--- The values of a call, with radius and centre settled.
local function read(where, given, own)
  local rules = {
    subject = { kind = "userdata", what = "a thing or a mesh" }, radius = { 0.1, above = 0, unit = "metres" },
    centre = { kind = "table" }, lux = { 1000, above = 0, unit = "lux" },
    kelvin = { kind = "number", low = 1000, high = 40000, unit = "kelvin" },
  }
  for name, rule in pairs(own) do rules[name] = rule end
  local o = keys.read(where, given, rules)
  if o.subject then
    o.centre, o.radius = extent(o.subject)
  end
  o.centre = o.centre or { 0, o.radius, 0 }
  return o
end

--- A rectangle that faces the centre, so many radii from it. side and up are the angles under which it stands, seen from the centre.
local function softbox(o, name, b)
  local side, up, r = math.rad(b.side), math.rad(b.up), o.radius
  local away = { math.sin(side) * math.cos(up), math.sin(up), math.cos(side) * math.cos(up) }
  local position = {}
  for i = 1, 3 do position[i] = keys.round(o.centre[i] + away[i] * b.distance * r) end
  return light.area{
    name = name, shape = "rectangle", width = keys.round(b.width * r), height = keys.round(b.height * r),
    position = position, target = o.centre, intensity = 1000, temperature = o.kelvin,
  }
end

--- What a card at the centre gets from the lights, in lux, facing a point: the meter's stops are -log2(E / π).
local function lux_at(o, lights, towards)
  local facing = {}
  for i = 1, 3 do facing[i] = towards[i] - o.centre[i] end
  return math.pi * 2 ^ -rig(lights):meter{ at = o.centre, facing = facing }
end

--- The light changed so that a card at the centre that faces it gets so many lux.
local function delivering(o, lamp, lux)
  return lamp:with{ intensity = keys.round(1000 * lux / lux_at(o, { lamp }, lamp.position)) }
end

--- Ambient light worth a share of so many lux.
local function room(share, lux)
  return light.ambient{ name = "room", intensity = keys.round(share * lux / math.pi) }
end

--- Key to the side and up, fill opposite, rim behind: lights "key", "fill", "rim", "room". lux is that of the key.
---   ratio      key : fill, the key's illuminance at the centre over the fill's, each measured facing it, >= 1; default 4, two stops.
---              Beware: some write (key + fill) : fill, what the lit side gets over what the shaded side gets; 4 here is 5 there
---   key_side   degrees, -90 to 90, less than 0 is left; default -40. 30 to 45 is usual
---   key_up     degrees, 0 to 85; default 40. 30 to 45 is usual
---   softness   width of the key in radii, 0.05 to 20: 0.2 is nearly hard, 6 wraps round; default 3. It is 1.4 times as high, 6 radii away
---   rim        illuminance of the rim over the key's, 0 for none, at most 8; default 0.5
---   room       ambient light as a share of the key, 0 to 1; default 0.12
function rigs.three_point(given)
  local o = read("rigs.three_point", given, {
    ratio = { 4, low = 1, high = 1000 }, key_side = { -40, low = -90, high = 90, unit = "degrees" },
    key_up = { 40, low = 0, high = 85, unit = "degrees" }, softness = { 3, low = 0.05, high = 20, unit = "radii" },
    rim = { 0.5, low = 0, high = 8 }, room = { 0.12, low = 0, high = 1 },
  })
  local other = o.key_side < 0 and 1 or -1
  local key = softbox(o, "key", { side = o.key_side, up = o.key_up, distance = 6, width = o.softness, height = 1.4 * o.softness })
  local fill = softbox(o, "fill", { side = other * 50, up = 28, distance = 7, width = 5, height = 5 })
  local lights = { delivering(o, key, o.lux), delivering(o, fill, o.lux / o.ratio) }
  if o.rim > 0 then
    local rim = softbox(o, "rim", { side = other * 155, up = 52, distance = 6, width = 2, height = 3 })
    lights[#lights + 1] = delivering(o, rim, o.lux * o.rim)
  end
  lights[#lights + 1] = room(o.room, o.lux)
  return rig(lights)
end

--- A tent of white cloth: five large panels, nearly uniform light, soft and almost without shadow. Lights "left", "right", "front", "back",
--- "top" and "room", all of one luminance. lux is what a card at the centre gets that faces up. It shows colour well and shape badly:
--- rigs.tent():with{ left = { stops = -1.5 } } or :without "left" puts a darker side back.
--- Glossy surfaces show the panels with noise in them; settings{ light_samples = 4 } halves it.
---   size   edge of the tent in radii, 4 to 40; default 8
---   room   ambient light as a share of lux, 0 to 1; default 0.25: what the cloth of the floor would send
function rigs.tent(given)
  local o = read("rigs.tent", given, { size = { 8, low = 4, high = 40, unit = "radii" }, room = { 0.25, low = 0, high = 1 } })
  local half = o.size / 2
  local lights = {}
  for _, side in ipairs{ { "left", -90 }, { "right", 90 }, { "front", 0 }, { "back", 180 } } do
    -- The panels hang from the top one to one and a half radii above the floor, and shine outward too: else an edge would be seen on
    -- the floor below them.
    local panel = softbox(o, side[1], { side = side[2], up = 0, distance = half, width = o.size, height = o.size - 2.5 })
    local p, c = panel.position, o.centre
    local y = keys.round(c[2] + (half - 0.75) * o.radius)
    lights[#lights + 1] = panel:with{ position = { p[1], y, p[3] }, target = { c[1], y, c[3] }, two_sided = true }
  end
  lights[#lights + 1] = softbox(o, "top", { side = 0, up = 90, distance = o.size - 2, width = o.size, height = o.size })
  local above = { o.centre[1], o.centre[2] + 1, o.centre[3] }
  local nit = keys.round(1000 * o.lux / lux_at(o, lights, above))
  for i, panel in ipairs(lights) do lights[i] = panel:with{ intensity = nit } end
  lights[#lights + 1] = room(o.room, o.lux)
  return rig(lights)
end

--- Two long narrow boxes, one on each side, that draw a bright edge along whatever is round and glossy: lights "left", "right", "room". lux is
--- what each gives at the centre, facing it.
---   side     degrees from the front at which they stand, 10 to 170; default 62; more than 90 is behind
---   width    of each box in radii, 0.05 to 6; default 0.9
---   height   in radii, 0.5 to 20; default 6
---   balance  illuminance of the right one over the left one, 0.05 to 20; default 0.6
---   room     ambient light as a share of lux, 0 to 1; default 0.15
function rigs.strips(given)
  local o = read("rigs.strips", given, {
    side = { 62, low = 10, high = 170, unit = "degrees" }, width = { 0.9, low = 0.05, high = 6, unit = "radii" },
    height = { 6, low = 0.5, high = 20, unit = "radii" }, balance = { 0.6, low = 0.05, high = 20 }, room = { 0.15, low = 0, high = 1 },
  })
  local function strip(name, side) return softbox(o, name, { side = side, up = 22, distance = 5, width = o.width, height = o.height }) end
  return rig{
    delivering(o, strip("left", -o.side), o.lux), delivering(o, strip("right", o.side), keys.round(o.lux * o.balance)), room(o.room, o.lux),
  }
end

return rigs
