//go:build !headless

package main

import (
	"os"
	"path/filepath"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/storage"
	"fyne.io/fyne/v2/widget"
	"github.com/google/renameio/v2/maybe"

	"quietbus/study/figure"
	"quietbus/study/handout"
)

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
		data, err := handout.EncodeFigure(f, filepath.Ext(path), time.Now())
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
	d.SetFilter(storage.NewExtensionFileFilter(handout.FigureForms))
	d.SetFileName(f.Key + ".svg")
	w.place(d, "Save the figure as (.svg, .png or .pdf)")
	d.Show()
}
