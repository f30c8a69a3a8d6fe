--- Reads the named values that a function is called with, as the functions of these modules do: what is left out takes its default;
--- what is unknown, of the wrong kind or out of range is an error that says what is accepted.
---
---   local keys = require "keys"
---   function shop.shelf(given)
---     local o = keys.read("shop.shelf", given, {
---       width = { 0.8, above = 0, unit = "metres" },      -- a number > 0
---       lean  = { 10, low = 0, high = 90, unit = "degrees" },
---       side  = { "left", words = { "left", "right" } },  -- one of two words
---       at    = { {0, 0, 0} },                            -- a point
---       wood  = { kind = "userdata" },                    -- a colour, a material, a thing …; nil where left out
---     })
---     return place{ mesh = mesh.box{ width = o.width, … }, at = o.at, material = o.wood }
---   end
local keys = {}

--- A value in a message.
local function shown(v)
  if type(v) == "string" then return string.format("%q", v) end
  if type(v) == "number" or type(v) == "boolean" then return tostring(v) end
  return "a " .. type(v)
end

--- Names in the order of the alphabet.
local function sorted(names)
  local list = {}
  for name in pairs(names) do list[#list + 1] = name end
  table.sort(list)
  return list
end

--- How many letters must be changed, added or left out to make b of a (Levenshtein 1966).
local function distance(a, b)
  local row = {}
  for j = 0, #b do row[j] = j end
  for i = 1, #a do
    local diagonal = row[0]
    row[0] = i
    for j = 1, #b do
      local changed = diagonal + (a:sub(i, i) == b:sub(j, j) and 0 or 1)
      diagonal = row[j]
      row[j] = math.min(changed, row[j] + 1, row[j - 1] + 1)
    end
  end
  return row[#b]
end

--- "; did you mean "…"?" where one of the names is near, and the list of them.
local function hint(name, names)
  local near, best = nil, math.max(1, math.floor(#name / 3)) + 1
  for _, known in ipairs(names) do
    local d = distance(name:sub(1, 40):lower(), known:lower())
    if d < best then near, best = known, d end
  end
  return (near and string.format("; did you mean %q?", near) or ";") .. " accepted: " .. table.concat(names, ", ")
end

--- What is wrong with a number, or nil.
local function number_fault(v, rule)
  local unit = rule.unit and " " .. rule.unit or ""
  local finite = type(v) == "number" and v == v and v > -math.huge and v < math.huge
  if rule.above and not (finite and v > rule.above) then return "a number > " .. rule.above .. unit end
  if rule.low and not (finite and v >= rule.low and v <= rule.high) then return "a number " .. rule.low .. " to " .. rule.high .. unit end
  if rule.whole and not (finite and v == math.floor(v)) then return "a whole number" end
  return not finite and "a number" .. (rule.unit and " of " .. rule.unit or "") or nil
end

--- What is wrong with a point, or nil.
local function point_fault(v)
  local good = type(v) == "table" and #v == 3
  for i = 1, 3 do good = good and not number_fault(v[i], {}) end
  return not good and "a point {x, y, z}" or nil
end

--- What v should have been, or nil if it is as the rule says.
local function fault(v, rule)
  local kind = rule.kind or type(rule[1])
  if rule.words then
    for _, word in ipairs(rule.words) do
      if v == word then return nil end
    end
    return "one of \"" .. table.concat(rule.words, "\", \"") .. "\""
  end
  if kind == "number" then return number_fault(v, rule) end
  if kind == "table" then return point_fault(v) end
  if kind ~= "any" and type(v) ~= kind then
    return kind == "userdata" and rule.what or "a " .. kind
  end
end

--- The values of a call: where names the function in messages, given is the table it was called with or nil, rules says for each key
---   [1]         its default; without one the key may be nil
---   kind        the Lua type where there is no default, or "any"; tables are points {x, y, z}
---   above       numbers: greater than this      low, high   numbers: from this to that, both included
---   whole       numbers: true for whole ones    unit        numbers: what they are in, for messages
---   words       texts: the ones accepted        what        "userdata": what is wanted, for messages
function keys.read(where, given, rules)
  if given ~= nil and type(given) ~= "table" then
    error(where .. ": takes a table in braces, got " .. shown(given), 0)
  end
  local names, out = sorted(rules), {}
  for name in pairs(given or {}) do
    if type(name) ~= "string" then error(where .. ": takes named values only, got one without a name" .. hint("", names), 0) end
    if not rules[name] then error(string.format("%s: unknown key %q%s", where, name, hint(name, names)), 0) end
  end
  for _, name in ipairs(names) do
    local v = given and given[name]
    if v == nil then
      v = rules[name][1]
    else
      local wanted = fault(v, rules[name])
      if wanted then error(string.format("%s: %s must be %s, got %s", where, name, wanted, shown(v)), 0) end
    end
    out[name] = v
  end
  return out
end

--- A number to six significant digits: what sines and roots give differs in the last digit from one processor to another, and a
--- scene should not.
function keys.round(v)
  return tonumber(string.format("%.6g", v))
end

return keys
