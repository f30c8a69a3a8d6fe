---@meta

---@class frame.keys
---@field things thing|thing[] what stands in the picture, one or several; lists in the list count as their elements
---@field name? string of its file: letters, digits, '.', '_', '-', no '.' first or last, unique in the scene; default made of the tags, else "frame-1"
---@field tags? table<string, number|string|boolean> what tells it from its siblings, by which sheets are laid; the ending of a name is its unit on them: _deg, _mm, _cm, _m, _cd, _lm, _lx, _nit, _percent, _stops, _kelvin; default none
---@field camera? camera default camera.fit over a whole turn of the things
---@field lights? rig|light|(light|rig)[] default a large soft key from the upper left front and a third as much ambient light, sized to the things
---@field size? integer[] {width, height} in pixels, 1 to 16384; default as in settings
---@field samples? integer camera rays a pixel, 1 to 65536, the most where noise is given; default as in settings
---@field noise? number error to be seen at most, as a standard deviation in L* at the frame's exposure, 0.01 to 50; samples is then the most that a pixel takes and 32 the least, so that none stops by luck; 0 for none; default as in settings
---@field light_samples? integer shadow rays a camera ray and area light, 1 to 1024; default as in settings
---@field seed? integer of the sample points, 0 to 4294967295: one for stills and comparisons, each frame's own for an animation; default as in settings
---@field filter? "blackman_harris"|"box" of pixels; default as in settings
---@field exposure? number stops, -100 to 100; at 0 stops one nit shows as 1.0; default as in settings
---@field tone? "shoulder"|"neutral"|"clip"|"reinhard"|"aces" curve from light to screen; default as in settings
---@field white? number tone "reinhard": the luminance that becomes white, > 0; default as in settings
---@field background? color|"transparent" what shows where nothing stands; default as in settings
---@field passes? string|string[] planes beside the picture: "diffuse", "specular", "ambient", "emission", "depth", "normal", "samples" (camera rays that each pixel took), "noise" (its error as estimated, in L*); default as in settings
---@field formats? string|string[] of the files: "png", "png16", "exr", "exr_half"; default as in settings

--- Registers a frame: one picture.
--- Example: frame{ tags = { glaze = "slate" }, things = { subject }, lights = studio, samples = 16 }
---@param keys frame.keys
function frame(keys) end
