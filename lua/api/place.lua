---@meta

--- One thing standing in front of the camera.
---@class thing

---@class place.keys
---@field mesh mesh what it is
---@field material? material of all of it; default the mesh file's own, else material.blinn_phong{}
---@field materials? table<string, material> materials of single slots, by name, over material; default none
---@field at? point where its origin stands, metres; default {0, 0, 0}
---@field turn? point degrees about x, then y, then z, counter-clockwise seen from the axis' tip; default {0, 0, 0}
---@field scale? number|point factors, not 0; default 1
---@field name? string unique in the frame; default none
---@field seen? boolean whether the camera sees it; default true
---@field shadows? boolean whether it takes light from other things; default true
---@field backdrop? boolean whether a camera fit and the default lights leave it out, as ground and walls; default false

--- A mesh set up in the scene, in its material.
--- Example: place{ mesh = mesh.sphere{ radius = 0.05 }, at = {0, 0.05, 0}, turn = {0, 30, 0} }
---@param keys place.keys
---@return thing
function place(keys) end

--- A changed copy; keys are those of place.
--- Example: subject:with{ turn = {0, 90, 0} }
---@param changes table
---@return thing
function thing:with(changes) end
