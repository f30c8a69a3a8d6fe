---@meta

--- Lights together.
---@class rig
---@field count integer how many lights

--- Lights together, each with a name of its own; rigs in the list count as their lights.
--- Example: rig{ light.area{ name = "key", position = {0.7, 0.9, 0.6} }, light.ambient{ name = "room" } }
---@param lights (light|rig)[]
---@return rig
function rig(lights) end

--- The rig turned about the vertical through the origin.
--- Example: studio:turned(30)
---@param degrees number counter-clockwise seen from above
---@return rig
function rig:turned(degrees) end

--- The rig with every light brighter; less than 0 is darker.
--- Example: studio:brighter(-0.5)
---@param stops number each doubles the light, -40 to 40
---@return rig
function rig:brighter(stops) end

--- The rig with only the lights of these names.
--- Example: studio:only("key")
---@param names string|string[]
---@return rig
function rig:only(names) end

--- The rig without the lights of these names.
--- Example: studio:without{ "room" }
---@param names string|string[]
---@return rig
function rig:without(names) end

--- A changed copy: keys are names of lights, values other lights, or tables of what to change in them.
--- Example: studio:with{ key = { stops = 1 }, room = light.ambient{ intensity = 10 } }
---@param changes table<string, light|table>
---@return rig
function rig:with(changes) end

---@class rig.meter.keys
---@field at? point where the meter stands, metres; default {0, 0, 0}
---@field facing? point where its face points; default {0, 0, 1}

--- An incident light meter: the exposure in stops that shows an 18 % grey card there as 18 % grey, with nothing in the light's way.
--- With the default tone, "shoulder", the card comes out as sRGB 118; "neutral" shows matt surfaces deeper, by up to 0.04 of linear light.
--- Example: studio:meter{ at = {0, 0.05, 0}, facing = {0, 0.4, 1} }
---@param keys? rig.meter.keys default {}
---@return number stops
function rig:meter(keys) end

--- The names of the lights, in order.
--- Example: studio:names()
---@return string[]
function rig:names() end
