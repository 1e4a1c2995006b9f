//go:build !headless

package main

import (
	"fyne.io/fyne/v2/theme"

	"quietbus/assets"
	"quietbus/study/figure"
	"quietbus/widgets"
)

// look is light or dark, and how large the type is; both are remembered.
type look struct {
	w     *Window
	dark  bool
	scale float32
}

// typeScales are the steps that the View menu offers.
var typeScales = []float32{1, 1.2, widgets.MeetingType, widgets.GreatestType}

func newLook(w *Window) *look {
	prefs := w.app.Preferences()
	system := "light"
	if w.app.Settings().ThemeVariant() == theme.VariantDark {
		system = "dark"
	}
	l := &look{w: w, dark: prefs.StringWithFallback("theme", system) == "dark",
		scale: float32(prefs.FloatWithFallback("typeScale", 1))}
	w.app.Settings().SetTheme(widgets.NewTheme(l.dark, l.scale))
	return l
}

// setDark turns the window dark or light.
func (l *look) setDark(dark bool) {
	l.dark = dark
	word := "light"
	if dark {
		word = "dark"
	}
	l.w.app.Preferences().SetString("theme", word)
	l.apply()
}

// setScale changes the size of all type.
func (l *look) setScale(scale float32) {
	l.scale = scale
	l.w.app.Preferences().SetFloat("typeScale", float64(scale))
	l.apply()
}

func (l *look) apply() {
	l.w.app.Settings().SetTheme(widgets.NewTheme(l.dark, l.scale))
	l.w.refreshPictures()
	l.w.menu.refresh()
}

// palette returns the colours of the window and its figures.
func (l *look) palette() assets.Palette {
	if l.dark {
		return assets.Dark
	}
	return assets.Light
}

// style returns the look of the figures in the evidence.
func (l *look) style() *figure.Style {
	if l.dark {
		return figure.Dark().Scaled(panelType * float64(l.scale))
	}
	return figure.Light().Scaled(panelType * float64(l.scale))
}

// lineStyle returns the look of the single-line, whose type scales with its
// own zoom.
func (l *look) lineStyle() *figure.Style {
	if l.dark {
		return figure.Dark()
	}
	return figure.Light()
}

// panelType is how much larger type in a panel is than on paper, which is held
// nearer to the eye.
const panelType = 1.15
