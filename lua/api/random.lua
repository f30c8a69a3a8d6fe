---@meta

--- A generator of random numbers: each call gives the next.
---@class random
---@field name string

--- A generator of its own, seeded by the scene's file name and this name: adding one changes no other, and every run gives the same.
--- Example: random("scatter")
---@param name string any text
---@return random
function random(name) end

--- A number between two others, the second left out.
--- Example: random("scatter"):number(-0.1, 0.1)
---@param from? number default 0
---@param to? number at least from; default 1
---@return number
function random:number(from, to) end

--- A whole number between two others, both included.
--- Example: random("scatter"):integer(1, 6)
---@param from integer
---@param to integer at least from
---@return integer
function random:integer(from, to) end

--- One element of a list.
--- Example: random("scatter"):pick{ "slate", "celadon", "oxblood" }
---@generic T
---@param list T[] not empty
---@return T
function random:pick(list) end

--- A new list of the same elements in random order.
--- Example: random("scatter"):shuffle{ 1, 2, 3 }
---@generic T
---@param list T[]
---@return T[]
function random:shuffle(list) end
