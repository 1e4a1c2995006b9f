package widgets

import (
	"image"
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg/draw"
)

// A drawing is a small picture that takes no part in focus or pointer.
type drawing struct {
	widget.BaseWidget
	draw   func(c draw.Canvas)
	least  fyne.Size
	raster Raster
	stale  bool
	w, h   int
}

func newDrawing(least fyne.Size, draw func(c draw.Canvas)) *drawing {
	d := &drawing{draw: draw, least: least, stale: true}
	d.ExtendBaseWidget(d)
	return d
}

// Refresh draws anew.
func (d *drawing) Refresh() {
	d.stale = true
	d.BaseWidget.Refresh()
}

// generate draws for the toolkit.
func (d *drawing) generate(w, h int) image.Image {
	if d.stale || w != d.w || h != d.h {
		dpi := float64(UnitDPI)
		if width := d.Size().Width; width > 0 {
			dpi *= float64(w) / float64(width)
		}
		d.raster.Reset(w, h, dpi, color.Transparent)
		if d.draw != nil {
			x, y := d.raster.Size()
			d.draw(draw.NewCanvas(&d.raster, x, y))
		}
		d.stale, d.w, d.h = false, w, h
	}
	return d.raster.Image()
}

// MinSize implements fyne.CanvasObject.
func (d *drawing) MinSize() fyne.Size {
	k := typeScaleOf(d)
	return fyne.NewSize(d.least.Width*k, d.least.Height*k)
}

// CreateRenderer implements fyne.Widget.
func (d *drawing) CreateRenderer() fyne.WidgetRenderer {
	d.ExtendBaseWidget(d)
	r := canvas.NewRaster(d.generate)
	r.ScaleMode = canvas.ImageScalePixels
	return &drawingRenderer{d: d, raster: r}
}

type drawingRenderer struct {
	d      *drawing
	raster *canvas.Raster
}

func (r *drawingRenderer) Layout(size fyne.Size) { r.raster.Resize(size) }

func (r *drawingRenderer) MinSize() fyne.Size { return r.d.MinSize() }

func (r *drawingRenderer) Refresh() { r.raster.Refresh() }

func (r *drawingRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{r.raster} }

func (r *drawingRenderer) Destroy() {}
