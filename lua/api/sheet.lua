---@meta

---@class sheet.keys
---@field name? string of its file: letters, digits, '.', '_', '-', no '.' first or last, unique among the sheets; default made of the title, else the scene's
---@field title? string at its head; default its name, else the scene's
---@field rows? string|string[] tags whose values make the rows, outermost first; "pass" stands for the passes. A sheet without rows, columns and pages is laid by the tags in which its frames differ: the first makes the columns, the others the rows; default none
---@field columns? string|string[] likewise for the columns; default none
---@field pages? string|string[] likewise for the pages; default none
---@field where? table<string, any> only frames whose tag has this value, or one of these values; default all
---@field order? table<string, any[]> values of a tag that come first, in this order; default as first seen
---@field caption? string under each tile, {tag} for its value, {pass} for the pass and {name} for the frame's name; default none
---@field per_line? integer tiles in a line of a sheet without rows, or without columns, 1 to 10000; default what brings it nearest to √2 : 1
---@field tile? integer[] {width, height} in pixels, 16 to 4096, to fit the tiles into; default their own size
---@field paper? "grey"|"light"|"dark" its ground; default "grey"
---@field reference? table<string, any> adds to each tile its colour difference, ΔE2000 (mean and 95th percentile), from the tile with these values of the tags and otherwise its own; default none
---@field show? "pictures"|"difference" what stands in the places: the pictures, or a map of each pixel's ΔE2000 to the reference; "difference" needs reference; default "pictures"

--- Registers a contact sheet: the frames laid out by their tags; a scene that registers none gets one of all its frames.
--- The ending of a tag's name says in what its numbers are, and the sheet writes that unit after them: _deg, _mm, _cm, _m, _cd, _lm, _lx,
--- _nit, _percent, _stops, _kelvin. height_mm = 95 reads as height 95 mm.
--- Example: sheet{ title = "Bowl: gloss by glaze", rows = "glaze", columns = "gloss" }
--- Example: sheet{ rows = "glaze", columns = "gloss", reference = { gloss = 16 }, show = "difference" }
---@param keys? sheet.keys default {}
function sheet(keys) end
