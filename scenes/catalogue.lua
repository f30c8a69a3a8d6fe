-- A catalogue from a table: a row a product, three views of each, a page a family. One mesh file is damaged: its frames fail alone, their
-- places on the sheet say why, and the exit status is 1.
local forms, rigs, stands, surfaces = require "forms", require "rigs", require "stands", require "surfaces"

-- Sections as shares of half the width and of the height; a point given twice stays a corner.
local sections = {
  bowl   = { {0, .04}, {.4, .04}, {.4, .04}, {.42, 0}, {.47, 0}, {.47, 0}, {.45, .13}, {.45, .13}, {.72, .3}, {.92, .6}, {1, .95}, {.98, 1}, {.95, .97}, {.86, .62}, {.66, .38}, {.3, .2}, {0, .17} },
  beaker = { {0, .03}, {.66, .03}, {.66, .03}, {.69, 0}, {.75, 0}, {.8, .05}, {.86, .3}, {.93, .65}, {1, .97}, {.97, 1}, {.94, .97}, {.87, .65}, {.8, .3}, {.6, .09}, {0, .07} },
  plate  = { {0, .2}, {.52, .2}, {.52, .2}, {.54, 0}, {.58, 0}, {.58, 0}, {.6, .2}, {.78, .4}, {.96, .75}, {1, .9}, {.985, 1}, {.95, .97}, {.78, .7}, {.66, .56}, {.52, .5}, {0, .48} },
  bottle = { {0, .02}, {.5, .02}, {.5, .02}, {.53, 0}, {.6, 0}, {.68, .03}, {.9, .2}, {1, .36}, {.86, .52}, {.5, .65}, {.28, .76}, {.24, .88}, {.3, .98}, {.27, 1}, {.22, .98}, {.17, .88}, {.2, .76}, {0, .66} },
  pillar = { {0, .02}, {.7, .02}, {.7, .02}, {.74, 0}, {.8, .01}, {.84, .05}, {.86, .3}, {.9, .65}, {1, .97}, {.97, 1}, {.92, .97}, {.82, .65}, {.78, .3}, {.7, .08}, {0, .06} },
  jar    = { {0, .03}, {.42, .03}, {.42, .03}, {.44, 0}, {.5, 0}, {.58, .06}, {.9, .3}, {1, .53}, {.87, .78}, {.56, .93}, {.47, .96}, {.46, 1}, {.43, 1}, {.43, .95}, {.5, .92}, {0, .6} },
  gourd  = { {0, .02}, {.6, .02}, {.6, .02}, {.64, 0}, {.72, .01}, {.9, .12}, {1, .28}, {.84, .46}, {.5, .6}, {.46, .72}, {.44, .86}, {.32, .96}, {.22, 1}, {.17, .98}, {.2, .9}, {0, .7} },
}
local bulb = color.kelvin(3000)

-- The things that make up a product, its foot at the origin.
local function product(row)
  local half, height = cm(row.width_cm) / 2, cm(row.height_cm)
  local finish = surfaces[row.finish](color(row.color))
  local paper = surfaces.paper_shade():with{ emission = bulb:scaled(130) } -- nit; the white of a plate under these lights is about 250
  if row.file ~= "" then
    local form = mesh.load(row.file, { unit = "cm", smooth = 15 })
    if row.shade == "paper" then return { place{ mesh = form, materials = { paper = paper } } } end -- the rest is as its .mtl says
    return { place{ mesh = form, material = finish } }
  end
  local profile = {}
  for i, p in ipairs(sections[row.form]) do profile[i] = { p[1] * half, p[2] * height } end
  profile = forms.smooth(profile)
  local function flute(angle, r, y) return r * (1 + 0.035 * math.cos(math.rad(row.flutes * angle))), y end
  local parts = { place{ mesh = row.flutes and forms.thrown{ profile = profile, shape = flute, segments = 224 } or mesh.lathe{ profile = profile }, material = finish } }
  if row.shade == "cone" then
    local r, low, high = half * 1.75, height * 1.06, height * 1.06 + half * 2
    parts[2] = place{ mesh = mesh.lathe{ profile = { {r, low}, {r * 0.62, high}, {r * 0.61, high}, {r * 0.985, low}, {r, low} } }, material = paper }
    parts[3] = place{ mesh = mesh.cylinder{ radius = cm(0.6), height = half * 1.6 }, at = {0, height + half * 0.3, 0}, material = surfaces.brass() }
  elseif row.shade == "globe" then
    parts[2] = place{ mesh = mesh.sphere{ radius = half * 1.05 }, at = {0, height + half * 0.96, 0}, material = paper }
  end
  return parts
end

local views = { front = {0, 0.16, 1}, raised = {0.5, 0.75, 0.85}, above = {0, 1, 0.22} }
settings{ size = {288, 288}, samples = 32, exposure = rigs.three_point{}:meter{ at = {0, 0.1, 0}, facing = {-0.5, 0.6, 1} } + 0.4 }

for _, row in ipairs(data.csv("products.csv", { numbers = { "width_cm", "height_cm", "flutes" }, text = "article" })) do
  local things = product(row)
  local size = math.max(cm(row.width_cm), cm(row.height_cm)) / 2
  for _, view in ipairs{ "front", "raised", "above" } do
    frame{ tags = { family = row.family, product = row.article .. " " .. row.name, view = view }, things = { things, stands.cove{ radius = size } },
           lights = rigs.three_point{ radius = size }, camera = camera.fit{ things = things, direction = views[view], margin = 0.12 } }
  end
end

sheet{ title = "Workshop catalogue", pages = "family", rows = "product", columns = "view" }
