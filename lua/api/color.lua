---@meta

--- A linear colour: amounts of light in Rec. 709 primaries. A plain {r, g, b} is never one.
---@class color
---@field r number linear red
---@field g number linear green
---@field b number linear blue
---@field hex string the nearest "#rrggbb", sRGB

--- A colour as screens and image editors write it: "#rrggbb" or "#rgb", sRGB.
--- Example: color "#b5651d"
---@class color.functions
---@overload fun(hex: string): color
color = {}

--- A colour from sRGB values, as read off a screen.
--- Example: color.srgb(0.71, 0.4, 0.11)
---@param r number red, 0 to 1
---@param g number green, 0 to 1
---@param b number blue, 0 to 1
---@return color
function color.srgb(r, g, b) end

--- A colour from amounts of light.
--- Example: color.linear(0.46, 0.13, 0.012)
---@param r number red, 0 to 1000000; reflectances end at 1
---@param g number green, likewise
---@param b number blue, likewise
---@return color
function color.linear(r, g, b) end

--- A neutral colour from an amount of light: 0.18 is a grey card.
--- Example: color.grey(0.18)
---@param y number 0 to 1000000; reflectances end at 1
---@return color
function color.grey(y) end

--- The colour of a glowing body, at luminance 1: 2700 is a warm lamp, 6500 nearly neutral.
--- Example: color.kelvin(3200)
---@param temperature number kelvin, 1000 to 40000
---@return color
function color.kelvin(temperature) end

--- A colour from CIE L*a*b* under D65; one that Rec. 709 cannot show is an error.
--- Example: color.lab(52, 24, 48)
---@param L number lightness, 0 to 100
---@param a number green to red, -200 to 200
---@param b number blue to yellow, -200 to 200
---@return color
function color.lab(L, a, b) end

--- The colour with every component multiplied.
--- Example: color.grey(0.5):scaled(0.5)
---@param factor number at least 0
---@return color
function color:scaled(factor) end

--- A mixture of two colours, as amounts of light.
--- Example: color "#fff":mixed(color "#6d1a1a", 0.25)
---@param other color what to mix in
---@param share number of the other, 0 to 1
---@return color
function color:mixed(other, share) end

--- A changed copy; keys are r, g and b.
--- Example: color.grey(0.5):with{ b = 0.4 }
---@param changes table
---@return color
function color:with(changes) end
