---@meta

--- An iterator over every combination of values, the last axis fastest; each step is a table that can be a frame's tags.
--- Example: for step in sweep{ {"gloss", {4, 16, 64}}, {"glaze", {"slate", "celadon"}} } do print(step.gloss, step.glaze) end
---@param axes table[] {"name", {value, …}}: numbers, texts or truth values; at most 200000 combinations
---@return fun(): table
function sweep(axes) end

--- A whole turn in equal steps.
---@class turntable
---@field frames integer
---@field start number degrees

---@class turntable.keys
---@field frames? integer how many angles, 1 to 36000; default 36
---@field start? number the first angle in degrees, -360 to 360; default 0

--- An iterator over the angles of a whole turn, in degrees, each with its number from 1; the last does not repeat the first.
--- Example: for angle, number in turntable{ frames = 24 } do print(number, angle) end
---@param keys? turntable.keys default {}
---@return turntable
function turntable(keys) end
