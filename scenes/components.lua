-- What a surface of four components is made of: each component alone, and their sum, at three shininesses.
local stands = require "stands"

local form = mesh.test_form{ segments = 160 } -- the workshop's form for judging surfaces, 20 cm high

-- Directional light has no size, so that what is seen is the highlight's own width. Lux for directional, nit for ambient.
local lights = rig{
  light.directional{ name = "sun", direction = {0.46, -0.72, -0.8}, intensity = 900 },
  light.ambient{ name = "room", intensity = 140 },
}

-- A pass is one component of the picture as a plane of its own. They sum to the picture, before the tone curve.
settings{
  size = {340, 340}, samples = 64, passes = { "ambient", "diffuse", "specular", "emission" },
  exposure = lights:meter{ at = {0, 0.1, 0}, facing = {0, 0.4, 1} },
}

for _, shininess in ipairs{ 1, 30, 255 } do
  local glaze = material.blinn_phong{
    ambient = color "#3f6f96",  -- what it gives back of light from everywhere: no direction, no shadow, no form
    diffuse = color "#3f6f96",  -- what it scatters: brightest where it faces the light, the same from wherever one looks
    specular = color.grey(0.5), -- what it reflects: depends on where light and eye are
    shininess = shininess,      -- how tightly: 1 is a veil over all that is lit, 30 a wide gleam, 255 a dot
    emission = color "#30c890":scaled(32), -- its own glow in nit: the same all over, and it lights nothing else
  }
  local subject = place{ mesh = form, material = glaze }
  frame{ tags = { shininess = shininess }, lights = lights, things = { subject, stands.table() },
         camera = camera.fit{ things = { subject }, direction = {0, 0.4, 1}, margin = 0.12 } }
end

sheet{ title = "The four components of a surface", rows = "shininess", columns = "pass" }
