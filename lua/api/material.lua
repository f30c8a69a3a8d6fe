---@meta

--- A surface.
---@class material
material = {}

---@class material.blinn_phong.keys
---@field diffuse? color what it scatters, components 0 to 1; default color.grey(0.5)
---@field specular? color the highlight's strength, components 0 to 1; default color.grey(0.2)
---@field ambient? color what it gives back of ambient light, components 0 to 1; default as diffuse
---@field emission? color light of its own, nit; default none
---@field shininess? number the highlight's exponent S, 0 to 100000: 4 is satin, 256 polished; default 30
---@field normalized? boolean keeps the highlight's energy steady as shininess changes; default false
---@field opacity? number share of light that it stops, > 0 to 1; default 1

--- The surface of four components: diffuse, specular, ambient and emission, each a colour of its own.
--- Example: material.blinn_phong{ diffuse = color "#9fc3a4", specular = color.grey(0.3), shininess = 64 }
---@param keys? material.blinn_phong.keys default {}
---@return material
function material.blinn_phong(keys) end

--- A changed copy; keys are those of the call that made the material.
--- Example: material.blinn_phong{ shininess = 8 }:with{ shininess = 64 }
---@param changes table
---@return material
function material:with(changes) end
