-- Pictures that take a while: for tests that stop a run under way.
local clay = material.blinn_phong{ diffuse = color.grey(0.5) }
local ball = place{ mesh = mesh.sphere{ radius = 0.1 }, material = clay }
local window = light.area{ name = "window", shape = "disk", radius = 0.1, position = {0.3, 0.3, 0.4}, target = {0, 0, 0}, intensity = 40 }

settings{ size = {8, 8}, samples = 1, exposure = 0 }

for _, step in ipairs{ 1, 2, 3 } do
  frame{ name = "view-" .. step, tags = { view = step }, lights = { window }, things = { ball },
         samples = step == 1 and 1 or 8192, size = step == 1 and {8, 8} or {1024, 1024},
         camera = camera{ position = {0, step / 10, 0.6}, target = {0, 0, 0} } }
end

sheet{ name = "views", columns = "view", tile = {16, 16} }
