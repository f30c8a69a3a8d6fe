---@meta

---@class param.keys
---@field min? number numbers: the least; default none
---@field max? number numbers: the greatest; default none
---@field integer? boolean numbers: only whole ones; default false
---@field choices? (number|string)[] the only values accepted; default any
---@field help? string one line for people; default none

--- A parameter of the scene: its default, or what --set name=value says, which must be of the same type.
--- Example: param("gloss", 32, { min = 1, max = 512, help = "exponent of the highlight" })
---@generic T: number|string|boolean|color
---@param name string letters, digits and _, unique in the scene
---@param default T its type is the parameter's; a colour is set as "#rrggbb"
---@param keys? param.keys default {}
---@return T
function param(name, default, keys) end
