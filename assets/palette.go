// Package assets holds what the window and the paper share: colours, fonts,
// the icon.
package assets

import "image/color"

// Palette is one set of colours. Window theme and figure style both read it,
// so that a client who saw the screen knows the paper. Pass and fail are never
// told by colour alone.
type Palette struct {
	Ground  color.NRGBA // the page
	Surface color.NRGBA // cards and sheets
	Ink     color.NRGBA // text and axes
	Muted   color.NRGBA // secondary text
	Grid    color.NRGBA // thin rules
	Before  color.NRGBA // warm grey, thin or hollow
	After   color.NRGBA // deep blue-green, solid
	Limit   color.NRGBA // dark step line
	Over    color.NRGBA // hatching over a limit, with the word "over"
	Accent  color.NRGBA // focus, selection
}

// Light is the paper-white palette, also used in print.
var Light = Palette{
	Ground:  color.NRGBA{0xFC, 0xFB, 0xF8, 0xFF},
	Surface: color.NRGBA{0xF3, 0xF1, 0xEB, 0xFF},
	Ink:     color.NRGBA{0x1B, 0x1D, 0x1F, 0xFF},
	Muted:   color.NRGBA{0x62, 0x60, 0x5A, 0xFF},
	Grid:    color.NRGBA{0xDD, 0xD9, 0xD0, 0xFF},
	Before:  color.NRGBA{0x94, 0x89, 0x78, 0xFF},
	After:   color.NRGBA{0x0B, 0x5A, 0x6B, 0xFF},
	Limit:   color.NRGBA{0x33, 0x2F, 0x2A, 0xFF},
	Over:    color.NRGBA{0x8A, 0x3A, 0x12, 0xFF},
	Accent:  color.NRGBA{0x0B, 0x5A, 0x6B, 0xFF},
}

// Dark is its twin for a dim room.
var Dark = Palette{
	Ground:  color.NRGBA{0x17, 0x19, 0x1B, 0xFF},
	Surface: color.NRGBA{0x22, 0x25, 0x28, 0xFF},
	Ink:     color.NRGBA{0xEC, 0xE9, 0xE2, 0xFF},
	Muted:   color.NRGBA{0xA5, 0xA1, 0x98, 0xFF},
	Grid:    color.NRGBA{0x3A, 0x3D, 0x40, 0xFF},
	Before:  color.NRGBA{0xB5, 0xA8, 0x93, 0xFF},
	After:   color.NRGBA{0x4F, 0xB3, 0xC4, 0xFF},
	Limit:   color.NRGBA{0xD8, 0xD3, 0xC8, 0xFF},
	Over:    color.NRGBA{0xE8, 0x96, 0x62, 0xFF},
	Accent:  color.NRGBA{0x4F, 0xB3, 0xC4, 0xFF},
}
