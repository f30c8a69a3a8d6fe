---@meta

---@class settings.keys
---@field size? integer[] {width, height} in pixels, 1 to 16384; default {640, 480}
---@field samples? integer camera rays a pixel, 1 to 65536, the most where noise is given; default 64
---@field noise? number error to be seen at most, as a standard deviation in L* at the frame's exposure, 0.01 to 50; samples is then the most that a pixel takes and 32 the least, so that none stops by luck; 0 for none; default 0, so that all take samples
---@field light_samples? integer shadow rays a camera ray and area light, 1 to 1024; default 1
---@field seed? integer of the sample points, 0 to 4294967295: keep one for stills and comparisons, so that tiles differ by what they show and not by their noise; give each frame of an animation its own, or its noise stands still before what moves; default 0
---@field filter? "blackman_harris"|"box" of pixels; default "blackman_harris"
---@field exposure? number stops, -100 to 100; at 0 stops one nit shows as 1.0, and each more doubles what is shown; default metered among the things of the first frame that states none, and held from there on
---@field tone? "shoulder"|"neutral"|"clip"|"reinhard"|"aces" curve from light to screen: shoulder leaves colours up to 0.8 as they are and compresses highlights, neutral is the Khronos curve for surfaces with a 4 % reflection, aces a published fit; default "shoulder"
---@field white? number tone "reinhard": the luminance that becomes white, > 0; default 4
---@field background? color|"transparent" what shows where nothing stands; default color.grey(0.18)
---@field passes? string|string[] planes beside the picture: "diffuse", "specular", "ambient", "emission", "depth", "normal", "samples" (camera rays that each pixel took), "noise" (its error as estimated, in L*); default none
---@field formats? string|string[] of the files: "png", "png16", "exr", "exr_half"; default "png"

--- Sets what the frames that follow start from; keys that are left out stay as they are.
--- Example: settings{ size = {480, 360}, samples = 64 }
---@param keys? settings.keys default {}
function settings(keys) end
