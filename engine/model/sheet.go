package model

import "strings"

// Sheet is a contact sheet: a pivot of the plan's frames by their tags.
type Sheet struct {
	Name    string   // file name without its ending, as frame names are made; unique among the sheets
	Title   string   // may be empty
	Rows    []string // tag keys whose values make the rows, outermost first; none: the sheet has one axis
	Columns []string // likewise; the key AxisPass stands for each frame's passes
	Pages   []string // likewise; a page for each combination
	// Order gives the values of a tag that come first, in that order; the rest follow as first seen.
	Order   []TagOrder
	Where   []TagChoice // only frames for which every choice holds
	Caption string      // under each tile; {key} stands for a tag's value, {name} for the frame's name; empty: none
	PerLine int         // a sheet with one axis: tiles in a line; 0 means what brings the sheet nearest to √2 : 1
	Tile    [2]int      // pixels that a tile is scaled to, keeping its shape, [MinTile, MaxTile]; 0, 0 means the picture's own
	Paper   Paper
	// Reference says, for some tags, the one value that the tile to compare with has;
	// in its other tags it is like the compared tile. None: no comparison.
	Reference []TagChoice
	Show      ShowKind // ShowDifference needs a Reference
	Pos       Pos      // where the scene registered it
}

// AxisPass is the name that, as a row, column or page, stands for each frame's picture and passes instead of a tag.
const AxisPass = "pass"

// CaptionName is the key that, in a caption, stands for the frame's name.
const CaptionName = "name"

// CaptionPart is a stretch of a caption: text, and the key in braces after it. Key is "" where none follows.
type CaptionPart struct{ Text, Key string }

// CaptionParts cuts the caption up. A brace without its partner, or with nothing in it, is text.
func (s *Sheet) CaptionParts() []CaptionPart {
	var parts []CaptionPart
	for rest := s.Caption; rest != ""; {
		open := strings.IndexByte(rest, '{')
		if open < 0 {
			return append(parts, CaptionPart{rest, ""})
		}
		length := strings.IndexByte(rest[open:], '}')
		if length < 2 {
			parts = append(parts, CaptionPart{rest[:open+1], ""})
			rest = rest[open+1:]
			continue
		}
		parts = append(parts, CaptionPart{rest[:open], rest[open+1 : open+length]})
		rest = rest[open+length+1:]
	}
	return parts
}

// TagOrder is an order of one tag's values.
type TagOrder struct {
	Key    string
	Values []Value
}

// TagChoice admits frames whose tag has one of the values.
type TagChoice struct {
	Key    string
	Values []Value
}

// ShowKind is what stands in the places of a sheet.
type ShowKind uint8

// The kinds: the pictures, or heat maps of their differences from the reference tiles.
const (
	ShowPictures ShowKind = iota
	ShowDifference
)

// Paper is the ground of a sheet.
type Paper uint8

// The papers: 18 % grey, near white for print, near black for projection.
const (
	PaperGrey Paper = iota
	PaperLight
	PaperDark
)
