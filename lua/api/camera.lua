---@meta

--- A camera. A fit reads as the camera that it gives for a picture of the size in force.
---@class camera
---@field position point metres
---@field target point metres
---@field up point
---@field focal number? millimetres; nil if fov was given, or orthographic
---@field sensor number? millimetres; nil if orthographic
---@field fov number? degrees; nil unless given
---@field focus number? metres; nil unless given
---@field shift number[] in widths and heights of the picture
---@field height number? metres; nil unless orthographic
---@field f_number number? nil for a pinhole
---@field exposure number? stops; nil unless given
---@field projection "perspective"|"orthographic"

---@class camera.keys
---@field position point where it stands, metres
---@field target? point what it looks at, metres; default {0, 0, 0}
---@field up? point which way is up in the picture, not along the view; default {0, 1, 0}
---@field focal? number focal length in millimetres, > 0; default 50
---@field sensor? number width of the sensor in millimetres, > 0; default 36
---@field fov? number vertical field of view in degrees, > 0 to 170, instead of focal; default none
---@field focus? number distance to the sharp plane in metres, > 0; default that of the target
---@field shift? number[] {x, y}, moves the picture to the right and up, in its widths and heights, -10 to 10; default {0, 0}
---@field height? number orthographic, and needed there: metres from bottom to top, > 0; default none
---@field f_number? number aperture, > 0: small numbers blur what is out of focus; default a pinhole, all sharp
---@field exposure? number stops, -100 to 100; at 0 stops one nit shows as 1.0; default that of settings
---@field ev100? number exposure value at ISO 100, -90 to 90, instead of exposure; default none
---@field projection? "perspective"|"orthographic" default "perspective"

--- A camera from where it stands and what it looks at.
--- Example: camera{ position = {0, 0.3, 0.9}, target = {0, 0.05, 0}, focal = 85 }
---@class camera.functions
---@overload fun(keys: camera.keys): camera
camera = {}

---@class camera.fit.keys
---@field things thing|thing[] what to frame, at least one; backdrops among them are left out
---@field direction? point from the things towards the camera, any length but 0; default {0, 0.4, 1}
---@field up? point which way is up in the picture, not along direction; default {0, 1, 0}
---@field margin? number free border on the tightest side, as a share of the picture's height, 0 to 0.45; default 0.1
---@field focal? number focal length in millimetres, > 0; default 85
---@field sensor? number width of the sensor in millimetres, > 0; default 36
---@field over? turntable frames the things over a whole turn about the vertical through where each stands; default as they stand
---@field f_number? number aperture, > 0: small numbers blur what is out of focus; default a pinhole, all sharp
---@field exposure? number stops, -100 to 100; at 0 stops one nit shows as 1.0; default that of settings
---@field ev100? number exposure value at ISO 100, -90 to 90, instead of exposure; default none
---@field projection? "perspective"|"orthographic" default "perspective"

--- The nearest camera that shows the things whole, in the middle of the picture.
--- Example: camera.fit{ things = { subject }, direction = {0, 0.45, 1}, margin = 0.15, over = turntable{} }
---@param keys camera.fit.keys
---@return camera
function camera.fit(keys) end

--- A changed copy; keys are those of the call that made the camera.
--- Example: camera{ position = {0, 0, 1} }:with{ focal = 35 }
---@param changes table
---@return camera
function camera:with(changes) end
