---@meta

--- Tables of data. Their rows are strict: asking for a column that is not there is an error; row._line is the row's line in the file.
---@class data.functions
data = {}

---@class data.csv.keys
---@field numbers? string|string[] columns that hold numbers; an empty cell is nil; default none, all cells are texts
---@field text? string|string[] columns of codes: one that a spreadsheet has turned into 7.5E+11 is an error; default none
---@field separator? ","|";"|"\t" between cells; default what the header line suggests
---@field decimal? "."|"," mark in numbers; default "."

--- The rows of a CSV file, UTF-8, whose first line names the columns; cells are trimmed, empty rows left out.
--- Example: data.csv("products.csv", { numbers = {"height"}, text = "article" })
---@param path string beside the scene, or in a folder of --assets
---@param keys? data.csv.keys default {}
---@return table[]
function data.csv(path, keys) end

--- What a JSON file holds, in its order; objects in a list at the top are rows; null is nil.
--- Example: data.json("products.json")
---@param path string beside the scene, or in a folder of --assets
---@return any
function data.json(path) end
