//go:build !headless

package main

import (
	"bytes"
	"errors"
	"fmt"
	"image/png"
	"os"
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/storage"
	"fyne.io/fyne/v2/widget"
	"github.com/google/renameio/v2/maybe"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"

	"quietbus/study/figure"
)

// fileDPI is the resolution of a figure saved as PNG.
const fileDPI = 200

// figureMenu offers what can be done with a figure.
func (w *Window) figureMenu(f *figure.Figure, at fyne.Position) {
	if f == nil {
		return
	}
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("",
		item("Save this figure...", nil, func() { w.saveFigure(f) }),
		item("Copy its caption", nil, func() { w.app.Clipboard().SetContent(f.Title + ". " + f.Caption) }),
	), w.win.Canvas(), at)
}

// saveFigure asks for a file; its ending says the form.
func (w *Window) saveFigure(f *figure.Figure) {
	if f == nil {
		return
	}
	d := dialog.NewFileSave(func(out fyne.URIWriteCloser, err error) {
		if err != nil {
			w.fail("The figure cannot be saved", err)
			return
		}
		if out == nil {
			return
		}
		out.Close()
		path := out.URI().Path()
		data, err := encodeFigure(f, filepath.Ext(path))
		if err == nil {
			err = maybe.WriteFile(path, data, 0o644)
		} else {
			os.Remove(path) // the empty file that the dialog made
		}
		if err != nil {
			w.fail("The figure cannot be saved", err)
			return
		}
		w.status.Say("Figure saved as " + path)
	}, w.win)
	d.SetFilter(storage.NewExtensionFileFilter([]string{".svg", ".png"}))
	d.SetFileName(f.Key + ".svg")
	w.place(d, "Save the figure as (.svg or .png)")
	d.Show()
}

// encodeFigure draws a figure as on paper, in the form that a file name's
// ending asks for.
func encodeFigure(f *figure.Figure, ext string) ([]byte, error) {
	w, h := f.Size.X, f.Size.Y
	var out bytes.Buffer
	var err error
	switch strings.ToLower(ext) {
	case ".svg":
		c := vgsvg.New(w, h)
		f.Draw(draw.NewCanvas(c, w, h), figure.Print())
		_, err = c.WriteTo(&out)
	case ".png":
		c := vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(fileDPI))
		f.Draw(draw.New(c), figure.Print())
		err = png.Encode(&out, c.Image())
	default:
		return nil, errors.New("a figure is saved as .svg or .png: give the file name one of these endings; as PDF it is in the handout")
	}
	if err != nil {
		return nil, fmt.Errorf("figure %s: %w", f.Key, err)
	}
	return out.Bytes(), nil
}
