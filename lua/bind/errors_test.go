package bind

import "testing"

// Every message is complete: where, what, what was given, what is accepted.
var errorTests = []struct{ scene, want string }{
	// Names
	{`material.blinn_phong{ shinyness = 3 }`, `material.blinn_phong: unknown key "shinyness"; did you mean "shininess"? accepted: diffuse, specular, ambient, emission, shininess, normalized, opacity`},
	{`material.blin_phong{}`, `material has no "blin_phong"; did you mean "blinn_phong"? accepted: blinn_phong`},
	{`light.are{}`, `light has no "are"; did you mean "area"? accepted: directional, point, spot, area, ambient`},
	{`light.area = nil`, `light cannot be changed`},
	{`local m = mesh.sphere{ radius = 1 } m.radius = 2`, `a mesh cannot be changed: mesh:with{ radius = … } gives a changed copy`},
	{`local c = color.grey(1) print(c.red)`, `a color has no "red"; accepted: r, g, b, hex, mixed, scaled, with`},
	{`mesh.load("a.obj", { units = "cm" })`, `mesh.load: unknown key "units"; did you mean "unit"? accepted: unit, up, smooth`},
	{`texture.load("a.png")`, `attempt to index a non-table object(nil) with key 'load'`},
	{`light.directional{ direction = {0, -1, 0}, power = 10 }`, `light.directional: unknown key "power"; accepted: direction, name, color, temperature, intensity, stops, components, shadows`},
	// Shapes of calls
	{`light.area{ {0, 1, 0} }`, `light.area: takes named values only, got {0, 1, 0} without a name; accepted: position, target, up, shape, width, height, radius, two_sided, visible, power, name, color, temperature, intensity, stops, components, shadows`},
	{`light.area(3)`, `light.area: takes a table in braces, got 3: light.area{ position, target, up, shape, width, height, radius, two_sided, visible, power, name, color, temperature, intensity, stops, components, shadows }`},
	{`light:area{ position = {0, 1, 0} }`, `light.area: write light.area with a dot, not a colon`},
	{`local r = rig{} r.turned(5)`, `rig:turned: write rig:turned(…), with a colon after a rig, got 5`},
	{`steps(1, 2)`, `steps: count must be given: steps(from, to, count)`},
	{`steps(1, 2, 3, 4)`, `steps: too many arguments: steps(from, to, count)`},
	{`light.point{}`, `light.point: position must be given: light.point{ position, range, falloff, power, name, color, temperature, intensity, stops, components, shadows }`},
	// Numbers
	{`light.area{ position = {0, 1, 0}, width = -1 }`, `light.area: width must be > 0 metres, got -1`},
	{`light.area{ position = {0, 1, 0}, width = "wide" }`, `light.area: width must be a number > 0 metres, got "wide"`},
	{`mesh.sphere{ radius = 0 / 0 }`, `mesh.sphere: radius must be > 0 metres, got not a number (NaN)`},
	{`mesh.sphere{ radius = 1e9 }`, `mesh.sphere: radius must be at most 1000000 metres, got 1000000000`},
	{`mesh.sphere{ radius = 1, segments = 2 }`, `mesh.sphere: segments must be a whole number from 3 to 1024, got 2`},
	{`mesh.sphere{ radius = 1, segments = 12.5 }`, `mesh.sphere: segments must be a whole number from 3 to 1024, got 12.5`},
	{`material.blinn_phong{ opacity = 0 }`, `material.blinn_phong: opacity must be > 0 and at most 1, got 0`},
	{`material.blinn_phong{ normalized = 1 }`, `material.blinn_phong: normalized must be true or false, got 1`},
	{`color(181, 101, 29)`, `color: too many arguments: color takes "#rrggbb"; for three numbers write color.srgb(r/255, g/255, b/255)`},
	{`color{181, 101, 29}`, `color: takes "#rrggbb", got {181, 101, 29}: write color.linear(181, 101, 29) if these are amounts of light, color "#b5651d" if they were read off a screen`},
	{`frame{ things = { light.ambient{} } }`, `frame: things must hold things, got a light at place 1: lights = { … } takes it`},
	{`frame{ things = rig{} }`, `frame: things must be things, got a rig: lights = … takes it`},
	{`sweep{ gloss = 4 }`, `sweep: takes a list of axes, got the key "gloss": write { {"gloss", {value, …}} }`},
	{`light.spot{ position = {0, 1, 0}, inner = 40, outer = 30 }`, `light.spot: inner must be at most outer, 30 degrees, got 40`},
	{`geometric(0, 8, 3)`, `geometric: from and to must both be > 0 or both be < 0, got 0 and 8`},
	// Points
	{`place{ mesh = mesh.sphere{ radius = 1 }, at = {0, 1} }`, `place: at must be {x, y, z}, got {0, 1}`},
	{`place{ mesh = mesh.sphere{ radius = 1 }, at = color.grey(1) }`, `place: at must be {x, y, z}, got color.linear(1, 1, 1)`},
	{`place{ mesh = mesh.sphere{ radius = 1 }, scale = {1, 0, 1} }`, `place: scale must not be 0 along any axis, got {1, 0, 1}`},
	{`light.spot{ position = {0, 0, 0} }`, `light.spot: position and target must be two different points, both are {0, 0, 0}`},
	{`camera{ position = {0, 1, 0} }`, `camera: up {0, 1, 0} runs along the view: give another`},
	{`light.area{ position = {0, 1, 0}, up = {0, 2, 0} }`, `light.area: up {0, 2, 0} runs along the light's axis: give another`},
	// Colours
	{`material.blinn_phong{ diffuse = {0.7, 0.4, 0.1} }`, `material.blinn_phong: diffuse must be a colour, got {0.7, 0.4, 0.1}: write color.linear(0.7, 0.4, 0.1) if these are amounts of light, color.srgb(0.7, 0.4, 0.1) if they were read off a screen`},
	{`material.blinn_phong{ diffuse = {181, 101, 29} }`, `material.blinn_phong: diffuse must be a colour, got {181, 101, 29}: write color.linear(181, 101, 29) if these are amounts of light, color "#b5651d" if they were read off a screen`},
	{`material.blinn_phong{ diffuse = "#b5651d" }`, `material.blinn_phong: diffuse must be a colour, got "#b5651d": write color "#b5651d"`},
	{`material.blinn_phong{ specular = 0.3 }`, `material.blinn_phong: specular must be a colour, got 0.3: write color.grey(0.3)`},
	{`material.blinn_phong{ diffuse = color.grey(1.5) }`, `material.blinn_phong: diffuse must have components of at most 1, got color.linear(1.5, 1.5, 1.5)`},
	{`color.srgb(181, 101, 29)`, `color.srgb: r must be 0 to 1, got 181: divide by 255, or write color "#rrggbb"`},
	{`color.lab(50, 100, -100)`, `color.lab: L* 50, a* 100, b* -100 lies outside the Rec. 709 gamut: it would be r 0.4542, g -0.0181, b 1.3925 linear, 0 to 1 are accepted`},
	{`light.ambient{ color = color.grey(1), temperature = 3000 }`, `light.ambient: give color or temperature, not both`},
	{`light.point{ position = {0, 1, 0}, intensity = 1, power = 2 }`, `light.point: give intensity or power, not both`},
	{`light.ambient{ components = { diffuse = {1, 0, 0} } }`, `light.ambient: components: diffuse must be a colour, got {1, 0, 0}: write color.linear(1, 0, 0) if these are amounts of light, color.srgb(1, 0, 0) if they were read off a screen`},
	{`light.ambient{ components = { glow = 1 } }`, `light.ambient: components: unknown key "glow"; accepted: diffuse, specular, ambient, emission`},
	// Forms
	{`light.area{ position = {0, 1, 0}, shape = "disc" }`, `light.area: shape must be one of "rectangle", "disk" or "sphere", got "disc"; did you mean "disk"?`},
	{`light.area{ position = {0, 1, 0}, shape = "disk", width = 1 }`, `light.area: a disk has no width`},
	{`mesh.torus{ radius = 0.1, tube = 0.2 }`, `mesh.torus: tube must be less than radius, 0.1 metres, got 0.2`},
	{`mesh.lathe{ profile = {{0, 0}, {0.1}} }`, `mesh.lathe: profile point 2 must be {radius, y}, got {0.1}`},
	{`mesh.lathe{ profile = {{0, 0}} }`, `mesh.lathe: profile must have at least 2 points, got 1`},
	{`mesh.extrude{ outline = {{0, 0}, {1, 1}, {1, 0}, {0, 1}}, depth = 1 }`, `mesh.extrude: outline edges 1 and 3 meet: an outline must not touch or cross itself`},
	{`mesh.raw{ positions = {{0, 0, 0}}, triangles = {{0, 1, 1}} }`, `mesh.raw: triangle 1 must name positions from 1 to 1, got 0`},
	{`mesh.raw{ positions = {{0, 0, 0}}, triangles = {}, uvs = {{0, 0}, {0, 1}} }`, `mesh.raw: uvs must be one for each of the 1 positions, got 2`},
	{`mesh.load("/etc/passwd")`, `mesh.load: /etc/passwd: only files beside the scene are read`},
	{`place{ mesh = mesh.load("shapes/jug.obj"), materials = { bodi = material.blinn_phong{} } }`, `place: materials: the mesh has no slot "bodi"; did you mean "body"? accepted: body, foot`},
	{`place{ mesh = mesh.sphere{ radius = 1 }, materials = { x = material.blinn_phong{} } }`, `place: materials: the mesh has no slot "x", it is of one piece: give material`},
	// Rigs
	{`rig{ light.ambient{ name = "a" }, light.ambient{ name = "a" } }`, `rig: two lights are named "a": give each a name of its own`},
	{`rig{ key = light.ambient{} }`, `rig: takes a list of lights, got the key "key"`},
	{`rig{ light.ambient{}, mesh.sphere{ radius = 1 } }`, `rig: rig must hold lights and rigs, got a mesh at place 2`},
	{`rig{ light.ambient{ name = "room" } }:only("rom")`, `rig:only: no light is named "rom"; did you mean "room"? accepted: room`},
	{`rig{ light.ambient{ name = "room" } }:with{ room = { intensty = 1 } }`, `light.ambient:with: unknown key "intensty"; did you mean "intensity"? accepted: name, color, temperature, intensity, stops, components`},
	{`rig{ light.area{ position = {0, 1, 0} } }:meter{ at = {0, 2, 0}, facing = {0, 1, 0} }`, `rig:meter: no light reaches [0 2 0] facing [0 1 0]: point the meter at a light`},
	// Cameras
	{`camera{ position = {0, 0, 1}, fov = 30, focal = 50 }`, `camera: give focal or fov, not both`},
	{`camera{ position = {0, 0, 1}, projection = "orthographic" }`, `camera: height must be given for an orthographic camera: how many metres it sees from bottom to top`},
	{`camera.fit{ things = {} }`, `camera.fit: things must hold at least one thing to frame`},
	{`camera.fit{ things = { mesh.sphere{ radius = 1 } } }`, `camera.fit: things must hold things, got a mesh at place 1: write place{ mesh = … }`},
	{`camera.fit{ things = { place{ mesh = mesh.sphere{ radius = 1 } } }, direction = {0, 1, 0} }`, `camera.fit: direction {0, 1, 0} runs along up {0, 1, 0}: give another up`},
	// Parameters and loops
	{`param("1x", 3)`, `param: name must be letters, digits and _, beginning with a letter, got "1x"`},
	{`param("x", {})`, `param: the default of "x" must be a number, a text, true or false, or a colour, got {}`},
	{`param("x", 3, { min = 5 })`, `param: the default of "x": must be at least 5, got 3`},
	{`param("x", 3) param("x", 4)`, `param: "x" is declared already, at scenes/test.lua:1`},
	{`for s in sweep{ {"gloss", {4, 16}} } do print(s.glos) end`, `this sweep has no "glos"; did you mean "gloss"? accepted: gloss`},
	{`sweep{ {"gloss", {}} }`, `sweep: axis "gloss" has no values`},
	{`sweep{ gloss = {4, 16} }`, `sweep: takes a list of axes, got the key "gloss": write { {"gloss", {4, 16}} }`},
	{`local t = {} for i = 1, 500 do t[i] = i end sweep{ {"a", t}, {"b", t} }`, `sweep: more than 200000 combinations: no plan holds as many frames`},
	{`turntable{ frames = 0 }`, `turntable: frames must be a whole number from 1 to 36000, got 0`},
	{`random("a"):integer(5, 1)`, `random:integer: from must be at most to, 1, got 5`},
	// Data
	{`data.csv("products.cvs")`, `data.csv: products.cvs: file does not exist`},
	{`data.csv("products.csv", { numbers = "heigth" })`, `data.csv: numbers: products.csv has no column "heigth"; did you mean "height"? accepted: article, name, height`},
	{`data.csv("products.csv", { numbers = "height" })`, `data.csv: products.csv:2: height: must be a number, got "11,5"; decimal = "," reads a decimal comma`},
	{`print(data.csv("products.csv")[2].nam)`, `the row of line 4 has no column "nam"; did you mean "name"? accepted: article, name, height`},
	{`print(data.json("products.json")[2].hight)`, `the row of line 3 has no column "hight"; did you mean "height"? accepted: name, height, glaze, tags`},
	// Settings, frames and sheets
	{`settings{ size = {0, 480} }`, `settings: size must be whole numbers of pixels from 1 to 16384, got {0, 480}`},
	{`settings{ noise = 0.001 }`, `settings: noise must be a number from 0.01 to 50 L*, or 0 for none, got 0.001`},
	{`settings{ noise = "low" }`, `settings: noise must be a number from 0.01 to 50 L*, or 0 for none, got "low"`},
	{`settings{ noise = 0 / 0 }`, `settings: noise must be a number from 0.01 to 50 L*, or 0 for none, got not a number (NaN)`},
	{`settings{ tone = "filmic" }`, `settings: tone must be one of "shoulder", "neutral", "clip", "reinhard" or "aces", got "filmic"`},
	{`settings{ formats = { "png", "png" } }`, `settings: formats names "png" twice`},
	{`settings{ passes = "diffus" }`, `settings: passes must be one of "diffuse", "specular", "ambient", "emission", "depth", "normal", "samples" or "noise", got "diffus"; did you mean "diffuse"?`},
	{`settings{ background = {0.2, 0.2, 0.2} }`, `settings: background must be a colour or "transparent", got {0.2, 0.2, 0.2}: write color.linear(0.2, 0.2, 0.2) if these are amounts of light, color.srgb(0.2, 0.2, 0.2) if they were read off a screen`},
	{`frame{ things = {} }`, `frame: things must hold at least one thing`},
	{ball + `frame{ things = { ball }, name = "a/b" }`, `frame: name must be letters, digits, '.', '_' and '-', at most 120 of them and not '.' first or last, got "a/b"`},
	{ball + `frame{ things = { ball }, name = "bowl." }`, `frame: name must be letters, digits, '.', '_' and '-', at most 120 of them and not '.' first or last, got "bowl."`},
	{ball + `frame{ things = { ball }, name = "Aux.bowl" }`, `frame: the name "Aux.bowl" is one that Windows keeps for a device, with any ending: give another`},
	{`sheet{ name = "com1" }`, `sheet: the name "com1" is one that Windows keeps for a device, with any ending: give another`},
	{ball + `frame{ things = { ball }, tags = { glaze = color.grey(1) } }`, `frame: tag "glaze" must be a number, a text, true or false, got color.linear(1, 1, 1)`},
	{ball + `frame{ things = { ball }, tags = { pass = 1 } }`, `frame: no tag may be named "pass": on a sheet it stands for the passes`},
	{ball + `frame{ things = { ball }, tags = { a = 1 } } frame{ things = { ball }, tags = { a = 1 } }`, `frame: the tags make the name "a-1", which a frame has already, at scenes/test.lua:1: give each frame other tags, or a name`},
	{ball + `frame{ things = { ball }, name = "Bowl" } frame{ things = { ball }, name = "bowl" }`, `frame: the name "bowl" differs only in case from that of a frame, at scenes/test.lua:1: some file systems take them for one`},
	{ball + `frame{ things = { ball:with{ name = "a" }, ball:with{ name = "a" } } }`, `frame: two things are named "a": give each a name of its own`},
	{ball + `frame{ things = { ball }, lights = 3 }`, `frame: lights must be a rig or a list of lights, got 3`},
	{`sheet{ rows = "a", columns = "a" }`, `sheet: rows and columns both name the tag "a"`},
	{`sheet{ reference = { gloss = {4, 16} } }`, `sheet: reference must give the tag "gloss" one value, got 2`},
	{`sheet{ reference = 16 }`, `sheet: reference must be a table { tag = value }, got 16`},
	{`sheet{ show = "difference" }`, `sheet: show = "difference" needs a reference: give the tag and the value of the tiles to compare with, reference = { tag = value }`},
	{`sheet{ show = "diference" }`, `sheet: show must be one of "pictures" or "difference", got "diference"; did you mean "difference"?`},
	{`sheet{ name = "a" } sheet{ name = "A" }`, `sheet: the name "A" was given to a sheet before`},
}

const ball = `local ball = place{ mesh = mesh.sphere{ radius = 0.05, segments = 8 } } `

func TestErrors(t *testing.T) {
	for _, c := range errorTests {
		e := newEnv()
		err := run(t, newState(t, e), c.scene)
		line := "scenes/test.lua:1: "
		if got := message(err); got != line+c.want {
			t.Errorf("%s\n got %s\nwant %s", c.scene, got, line+c.want)
		}
		if e.Fatal() != nil {
			t.Errorf("%s: %v", c.scene, e.Fatal())
		}
	}
}

// What shows only at the end of a scene.
func TestFinishErrors(t *testing.T) {
	for _, c := range []struct {
		scene     string
		overrides []Override
		want      string
	}{
		{`local x = 1`, nil, `scenes/test.lua: the scene registers no frame: frame{ things = { … } } registers one`},
		{ball + `frame{ things = { ball }, tags = { glaze = "slate" } } sheet{ rows = "glase" }`, nil,
			`scenes/test.lua:1: sheet: rows names a tag that no frame has, "glase"; did you mean "glaze"? accepted: glaze`},
		{ball + `frame{ things = { ball } } sheet{ rows = "glaze" }`, nil, `scenes/test.lua:1: sheet: rows names the tag "glaze", and no frame has tags`},
		{ball + `frame{ things = { ball } } sheet{ rows = "pass" }`, nil,
			`scenes/test.lua:1: sheet: rows names the passes, and no frame has any: ask for them in settings{ passes = … }`},
		{ball + `frame{ things = { ball }, tags = { a = 1 } } sheet{ caption = "{b}" }`, nil,
			`scenes/test.lua:1: sheet: caption names a tag that no frame has, "b"; accepted: name, a`},
		{ball + `frame{ things = { ball }, tags = { a = 1 } } sheet{ where = { a = 2 } }`, nil, `scenes/test.lua:1: sheet: where admits none of the scene's frames`},
		{ball + `frame{ things = { ball }, tags = { a = 1 } } sheet{ order = { b = {1} } }`, nil,
			`scenes/test.lua:1: sheet: order names a tag that no frame has, "b"; accepted: a`},
		{ball + `frame{ things = { ball }, tags = { gloss = 1 } } sheet{ reference = { glos = 1 } }`, nil,
			`scenes/test.lua:1: sheet: reference names a tag that no frame has, "glos"; did you mean "gloss"? accepted: gloss`},
		{ball + `frame{ things = { ball }, tags = { a = 1 } } sheet{ reference = { a = 2 } }`, nil,
			`scenes/test.lua:1: sheet: none of the sheet's frames has the values that reference names`},
		{ball + `frame{ things = { ball } } sheet{ caption = "{name" }`, nil, `scenes/test.lua:1: sheet: caption has a { without a name and its }: "{name"`},
		{ball + `param("gloss", 3) frame{ things = { ball } }`, []Override{{"glos", "4"}},
			`--set glos=4: scenes/test.lua has no parameter "glos"; did you mean "gloss"? accepted: gloss`},
		{ball + `frame{ things = { ball } }`, []Override{{"gloss", "4"}}, `--set gloss=4: scenes/test.lua has no parameters`},
		{`param("gloss", 3)`, []Override{{"gloss", "shiny"}}, `scenes/test.lua:1: param: --set gloss=shiny: must be a number, got "shiny"`},
		{`param("gloss", 3, { max = 5 })`, []Override{{"gloss", "6"}}, `scenes/test.lua:1: param: --set gloss=6: must be at most 5, got 6`},
		{`param("gloss", 3, { integer = true })`, []Override{{"gloss", "2.5"}}, `scenes/test.lua:1: param: --set gloss=2.5: must be a whole number, got 2.5`},
		{`param("ground", true)`, []Override{{"ground", "1"}}, `scenes/test.lua:1: param: --set ground=1: must be true or false, got "1"`},
		{`param("glaze", "slate", { choices = { "slate", "celadon" } })`, []Override{{"glaze", "rust"}},
			`scenes/test.lua:1: param: --set glaze=rust: must be one of slate, celadon, got rust`},
	} {
		e := newEnv()
		e.Overrides = c.overrides
		_, err := plan(t, e, c.scene)
		if got := message(err); got != c.want {
			t.Errorf("%s\n got %s\nwant %s", c.scene, got, c.want)
		}
	}
}
