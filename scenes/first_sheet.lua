-- A vase and a bowl in three glazes, from matt to gloss. Start here: change a number, render again, compare the sheets.
local forms, stands = require "forms", require "stands"

-- A pot is half its section turned round: points of radius and height in centimetres, outward along the foot, up the outside, over
-- the lip and down the inside. A point given twice stays a corner; between the others the line is smooth.
local function pot(section)
  for _, point in ipairs(section) do point[1], point[2] = cm(point[1]), cm(point[2]) end
  return mesh.lathe{ profile = forms.smooth(section), segments = 160 }
end

local vase = pot{ {0, 0.4}, {3.2, 0.4}, {3.2, 0.4}, {3.4, 0}, {3.9, 0}, {3.9, 0}, {4, 0.6}, {5.8, 4}, {7, 8}, {6.5, 11.4}, {4.2, 13.7},
                  {2.4, 15}, {2.1, 16.6}, {2.6, 18.4}, {3.5, 19.3}, {3.6, 19.6}, {3.3, 19.6}, {2.2, 18.4}, {1.7, 16.6}, {2, 15}, {0, 13} }
local bowl = pot{ {0, 0.3}, {2.1, 0.3}, {2.1, 0.3}, {2.3, 0}, {2.6, 0}, {2.6, 0}, {2.4, 0.9}, {2.4, 0.9}, {4.3, 1.8}, {5.5, 3.4}, {6, 5.1},
                  {6.1, 6.1}, {5.95, 6.3}, {5.78, 6.1}, {5.6, 5.1}, {5.1, 3.6}, {3.8, 2.1}, {2, 1.4}, {0, 1.2} }

-- A softbox to the upper left and a little light from everywhere. Intensities are in candela per square metre (nit).
local lights = rig{
  light.area{ name = "softbox", width = 0.5, height = 0.7, position = {-0.6, 0.7, 0.55}, target = {0, 0.1, 0}, intensity = 2500 },
  light.ambient{ name = "room", intensity = 50 },
}

-- The meter is held where the pots stand: an 18 % grey card there would show as 18 % grey in every picture.
settings{ size = {480, 360}, samples = 64, exposure = lights:meter{ at = {0, 0.1, 0}, facing = {0, 0.6, 1} } }

local glazes = { oxblood = color "#7a2a22", celadon = color "#7fa588", slate = color "#4a5866" }

for step in sweep{ {"glaze", {"oxblood", "celadon", "slate"}}, {"gloss", geometric(4, 256, 4)} } do
  -- gloss is the exponent of the highlight. Normalized, a small bright highlight sends out as much light as a wide faint one.
  local glaze = material.blinn_phong{ diffuse = glazes[step.glaze], specular = color.grey(0.1), shininess = step.gloss, normalized = true }
  local pots = { place{ mesh = vase, material = glaze, at = {-0.06, 0, 0} }, place{ mesh = bowl, material = glaze, at = {0.085, 0, 0.05} } }
  frame{ tags = step, lights = lights, things = { pots, stands.table() },
         camera = camera.fit{ things = pots, direction = {0, 0.42, 1}, margin = 0.1 } }
end

sheet{ title = "A vase and a bowl: glaze by gloss", rows = "glaze", columns = "gloss" }
