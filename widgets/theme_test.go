package widgets

import (
	"image/color"
	"math"
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/test"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"golang.org/x/image/font/sfnt"

	"quietbus/assets"
)

// luminance and contrast are those of W3C, Web Content Accessibility Guidelines
// 2.1, "relative luminance" and "contrast ratio" (from memory).
func luminance(c color.Color) float64 {
	r, g, b, _ := c.RGBA()
	part := func(v uint32) float64 {
		s := float64(v) / 0xffff
		if s <= 0.03928 {
			return s / 12.92
		}
		return math.Pow((s+0.055)/1.055, 2.4)
	}
	return 0.2126*part(r) + 0.7152*part(g) + 0.0722*part(b)
}

func contrast(a, b color.Color) float64 {
	x, y := luminance(a), luminance(b)
	return (max(x, y) + 0.05) / (min(x, y) + 0.05)
}

// Text has at least 4.5 to 1 (success criterion 1.4.3), marks and edges of
// controls at least 3 to 1 (1.4.11), in both palettes.
func TestThemeContrast(t *testing.T) {
	if got := contrast(color.Black, color.White); math.Abs(got-21) > 1e-9 {
		t.Fatalf("black on white is %g to 1, by definition 21", got)
	}
	for name, p := range map[string]assets.Palette{"light": assets.Light, "dark": assets.Dark} {
		for _, c := range []struct {
			what       string
			ink, under color.Color
			least      float64
		}{
			{"ink on ground", p.Ink, p.Ground, 7},
			{"ink on surface", p.Ink, p.Surface, 7},
			{"muted on ground", p.Muted, p.Ground, 4.5},
			{"muted on surface", p.Muted, p.Surface, 4.5},
			{"over on ground", p.Over, p.Ground, 4.5},
			{"over on surface", p.Over, p.Surface, 4.5},
			{"after on ground", p.After, p.Ground, 4.5},
			{"ground on after", p.Ground, p.After, 4.5},
			{"focus on ground", p.Accent, p.Ground, 3},
			{"focus on surface", p.Accent, p.Surface, 3},
			{"limit on ground", p.Limit, p.Ground, 3},
			{"before on ground", p.Before, p.Ground, 3},
		} {
			if got := contrast(c.ink, c.under); got < c.least {
				t.Errorf("%s: %s is %.2f to 1, want %g", name, c.what, got, c.least)
			}
		}
	}
}

func TestTheme(t *testing.T) {
	test.NewTempApp(t)
	light, dark := NewTheme(false, 1), NewTheme(true, 1.5)
	if light.Dark() || !dark.Dark() || dark.TypeScale() != 1.5 {
		t.Error("the theme is not what was asked for")
	}
	if NewTheme(false, 9).TypeScale() != GreatestType || NewTheme(false, 0).TypeScale() != LeastType {
		t.Error("the type scale has no bounds")
	}
	if light.Color(theme.ColorNameBackground, theme.VariantDark) != assets.Light.Ground {
		t.Error("the light theme follows the system's setting")
	}
	if light.Size(theme.SizeNamePadding)*1 != dark.Size(theme.SizeNamePadding) {
		t.Error("spacing grows with type")
	}
	if dark.Size(theme.SizeNameText) != 1.5*light.Size(theme.SizeNameText) {
		t.Error("type does not grow")
	}
	names := map[string]bool{}
	for _, style := range []fyne.TextStyle{{}, {Bold: true}, {Italic: true}, {Bold: true, Italic: true}, {Monospace: true}} {
		res := light.Font(style)
		if _, err := sfnt.Parse(res.Content()); err != nil {
			t.Errorf("%s: %v", res.Name(), err)
		}
		names[res.Name()] = true
	}
	if len(names) != 5 {
		t.Errorf("fonts %v", names)
	}
	if light.Icon(theme.IconNameCancel) == nil {
		t.Error("an icon is missing")
	}
	// Digits are tabular: all as wide as a nought.
	for _, style := range []fyne.TextStyle{{}, {Bold: true}, {Italic: true}} {
		zero := fyne.MeasureText("0", 14, style).Width
		for _, d := range "123456789" {
			if w := fyne.MeasureText(string(d), 14, style).Width; w != zero {
				t.Errorf("%v: %c is %g wide, a nought %g", style, d, w, zero)
			}
		}
	}
}

// The shortcuts in menus can be read.
func TestThemeMenuShortcuts(t *testing.T) {
	for _, l := range looks[:2] {
		w := stage(t, l, fyne.NewSize(300, 200), func() fyne.CanvasObject { return container.NewStack() })
		item := fyne.NewMenuItem("Spectrum", func() {})
		item.Shortcut = &desktop.CustomShortcut{KeyName: fyne.Key2, Modifier: fyne.KeyModifierControl}
		widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", item), w.Canvas(), fyne.NewPos(20, 20))
		keep(t, "menu-"+l.name, w.Canvas().Capture())
		found := false
		var walk func(o fyne.CanvasObject)
		walk = func(o fyne.CanvasObject) {
			switch o := o.(type) {
			case *canvas.Text:
				if strings.Contains(o.Text, "Ctrl") || o.Text == "2" {
					found = true
					if _, _, _, a := o.Color.RGBA(); a < 0xE000 {
						t.Errorf("%s: %q has an alpha of %#x", l.name, o.Text, a)
					}
				}
			case *fyne.Container:
				for _, c := range o.Objects {
					walk(c)
				}
			case fyne.Widget:
				for _, c := range test.WidgetRenderer(o).Objects() {
					walk(c)
				}
			}
		}
		walk(w.Canvas().Overlays().Top())
		if !found {
			t.Error("no shortcut is shown")
		}
	}
}

// A change of theme reaches everything that is shown.
func TestThemeChangesWhileShown(t *testing.T) {
	var content *fyne.Container
	build := func() fyne.CanvasObject {
		v := NewVerdictLine(nil)
		v.SetVerdicts(someVerdicts)
		m := NewMeasureRow()
		m.SetMeasures(someMeasures())
		s := NewStatusLine()
		s.SetCheck("solution checked")
		l := NewListPane()
		l.SetGroups(someGroups())
		content = container.NewBorder(container.NewVBox(NewToolRow(Tool{Label: "Open", Icon: theme.FolderOpenIcon()}), v), container.NewVBox(m, s), l, nil, NewPicture(board))
		return content
	}
	size := fyne.NewSize(1000, 700)
	want := stage(t, look{"", true, 1.2, 1}, size, build).Canvas().Capture()
	w := stage(t, plain, size, build)
	w.Canvas().Capture()
	fyne.CurrentApp().Settings().SetTheme(NewTheme(true, 1.2))
	refreshAll(content)
	settle(w)
	settle(w)
	got := w.Canvas().Capture()
	if _, _, far := difference(t, got, want); far > 0.002 {
		t.Errorf("%.2f %% of the window is not as if it had been dark from the start", 100*far)
		keep(t, "theme-got", got)
		keep(t, "theme-want", want)
	}
}

// refreshAll does what the application does when the theme changes.
func refreshAll(o fyne.CanvasObject) {
	o.Refresh()
	if c, ok := o.(*fyne.Container); ok {
		for _, child := range c.Objects {
			refreshAll(child)
		}
	}
}
