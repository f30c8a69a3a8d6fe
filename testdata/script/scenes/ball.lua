-- A ball under a lamp and a soft window: gloss by glaze, four small pictures, one cast.
local gloss = param("gloss", 64, { min = 1, max = 512, help = "gloss of the second column" })
local glazes = { slate = color "#39434d", celadon = color "#9fc3a4" }

local lights = rig{
  light.directional{ name = "sun", direction = {-1, -1, -1}, intensity = 2 },
  light.area{ name = "window", shape = "disk", radius = 0.1, position = {0.3, 0.3, 0.4}, target = {0, 0, 0}, intensity = 40 },
  light.ambient{ name = "room", intensity = 0.2 },
}

settings{ size = {32, 24}, samples = 8, exposure = 0 }

for step in sweep{ {"gloss", {4, gloss}}, {"glaze", {"slate", "celadon"}} } do
  local glaze = material.blinn_phong{ diffuse = glazes[step.glaze], specular = color.grey(0.3), shininess = step.gloss }
  local ball = place{ mesh = mesh.sphere{ radius = 0.1, segments = 24 }, material = glaze }
  frame{ tags = step, lights = lights, things = { ball },
         camera = camera{ position = {0, 0.1, 0.6}, target = {0, 0, 0} } }
end

sheet{ name = "balls", title = "Ball: gloss by glaze", rows = "glaze", columns = "gloss" }
