-- A pitcher on the turntable: first it turns under fixed lights, then it stands still and the lights turn about it.
-- The first shows the outline and every side; the second how highlights travel, which tells gloss from matt.
local forms, rigs, stands, surfaces = require "forms", require "rigs", require "stands", require "surfaces"

local views = param("views", 36, { min = 4, max = 360, integer = true, help = "how many views to a turn" })

-- Thrown on the wheel, then pulled to a lip on the +x side: near the rim the wall leaves the circle, and rises.
local function lip(angle, radius, y)
  local off = (angle + 180) % 360 - 180 -- degrees from +x
  local pull = math.exp(-(off / 26) ^ 2) * math.max(0, (y - 0.13) / 0.06) ^ 2
  return radius + 0.022 * pull, y + 0.006 * pull
end
local wall = forms.smooth{ {0, 0.002}, {0.036, 0.002}, {0.036, 0.002}, {0.038, 0}, {0.041, 0}, {0.041, 0}, {0.046, 0.012}, {0.058, 0.045},
  {0.058, 0.08}, {0.047, 0.12}, {0.041, 0.15}, {0.044, 0.182}, {0.046, 0.19}, {0.0445, 0.191}, {0.042, 0.182}, {0.038, 0.15},
  {0.043, 0.12}, {0, 0.09} }
local body = forms.thrown{ profile = wall, shape = lip }
local handle = forms.tube{ radius = 0.0075, tip = 0.006, flat = 0.62, path = forms.smooth{
  {-0.04, 0.165, 0}, {-0.062, 0.173, 0}, {-0.085, 0.158, 0}, {-0.093, 0.125, 0}, {-0.081, 0.09, 0}, {-0.055, 0.066, 0} } }

-- A band of another glaze, and buttons of clay pressed into one side of it: so that no two views are alike.
local band = mesh.lathe{ segments = 160, profile = forms.smooth{ {0.0592, 0.052}, {0.0601, 0.062}, {0.0596, 0.074}, {0.057, 0.086} } }
local button = mesh.sphere{ radius = 0.0042, segments = 32 }

local glaze = surfaces.gloss_glaze(color "#8fb0ad"):with{ specular = color.grey(0.16), shininess = 140 }

local function pitcher(turn)
  local things = {
    place{ mesh = body, material = glaze, turn = {0, turn, 0} },
    place{ mesh = handle, material = glaze, turn = {0, turn, 0} },
    place{ mesh = band, material = surfaces.satin_glaze(color "#374b5c"), turn = {0, turn, 0} },
  }
  for k = 0, 4 do
    local angle = math.rad(turn - 90 + 17 * (k - 2))
    things[#things + 1] = place{ mesh = button, material = surfaces.stoneware(color "#d8a766"),
                                 at = { 0.0585 * math.cos(angle), 0.068, -0.0585 * math.sin(angle) } }
  end
  return things
end

local lights = rigs.three_point{ radius = 0.11, centre = {0, 0.1, 0}, key_up = 32, softness = 0.9 }
-- One exposure for all views, metered where the pitcher stands.
settings{ size = {176, 206}, samples = 24, exposure = lights:meter{ at = {0, 0.1, 0}, facing = {-0.4, 0.4, 1} } }
local ground = stands.cove{ distance = 1.3, bend = 0.9 }
local view = camera.fit{ things = pitcher(0), over = turntable{}, direction = {0, 0.25, 1}, margin = 0.07 }

for angle in turntable{ frames = views } do
  frame{ tags = { move = "object", turn_deg = angle }, things = { pitcher(angle), ground }, lights = lights, camera = view }
end
for angle in turntable{ frames = views } do
  frame{ tags = { move = "lights", turn_deg = angle }, things = { pitcher(-35), ground }, lights = lights:turned(angle), camera = view }
end

sheet{ title = "Pitcher: the object turns", where = { move = "object" }, columns = "turn_deg", per_line = 9 }
sheet{ title = "Pitcher: the lights turn", where = { move = "lights" }, columns = "turn_deg", per_line = 9 }
