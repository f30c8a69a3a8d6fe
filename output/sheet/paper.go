package sheet

import (
	"image/color"

	"lampbook/engine/model"
)

// ink is which of a paper's inks a mark takes.
type ink uint8

const (
	firstInk  ink = iota // values, title
	secondInk            // names of tags, captions, foot
	thirdInk             // lines
)

// ground is a paper with its inks, all neutral, as sRGB codes.
type ground struct {
	paper uint8
	inks  [3]uint8
}

// grounds are the papers. Grey is the 18 % card (L* 49.5), light L* 95, dark L* 12.
//
// Inks stand 100, 75 and 55 % of the way from ground to white (light paper: to black), but never nearer to the ground than their
// contrast allows: 4.5 : 1 for text, 3 : 1 for lines (WCAG 2.2, 1.4.3 and 1.4.11). On the grey card that leaves one light text ink,
// white; so there the second is the other end, black (4.6 : 1), and the third stands at 67 %.
var grounds = [...]ground{
	model.PaperGrey:  {118, [3]uint8{255, 0, 210}},
	model.PaperLight: {241, [3]uint8{0, 60, 108}},
	model.PaperDark:  {31, [3]uint8{255, 199, 154}},
}

func grey(code uint8) color.NRGBA { return color.NRGBA{code, code, code, 255} }

func (g ground) color(i ink) color.NRGBA { return grey(g.inks[i]) }
