---@meta

--- A light. Intensities carry the units of KHR_lights_punctual.
---@class light
light = {}

--- A light's own weight in each component of a surface: a number, or a colour to tint it.
---@class light.components
---@field diffuse? number|color at least 0; default 1
---@field specular? number|color at least 0; default 1
---@field ambient? number|color at least 0; default 0, and 1 for light.ambient
---@field emission? number|color at least 0; what surfaces emit is weighted by the sum over the lights that state one; default 0

---@class light.directional.keys
---@field direction? point the way the light travels, any length but 0; default {0.5, -1, -0.7}, from the upper left front
---@field name? string unique in its rig; default its kind and number, "directional 1"
---@field color? color multiplies the intensity; default white
---@field temperature? number kelvin, 1000 to 40000, instead of color; default none
---@field intensity? number lux, at least 0; default 1000
---@field stops? number doubles the light once for each, -40 to 40; default 0
---@field shadows? boolean whether things in the way take its light; default true
---@field components? light.components its own weight or tint in each component of a surface; default { diffuse = 1, specular = 1, ambient = 0, emission = 0 }

--- Parallel light, as from the sun.
--- Example: light.directional{ direction = {0.3, -1, -0.5}, intensity = 1200 }
---@param keys? light.directional.keys default {}
---@return light
function light.directional(keys) end

---@class light.point.keys
---@field position point where it stands, metres
---@field range? number metres where it ends, > 0; default endless
---@field falloff? "inverse_square"|"none" how it weakens with distance; default "inverse_square"
---@field name? string unique in its rig; default its kind and number, "point 1"
---@field color? color multiplies the intensity; default white
---@field temperature? number kelvin, 1000 to 40000, instead of color; default none
---@field intensity? number candela, at least 0; default 1000
---@field power? number lumen, at least 0, instead of intensity; default none
---@field stops? number doubles the light once for each, -40 to 40; default 0
---@field shadows? boolean whether things in the way take its light; default true
---@field components? light.components its own weight or tint in each component of a surface; default { diffuse = 1, specular = 1, ambient = 0, emission = 0 }

--- Light from one point to all sides.
--- Example: light.point{ position = {0.4, 0.8, 0.5}, power = 800, temperature = 2700 }
---@param keys light.point.keys
---@return light
function light.point(keys) end

---@class light.spot.keys
---@field position point where it stands, metres
---@field target? point where it points, metres; default {0, 0, 0}
---@field inner? number half angle in degrees within which all is lit, 0 to outer; default two thirds of outer
---@field outer? number half angle in degrees beyond which nothing is lit, > 0 to 90; default 30
---@field range? number metres where it ends, > 0; default endless
---@field falloff? "inverse_square"|"none" how it weakens with distance; default "inverse_square"
---@field name? string unique in its rig; default its kind and number, "spot 1"
---@field color? color multiplies the intensity; default white
---@field temperature? number kelvin, 1000 to 40000, instead of color; default none
---@field intensity? number candela, at least 0; default 1000
---@field power? number lumen, at least 0, instead of intensity; default none
---@field stops? number doubles the light once for each, -40 to 40; default 0
---@field shadows? boolean whether things in the way take its light; default true
---@field components? light.components its own weight or tint in each component of a surface; default { diffuse = 1, specular = 1, ambient = 0, emission = 0 }

--- A cone of light from one point.
--- Example: light.spot{ position = {0, 1.2, 0.8}, inner = 12, outer = 18, intensity = 900 }
---@param keys light.spot.keys
---@return light
function light.spot(keys) end

---@class light.area.keys
---@field position point where it stands, metres
---@field target? point where its front faces, metres; default {0, 0, 0}
---@field up? point rectangle: which way its height runs, not along its axis; default {0, 1, 0}, or {0, 0, -1} where it faces straight up or down
---@field shape? "rectangle"|"disk"|"sphere" its form; default "rectangle"
---@field width? number rectangle: metres, > 0; default 0.6
---@field height? number rectangle: metres, > 0; default as wide
---@field radius? number disk and sphere: metres, > 0; default 0.3
---@field two_sided? boolean rectangle and disk: whether the back emits too; default false
---@field visible? boolean whether the camera sees it; default false
---@field name? string unique in its rig; default its kind and number, "area 1"
---@field color? color multiplies the intensity; default white
---@field temperature? number kelvin, 1000 to 40000, instead of color; default none
---@field intensity? number nit, at least 0; default 1000
---@field power? number lumen, at least 0, instead of intensity; default none
---@field stops? number doubles the light once for each, -40 to 40; default 0
---@field shadows? boolean whether things in the way take its light; default true
---@field components? light.components its own weight or tint in each component of a surface; default { diffuse = 1, specular = 1, ambient = 0, emission = 0 }

--- A surface that emits: the softbox, whose shadows are soft.
--- Example: light.area{ name = "key", width = 0.6, height = 0.9, position = {0.7, 0.9, 0.6}, target = {0, 0.05, 0}, intensity = 2500 }
---@param keys light.area.keys
---@return light
function light.area(keys) end

---@class light.ambient.keys
---@field name? string unique in its rig; default its kind and number, "ambient 1"
---@field color? color multiplies the intensity; default white
---@field temperature? number kelvin, 1000 to 40000, instead of color; default none
---@field intensity? number nit, at least 0; default 40
---@field stops? number doubles the light once for each, -40 to 40; default 0
---@field components? light.components its own weight or tint in each component of a surface; default { diffuse = 1, specular = 1, ambient = 1, emission = 0 }

--- Light from everywhere, without direction and shadow; only the ambient component shows it.
--- Example: light.ambient{ intensity = 40 }
---@param keys? light.ambient.keys default {}
---@return light
function light.ambient(keys) end

--- A changed copy; keys are those of the call that made the light.
--- Example: light.ambient{}:with{ stops = 1 }
---@param changes table
---@return light
function light:with(changes) end
