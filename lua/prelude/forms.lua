--- Profiles, handles and thrown forms: what the wheel and the hands make of clay, as meshes. All lengths are in metres.
local keys = require "keys"
local forms = {}

local function same(p, q)
  for i = 1, #p do
    if p[i] ~= q[i] then return false end
  end
  return true
end

local function far(p, q)
  local sum = 0
  for i = 1, #p do sum = sum + (p[i] - q[i]) ^ 2 end
  return math.sqrt(sum)
end

--- The natural cubic spline through the points of one run (de Boor 1978, ch. IV), with square roots of chord lengths as its parameter,
--- which keeps it from bulging where long pieces meet short ones (Lee 1989). Its curvature has no steps: a glossy surface would show
--- them. Appends all but the first point to out.
local function spline(run, pieces, out)
  local n, dim, h = #run, #run[1], {}
  for i = 1, n - 1 do h[i] = math.sqrt(far(run[i], run[i + 1])) end
  local second = {} -- second derivatives at the points, by coordinate; zero at both ends
  for axis = 1, dim do
    local m, upper, right = { [1] = 0, [n] = 0 }, { [1] = 0 }, { [1] = 0 }
    for i = 2, n - 1 do
      local slopes = (run[i + 1][axis] - run[i][axis]) / h[i] - (run[i][axis] - run[i - 1][axis]) / h[i - 1]
      local pivot = 2 * (h[i - 1] + h[i]) - h[i - 1] * upper[i - 1]
      upper[i], right[i] = h[i] / pivot, (6 * slopes - h[i - 1] * right[i - 1]) / pivot
    end
    for i = n - 1, 2, -1 do m[i] = right[i] - upper[i] * m[i + 1] end
    second[axis] = m
  end
  for i = 1, n - 1 do
    for k = 1, pieces - 1 do
      local b = k / pieces
      local a, p = 1 - b, {}
      for axis = 1, dim do
        local m = second[axis]
        p[axis] = keys.round(a * run[i][axis] + b * run[i + 1][axis] + ((a ^ 3 - a) * m[i] + (b ^ 3 - b) * m[i + 1]) * h[i] ^ 2 / 6)
      end
      if dim == 2 and p[1] < 0 then p[1] = 0 end -- a profile does not cross the axis
      out[#out + 1] = p
    end
    out[#out + 1] = run[i + 1]
  end
end

--- A smooth curve through points {r, y} or {x, y, z}, as a list of points for mesh.lathe or forms.tube. A point given twice in a row
--- stays a corner; two points alone between corners are a straight line. pieces is how many there are between two points, 1 to 64;
--- default 8.
function forms.smooth(points, pieces)
  pieces = pieces or 8
  if type(points) ~= "table" or #points < 2 then error("forms.smooth: takes a list of at least 2 points", 0) end
  if type(pieces) ~= "number" or pieces < 1 or pieces > 64 then error("forms.smooth: pieces must be a number 1 to 64", 0) end
  for i, p in ipairs(points) do
    local good = type(p) == "table" and (#p == 2 or #p == 3) and #p == #points[1]
    for k = 1, good and #p or 0 do good = good and type(p[k]) == "number" and p[k] == p[k] and math.abs(p[k]) < 1e6 end
    if not good then error("forms.smooth: point " .. i .. " must be {r, y}, or {x, y, z} if all are, in metres", 0) end
  end
  local out, run = { points[1] }, { points[1] }
  for i = 2, #points do
    local corner = same(points[i - 1], points[i])
    if not corner then run[#run + 1] = points[i] end
    if (corner or i == #points) and #run > 1 then
      spline(run, #run == 2 and 1 or pieces, out)
      run = { points[i] }
    end
  end
  return out
end

--- A form from the wheel that was shaped by hand while wet: a lathe whose every ring may leave the circle.
---   profile   points {radius, y} as for mesh.lathe, outward along the foot, up the outside and back down the inside
---   shape     function(angle, radius, y) that returns the radius and y of the point there; angle in degrees, counter-clockwise seen
---             from above, 0 towards +x. Default: leaves all as it is
---   segments  around, 8 to 512; default 128
---   crease    faces that meet at more degrees than this keep their edge, 0 to 180; default 40
function forms.thrown(given)
  local o = keys.read("forms.thrown", given, {
    profile = { kind = "any" }, shape = { kind = "function" }, segments = { 128, low = 8, high = 512, whole = true },
    crease = { 40, low = 0, high = 180, unit = "degrees" },
  })
  if type(o.profile) ~= "table" or #o.profile < 2 then error("forms.thrown: profile must be a list of at least 2 points {radius, y}", 0) end
  local positions, triangles, rings = {}, {}, {}
  for i, p in ipairs(o.profile) do
    local ring = {}
    for k = 0, o.segments - 1 do
      local angle = 360 * k / o.segments
      local r, y = p[1], p[2]
      if o.shape then r, y = o.shape(angle, r, y) end
      if type(r) ~= "number" or type(y) ~= "number" then error("forms.thrown: shape must return a radius and a y", 0) end
      local x, z = r * math.cos(math.rad(angle)), -r * math.sin(math.rad(angle))
      if p[1] == 0 then x, z = 0, 0 end
      positions[#positions + 1] = { keys.round(x), keys.round(y), keys.round(z) }
      ring[k] = #positions
      if p[1] == 0 then -- one point on the axis serves all
        for rest = 1, o.segments - 1 do ring[rest] = #positions end
        break
      end
    end
    rings[i] = ring
  end
  for i = 1, #rings - 1 do
    for k = 0, o.segments - 1 do
      local n = (k + 1) % o.segments
      local a, b, c, d = rings[i][k], rings[i][n], rings[i + 1][n], rings[i + 1][k]
      if a ~= b then triangles[#triangles + 1] = { a, b, c } end
      if c ~= d then triangles[#triangles + 1] = { a, c, d } end
    end
  end
  return mesh.raw{ positions = positions, triangles = triangles, smooth = o.crease }
end

--- A pulled handle, a spout, a lamp's arm or its cord: a round bar along a path, closed at both ends.
---   path      list of points {x, y, z}, at least 2; forms.smooth makes a curve of a few
---   radius    of the bar where it begins, > 0; default 0.005
---   tip       radius where it ends, > 0; default as radius
---   flat      height of its section over its width, 0.1 to 10; default 1, round. The width lies across the plane in which the path starts
---   segments  around, 6 to 256; default 32
function forms.tube(given)
  local o = keys.read("forms.tube", given, {
    path = { kind = "any" }, radius = { 0.005, above = 0, unit = "metres" }, tip = { kind = "number", above = 0, unit = "metres" },
    flat = { 1, low = 0.1, high = 10 }, segments = { 32, low = 6, high = 256, whole = true },
  })
  local path = o.path
  if type(path) ~= "table" or #path < 2 then error("forms.tube: path must be a list of at least 2 points {x, y, z}", 0) end
  local function unit(v, why)
    local l = math.sqrt(v[1] ^ 2 + v[2] ^ 2 + v[3] ^ 2)
    if l == 0 then error("forms.tube: " .. why, 0) end
    return { v[1] / l, v[2] / l, v[3] / l }
  end
  local function cross(a, b) return { a[2] * b[3] - a[3] * b[2], a[3] * b[1] - a[1] * b[3], a[1] * b[2] - a[2] * b[1] } end
  local function way(i, k) return { path[k][1] - path[i][1], path[k][2] - path[i][2], path[k][3] - path[i][3] } end
  local positions, triangles = {}, {}
  local across -- carried along the path with the least twist
  for i = 1, #path do
    local t = unit(way(math.max(1, i - 1), math.min(#path, i + 1)), "the path turns back on itself or stands still at point " .. i)
    if not across then
      local bend = cross(t, way(1, #path))
      local flat_path = bend[1] ^ 2 + bend[2] ^ 2 + bend[3] ^ 2 < 1e-12
      across = flat_path and cross(t, math.abs(t[2]) < 0.9 and { 0, 1, 0 } or { 1, 0, 0 }) or bend
    end
    local along = across[1] * t[1] + across[2] * t[2] + across[3] * t[3]
    across = unit({ across[1] - along * t[1], across[2] - along * t[2], across[3] - along * t[3] }, "the path has a sharp bend at point " .. i)
    local up = cross(t, across)
    local r = o.radius + ((o.tip or o.radius) - o.radius) * (i - 1) / (#path - 1)
    for k = 0, o.segments - 1 do
      local c, s = r * math.cos(2 * math.pi * k / o.segments), r * o.flat * math.sin(2 * math.pi * k / o.segments)
      local p = {}
      for axis = 1, 3 do p[axis] = keys.round(path[i][axis] + c * across[axis] + s * up[axis]) end
      positions[#positions + 1] = p
    end
  end
  for i = 0, #path - 2 do
    for k = 1, o.segments do
      local a, b = i * o.segments + k, i * o.segments + k % o.segments + 1
      triangles[#triangles + 1] = { a, b, b + o.segments }
      triangles[#triangles + 1] = { a, b + o.segments, a + o.segments }
    end
  end
  for k = 2, o.segments - 1 do -- the ends
    local last = (#path - 1) * o.segments
    triangles[#triangles + 1] = { 1, k + 1, k }
    triangles[#triangles + 1] = { last + 1, last + k, last + k + 1 }
  end
  return mesh.raw{ positions = positions, triangles = triangles, smooth = 60 }
end

return forms
