-- Three things, of which the middle one has a mesh that will not load.
local clay = material.blinn_phong{ diffuse = color "#b5651d" }

settings{ size = {16, 12}, samples = 2, exposure = 0 }

for _, item in ipairs{ "brick", "jug", "tile" } do
  local thing = place{ mesh = mesh.load("meshes/" .. item .. ".obj"), material = clay }
  frame{ tags = { item = item }, things = { thing }, lights = { light.directional{ direction = {-1, -1, -1}, intensity = 3 } },
         camera = camera.fit{ things = { thing }, direction = {1, 1, 1} } }
end

sheet{ name = "shelf", columns = "item" }
