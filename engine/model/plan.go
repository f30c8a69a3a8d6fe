package model

// Plan is all that a scene asks for. Frames, sheets and tables stand in the order in which the scene made them.
type Plan struct {
	Scene     string     // the scene's file name, slash-separated, as given on the command line
	Params    []Param    // the scene's parameters with the values in force
	Meshes    []Mesh     // by MeshID
	Materials []Material // by MaterialID
	Lights    []Light    // by LightID
	Frames    []Frame
	Sheets    []Sheet
	Warnings  []Warning // what the scene's author should know, though it is no error
}

// MeshID, MaterialID and LightID are indices into the plan's tables.
type (
	MeshID     int
	MaterialID int
	LightID    int
)

// Pos is a line of a scene file. The zero Pos means unknown.
type Pos struct {
	File string // slash-separated, as the user would type it
	Line int    // 1-based
}

// Warning is a remark about a place in the scene.
type Warning struct {
	Pos  Pos
	Text string
}

// Param is one parameter of the scene, with the value that this plan was made with.
type Param struct {
	Name  string
	Value string // canonical text
	Set   bool   // given on the command line
	Help  string
}

// Tag is a named value that tells a frame from its siblings; sheets pivot by tags.
type Tag struct {
	Key   string
	Value Value
}

// Value is a tag's value: a number, a text or a truth value. It compares with ==.
type Value struct {
	Kind   ValueKind
	Number float64
	Text   string // the text of a TextValue; otherwise empty
	Truth  bool
}

// ValueKind says which field of a Value counts.
type ValueKind uint8

// The kinds of Value.
const (
	TextValue ValueKind = iota
	NumberValue
	TruthValue
)

// Frame is everything needed to make one picture. Equal frames, apart from Name, Tags and Pos, give equal bytes.
type Frame struct {
	Name     string // unique in the plan, letters, digits, '.', '_', '-'; the file's name; not hashed
	Tags     []Tag  // in the scene's order; not hashed
	Pos      Pos    // where the scene registered it; not hashed
	Failure  string // if not empty: why this frame cannot be rendered; the rest of the frame may then be incomplete
	Camera   Camera
	Lights   []LightID
	Things   []Placement
	Settings Settings
}

// Placement is one thing standing in the scene. Points map by scale, then the turns about x, y and z, then the move to At.
type Placement struct {
	Name string // unique in the frame when not empty
	Mesh MeshID
	// Materials holds one material for the whole mesh, or one per slot of the mesh.
	Materials []MaterialID
	At        [3]float64 // metres
	Turn      [3]float64 // degrees about x, then y, then z
	Scale     [3]float64 // factors, none zero
	Hidden    bool       // not seen by the camera
	NoShadow  bool       // casts no shadow
}

// Camera looks from Position to Target.
type Camera struct {
	Position, Target [3]float64 // metres
	Up               [3]float64 // need not be perpendicular to the view
	Projection       Projection
	FocalMM          float64    // perspective: focal length, millimetres, > 0
	SensorMM         float64    // perspective: sensor width, millimetres, > 0
	Height           float64    // orthographic: height of what is seen, metres, > 0
	FNumber          float64    // aperture, focal length over its diameter; 0 is a pinhole
	FocusDistance    float64    // metres along the view to the plane in focus; 0 means the target's distance
	Shift            [2]float64 // moves the window that the picture shows, in its widths and heights; + is right and up
}

// Projection is how a camera maps the scene to the picture.
type Projection uint8

// The projections.
const (
	Perspective Projection = iota
	Orthographic
)

// Settings are how a frame is rendered and written.
type Settings struct {
	Width, Height int     // pixels, [1, 16384]
	Samples       int     // camera rays a pixel, [1, 65536]; the most, where Noise is given
	Noise         float64 // a pixel takes no more rays when its standard error is below this, in CIE L*; [0.01, 50], or 0: all take Samples
	LightSamples  int     // shadow rays a camera ray and area light, [1, 1024]
	Seed          uint32
	Filter        Filter
	Exposure      float64 // stops; every light value is multiplied by 2^Exposure
	Tone          Tone
	White         float64 // tone "reinhard": the luminance that becomes white, > 0
	Background    Background
	Passes        []Pass   // further planes beside the picture, in order, none twice
	Formats       []Format // files to write, in order, none twice, at least one
}

// Filter is the pixel filter.
type Filter uint8

// The filters. BlackmanHarris has a radius of 1.5 pixels; Box is the pixel's own square.
const (
	BlackmanHarris Filter = iota
	BoxFilter
)

// Tone is the curve from exposed linear light to display light.
type Tone uint8

// The tone curves of the render model.
const (
	ToneShoulder Tone = iota // identity up to 0.8, then compressed
	ToneNeutral              // Khronos PBR Neutral
	ToneClip
	ToneReinhard
	ToneACES
)

// Pass is a plane of its own beside the picture.
type Pass uint8

// The passes. The four components sum to the picture, before tone.
const (
	PassDiffuse Pass = iota
	PassSpecular
	PassAmbient
	PassEmission
	PassDepth   // metres from the camera along the view axis, mean over the covered part; 0 where nothing is
	PassNormal  // world space, unit, mean over the covered part; 0 where nothing is
	PassSamples // camera rays that the pixel took
	PassNoise   // estimated standard error of the pixel, in CIE L* at the frame's exposure
)

// Format is a kind of picture file.
type Format uint8

// The picture formats.
const (
	FormatPNG     Format = iota // 8 bits
	FormatPNG16                 // 16 bits
	FormatEXR                   // float32
	FormatEXRHalf               // float16
)
