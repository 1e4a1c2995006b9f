package widgets

import (
	"image/color"

	"codeberg.org/go-fonts/liberation/liberationmonoregular"
	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansbolditalic"
	"codeberg.org/go-fonts/liberation/liberationsansitalic"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"

	"quietbus/assets"
)

// Least and greatest type scale, and the one of the meeting view, which is read
// from across a table.
const (
	LeastType    = 0.8
	GreatestType = 2.0
	MeetingType  = 1.4
)

// Step is the grid that spacing keeps to, in window units.
const Step float32 = 8

// Target is the least side of anything to hit with a pointer.
const Target float32 = 24

// Theme is the look of the window, from one palette and one type scale. It
// ignores the system's light or dark setting: the application chooses.
type Theme struct {
	dark bool
	size float32
}

// NewTheme returns a theme. Type scale 1 is normal; it is kept within
// LeastType and GreatestType. Spacing does not grow with it.
func NewTheme(dark bool, typeScale float32) *Theme {
	return &Theme{dark: dark, size: min(max(typeScale, LeastType), GreatestType)}
}

// Dark tells whether this is the dark twin.
func (t *Theme) Dark() bool { return t.dark }

// TypeScale returns the factor on type sizes.
func (t *Theme) TypeScale() float32 { return t.size }

// Palette returns the colours behind the theme.
func (t *Theme) Palette() assets.Palette {
	if t.dark {
		return assets.Dark
	}
	return assets.Light
}

// Color implements fyne.Theme.
func (t *Theme) Color(name fyne.ThemeColorName, _ fyne.ThemeVariant) color.Color {
	p := t.Palette()
	switch name {
	case theme.ColorNameBackground:
		return p.Ground
	case theme.ColorNameForeground:
		return textInk(p.Ink)
	case theme.ColorNameButton, theme.ColorNameMenuBackground, theme.ColorNameHeaderBackground:
		return p.Surface
	case theme.ColorNameOverlayBackground:
		return p.Ground
	case theme.ColorNameInputBackground:
		return mix(p.Surface, p.Ground, 0.4)
	case theme.ColorNameDisabled:
		return mix(p.Muted, p.Ground, 0.35)
	case theme.ColorNameDisabledButton:
		return mix(p.Surface, p.Ground, 0.5)
	case theme.ColorNamePlaceHolder:
		return p.Muted
	case theme.ColorNamePrimary, theme.ColorNameHyperlink, theme.ColorNameSuccess:
		return p.Accent
	case theme.ColorNameForegroundOnPrimary, theme.ColorNameForegroundOnError,
		theme.ColorNameForegroundOnSuccess, theme.ColorNameForegroundOnWarning:
		return p.Ground
	case theme.ColorNameError, theme.ColorNameWarning:
		return p.Over
	case theme.ColorNameFocus:
		return fade(p.Accent, 0x59)
	case theme.ColorNameSelection:
		return fade(p.Accent, 0x40)
	case theme.ColorNameHover:
		return fade(p.Ink, 0x12)
	case theme.ColorNamePressed:
		return fade(p.Ink, 0x26)
	case theme.ColorNameInputBorder:
		return mix(p.Muted, p.Ground, 0.3)
	case theme.ColorNameSeparator:
		return p.Grid
	case theme.ColorNameScrollBar:
		return fade(p.Muted, 0xB0)
	case theme.ColorNameScrollBarBackground:
		return fade(p.Grid, 0x60)
	case theme.ColorNameShadow:
		return color.NRGBA{A: 0x30}
	}
	return textInk(p.Ink)
}

// textInk is a colour of text that is all but opaque. The toolkit (2.7.1) fades
// the shortcuts in menus to the low byte of 95 % of a sixteen-bit alpha, which
// leaves a fifth of an opaque colour; of this alpha it leaves nearly all.
type textInk color.NRGBA

// RGBA implements color.Color.
func (c textInk) RGBA() (r, g, b, a uint32) {
	r, g, b, _ = color.NRGBA(c).RGBA()
	return min(r, textAlpha), min(g, textAlpha), min(b, textAlpha), textAlpha
}

const textAlpha = 0xFEBB // 0.95 of it is 0xF1FE

// Font implements fyne.Theme.
func (t *Theme) Font(style fyne.TextStyle) fyne.Resource {
	switch {
	case style.Symbol:
		return theme.DefaultTheme().Font(style)
	case style.Monospace:
		return fontMono
	case style.Bold && style.Italic:
		return fontBoldItalic
	case style.Bold:
		return fontBold
	case style.Italic:
		return fontItalic
	}
	return fontRegular
}

// Resources are compared by identity in the toolkit's caches, so there is one of
// each.
var (
	fontRegular    = fyne.NewStaticResource("LiberationSans-Regular.ttf", liberationsansregular.TTF)
	fontBold       = fyne.NewStaticResource("LiberationSans-Bold.ttf", liberationsansbold.TTF)
	fontItalic     = fyne.NewStaticResource("LiberationSans-Italic.ttf", liberationsansitalic.TTF)
	fontBoldItalic = fyne.NewStaticResource("LiberationSans-BoldItalic.ttf", liberationsansbolditalic.TTF)
	fontMono       = fyne.NewStaticResource("LiberationMono-Regular.ttf", liberationmonoregular.TTF)
)

// Icon implements fyne.Theme.
func (t *Theme) Icon(name fyne.ThemeIconName) fyne.Resource {
	return theme.DefaultTheme().Icon(name)
}

// Size implements fyne.Theme. There are four sizes of type.
func (t *Theme) Size(name fyne.ThemeSizeName) float32 {
	switch name {
	case theme.SizeNameCaptionText:
		return 12 * t.size
	case theme.SizeNameText:
		return 14 * t.size
	case theme.SizeNameSubHeadingText:
		return 18 * t.size
	case theme.SizeNameHeadingText:
		return 24 * t.size
	case theme.SizeNameInlineIcon:
		return 20 * t.size
	case theme.SizeNamePadding:
		return Step / 2
	case theme.SizeNameInnerPadding:
		return Step
	case theme.SizeNameLineSpacing:
		return Step / 2
	case theme.SizeNameInputRadius, theme.SizeNameSelectionRadius:
		return 2
	}
	return theme.DefaultTheme().Size(name)
}

// paletteOf returns the palette that a widget is shown in.
func paletteOf(w fyne.CanvasObject) assets.Palette {
	if t, ok := theme.CurrentForWidget(w).(interface{ Palette() assets.Palette }); ok {
		return t.Palette()
	}
	if a := fyne.CurrentApp(); a != nil && a.Settings().ThemeVariant() == theme.VariantDark {
		return assets.Dark
	}
	return assets.Light
}

// sizeOf returns a size of the theme that a widget is shown in.
func sizeOf(w fyne.CanvasObject, name fyne.ThemeSizeName) float32 {
	return theme.CurrentForWidget(w).Size(name)
}

// typeScaleOf returns the factor on type sizes that a widget is shown in, for
// what is drawn to match the text beside it.
func typeScaleOf(w fyne.CanvasObject) float32 {
	return sizeOf(w, theme.SizeNameText) / 14
}

// mix returns a colour a part of the way from one to another.
func mix(from, to color.NRGBA, part float64) color.NRGBA {
	at := func(a, b uint8) uint8 { return uint8(float64(a) + (float64(b)-float64(a))*part + 0.5) }
	return color.NRGBA{at(from.R, to.R), at(from.G, to.G), at(from.B, to.B), 0xFF}
}

// fade returns a colour with the given alpha.
func fade(c color.NRGBA, alpha uint8) color.NRGBA {
	c.A = alpha
	return c
}
