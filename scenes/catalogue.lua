-- A catalogue from a table: a row a product, three views of each, a page a family. One mesh file is damaged on purpose: its frames fail
-- alone, their places on the sheet say why, and the exit status is 1.
local forms, rigs, stands, surfaces = require "forms", require "rigs", require "stands", require "surfaces"
local sections = require "shapes.sections" -- a file of our own beside the scene: shapes/sections.lua

local bulb = color.kelvin(3000)

-- The things that make up a product, its foot at the origin.
local function product(row)
  local half, height = cm(row.width_cm) / 2, cm(row.height_cm)
  local finish = surfaces[row.finish](color(row.color))
  -- Paper lit from within, in nit: under these lights a white card is about 400.
  local paper = surfaces.paper_shade(color "#d2c4a8"):with{ emission = bulb:scaled(90) }
  if row.file ~= "" then
    local form = mesh.load(row.file, { unit = "cm", smooth = 15 })
    if row.shade == "paper" then return { place{ mesh = form, materials = { paper = paper } } } end -- the rest is as its .mtl says
    return { place{ mesh = form, material = finish } }
  end
  local profile = {}
  for i, p in ipairs(sections[row.form]) do profile[i] = { p[1] * half, p[2] * height } end
  profile = forms.smooth(profile)
  local function flute(angle, r, y) return r * (1 + 0.035 * math.cos(math.rad(row.flutes * angle))), y end
  local body = row.flutes and forms.thrown{ profile = profile, shape = flute, segments = 224 } or mesh.lathe{ profile = profile }
  local parts = { place{ mesh = body, material = finish } }
  if row.shade == "cone" then
    local r, low, high = half * 1.75, height * 1.06, height * 1.06 + half * 2
    local shade = mesh.lathe{ profile = { {r, low}, {r * 0.62, high}, {r * 0.61, high}, {r * 0.985, low}, {r, low} } }
    local stem = mesh.cylinder{ radius = cm(0.6), height = half * 1.6 }
    parts[2] = place{ mesh = shade, material = paper }
    parts[3] = place{ mesh = stem, at = {0, height + half * 0.3, 0}, material = surfaces.brass() }
  elseif row.shade == "globe" then
    parts[2] = place{ mesh = mesh.sphere{ radius = half * 1.05 }, at = {0, height + half * 0.96, 0}, material = paper }
  end
  return parts
end

local views = { front = {0, 0.16, 1}, raised = {0.5, 0.75, 0.85}, above = {0, 1, 0.22} }
-- Rigs are sized to each product and give as much light to all, so one exposure serves.
settings{ size = {240, 240}, samples = 32, exposure = rigs.three_point{}:meter{ at = {0, 0.1, 0}, facing = {-0.5, 0.6, 1} } }

for _, row in ipairs(data.csv("products.csv", { numbers = { "width_cm", "height_cm", "flutes" }, text = "article" })) do
  local things = product(row)
  local size = math.max(cm(row.width_cm), cm(row.height_cm)) / 2
  local ground = stands.cove{ radius = size }
  for _, view in ipairs{ "front", "raised", "above" } do
    frame{ tags = { family = row.family, product = row.article .. " " .. row.name, view = view },
           things = { things, ground }, lights = rigs.three_point{ radius = size },
           camera = camera.fit{ things = things, direction = views[view], margin = 0.12 } }
  end
end

sheet{ title = "Workshop catalogue", pages = "family", rows = "product", columns = "view" }
