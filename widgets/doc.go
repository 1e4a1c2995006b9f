// Package widgets holds the parts a Quietbus window is made of: picture
// panels, verdict line, measure cards, edit sheets, lists.
//
// A widget here knows nothing of a study. It takes plain view models (strings,
// numbers, a function that draws) and reports what the user did through
// callbacks, which run on the main routine. Colours come from the palette of
// the current theme, so one switch turns the whole window dark; type sizes
// come from the theme too, so that one factor scales everything.
//
// Figures are drawn by gonum/plot on a Raster, a vg.Canvas that writes straight
// into a reused pixel buffer: a whole panel is redrawn when something changes.
// What follows the pointer (read-out, outline, focus) is a small object above
// the picture, so hovering redraws nothing.
package widgets
