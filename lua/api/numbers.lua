---@meta

--- A point or a direction: {x, y, z}. Points are in metres; Y is up, X right and Z towards the viewer. Never a colour.
---@alias point number[]

--- A length given in millimetres, in metres.
--- Example: mm(85)
---@param length number millimetres
---@return number metres
function mm(length) end

--- A length given in centimetres, in metres.
--- Example: cm(12)
---@param length number centimetres
---@return number metres
function cm(length) end

--- A length given in inches, in metres.
--- Example: inch(3)
---@param length number inches
---@return number metres
function inch(length) end

--- A list of evenly spaced numbers, both ends included, to twelve significant digits.
--- Example: steps(0, 1, 5)
---@param from number the first
---@param to number the last
---@param count integer how many, 1 to 200000
---@return number[]
function steps(from, to, count) end

--- A list of numbers of equal ratio, both ends included, to twelve significant digits: geometric(4, 256, 4) is {4, 16, 64, 256}.
--- Example: geometric(4, 256, 4)
---@param from number the first, not 0
---@param to number the last, of the same sign
---@param count integer how many, 1 to 200000
---@return number[]
function geometric(from, to, count) end
