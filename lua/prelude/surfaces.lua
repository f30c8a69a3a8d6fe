--- Surfaces to start from, for a ceramics and lamp workshop. Each is a function that takes a colour and gives a material, to be changed
--- with material:with{ … }:  surfaces.satin_glaze(color "#9fc3a4"):with{ shininess = 60 }
---
--- The numbers are the workshop's own, set by eye and kept where light is neither made nor lost: highlights are normalized, so that a
--- surface reflects as much when it is made more glossy, and diffuse and specular together stay below 1. The colour is what the surface
--- scatters (components 0 to 1); for brass it is the colour of the reflection.
---
---   name             specular   shininess   default colour   reads as
---   bisque           0.02       6           #c98f6b          fired, unglazed, dry
---   stoneware        0.035      14          #8a7a68          vitrified clay, the sheen of a skin
---   porcelain        0.05       320         #e9e6df          white, thin, sharp small lights
---   matt_glaze       0.03       10          #b9b2a3          soft broad sheen
---   satin_glaze      0.045      45          #9fc3a4          the window is a soft patch
---   gloss_glaze      0.06       260         #6d1a1a          the window is seen, with edges
---   metallic_glaze   0.30       60          #3b352f          iron-black, half a mirror
---   brass            0.62       180         #d9a441          scatters little, reflects its own colour
---   blackened_steel  0.12       40          #26272a          lamp feet and arms
---   paper_shade      0.015      4           #f0e6d2          unlit; emission lights it: paper_shade():with{ emission = … }
---   cord             0.02       8           #2b2b2b          woven flex
---   linen            0          1           #cfc7b8          table cloth: matt altogether
local surfaces = {}

local function surface(hex, specular, shininess)
  return function(given)
    return material.blinn_phong{ diffuse = given or color(hex), specular = color.grey(specular), shininess = shininess, normalized = true }
  end
end

surfaces.bisque = surface("#c98f6b", 0.02, 6)
surfaces.stoneware = surface("#8a7a68", 0.035, 14)
surfaces.porcelain = surface("#e9e6df", 0.05, 320)
surfaces.matt_glaze = surface("#b9b2a3", 0.03, 10)
surfaces.satin_glaze = surface("#9fc3a4", 0.045, 45)
surfaces.gloss_glaze = surface("#6d1a1a", 0.06, 260)
surfaces.metallic_glaze = surface("#3b352f", 0.30, 60)
surfaces.blackened_steel = surface("#26272a", 0.12, 40)
surfaces.paper_shade = surface("#f0e6d2", 0.015, 4)
surfaces.cord = surface("#2b2b2b", 0.02, 8)
surfaces.linen = surface("#cfc7b8", 0, 1)

--- A metal scatters next to nothing: its colour is that of the highlight. With one softbox it is dark beside it, as it is in life.
function surfaces.brass(given)
  local c = given or color "#d9a441"
  return material.blinn_phong{ diffuse = c:scaled(0.22), specular = c:scaled(0.62), ambient = c:scaled(0.5), shininess = 180, normalized = true }
end

return surfaces
