//go:build !headless

package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/storage"
	"fyne.io/fyne/v2/widget"

	"quietbus/study"
	"quietbus/study/handout"
)

// suffix ends the name of a study file.
const suffix = ".study.json"

// open reads a file and makes it the open study. When that fails the study
// that is open stays as it is.
func (w *Window) open(path string) {
	w.guard(func() {
		p, err := OpenProject(path)
		var mistakes study.FieldErrors
		switch {
		case err == nil:
			w.opened(p)
		case errors.As(err, &mistakes) && p != nil:
			w.offerMending(p, mistakes)
		default:
			w.fail("This file cannot be opened", err)
		}
	})
}

func (w *Window) opened(p *Project) {
	if p.Path() != "" {
		if err := w.recent.Add(p.Path()); err != nil {
			fyne.LogError("recent files", err)
		}
	}
	w.adopt(p)
}

// offerMending says what is wrong with a study and leaves it closed unless the
// user wants to mend it here.
func (w *Window) offerMending(p *Project, mistakes study.FieldErrors) {
	w.confirm("This study has mistakes", errorText(mistakes), "Open it to mend", "Leave it closed", func() { w.opened(p) })
}

// guard runs next at once when nothing is unsaved, else after the user has
// saved or given the changes up.
func (w *Window) guard(next func()) {
	if !w.project.Dirty() {
		next()
		return
	}
	w.dialog = "Unsaved changes"
	var d dialog.Dialog
	finish := func(f func()) func() {
		return func() {
			d.Hide()
			w.dialog = ""
			f()
		}
	}
	save := newKeyButton("Save", finish(func() { w.save(next) }))
	save.Importance = widget.HighImportance
	drop := newKeyButton("Give the changes up", finish(next))
	cancel := newKeyButton("Go on working", finish(func() {}))
	text := widget.NewLabel(fmt.Sprintf("%s has changes that are not saved (last: %s).", w.project.Name(), w.lastEdit()))
	text.Wrapping = fyne.TextWrapWord
	d = dialog.NewCustomWithoutButtons(w.dialog, container.NewVBox(text, container.NewHBox(cancel, drop, save)), w.win)
	d.Resize(fyne.NewSize(520, 160))
	d.Show()
	w.win.Canvas().Focus(save)
}

func (w *Window) lastEdit() string {
	if name := w.project.CanUndo(); name != "" {
		return name
	}
	return "recovered work"
}

// save writes the study to its file, asking for one when it has none, then
// runs next.
func (w *Window) save(next func()) {
	err := w.project.Save(false)
	var outside *ChangedOutside
	switch {
	case errors.Is(err, ErrNoPath):
		w.saveAs(next)
		return
	case errors.As(err, &outside):
		w.confirm("The file was changed outside", outside.Error()+".", "Write over it", "Leave it", func() {
			if err := w.project.Save(true); err != nil {
				w.fail("The study cannot be saved", err)
				return
			}
			w.savedThen(next)
		})
		return
	case err != nil:
		w.fail("The study cannot be saved", err)
		return
	}
	w.savedThen(next)
}

func (w *Window) savedThen(next func()) {
	if err := w.recent.Add(w.project.Path()); err != nil {
		fyne.LogError("recent files", err)
	}
	w.keeper.Drop()
	w.menu.refresh()
	w.retitle()
	w.status.Say("Saved " + w.project.Path())
	w.report()
	if next != nil {
		next()
	}
}

func (w *Window) saveAs(next func()) {
	d := dialog.NewFileSave(func(f fyne.URIWriteCloser, err error) {
		if err != nil {
			w.fail("The study cannot be saved", err)
			return
		}
		if f == nil {
			return
		}
		// The toolkit has made the file; we write it ourselves, whole or not at all.
		f.Close()
		path := f.URI().Path()
		if !strings.HasSuffix(path, ".json") {
			os.Remove(path)
			path += suffix
		}
		if err := w.project.SaveAs(path); err != nil {
			w.fail("The study cannot be saved", err)
			return
		}
		w.savedThen(next)
	}, w.win)
	d.SetFilter(storage.NewExtensionFileFilter([]string{".json"}))
	d.SetFileName(fileName(w.project))
	w.place(d, "Save the study as")
	d.Show()
}

// fileName proposes a name for a project's file.
func fileName(p *Project) string {
	if p.Path() != "" {
		return filepath.Base(p.Path())
	}
	name := strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9', r == '-':
			return r
		case r >= 'A' && r <= 'Z':
			return r + 'a' - 'A'
		case r == ' ' || r == '_' || r == '.':
			return '-'
		}
		return -1
	}, p.Study().Title.Study)
	if name = strings.Trim(name, "-"); name == "" {
		name = "new"
	}
	if len(name) > 40 {
		name = strings.TrimRight(name[:40], "-")
	}
	return name + suffix
}

func (w *Window) openDialog() {
	d := dialog.NewFileOpen(func(f fyne.URIReadCloser, err error) {
		if err != nil {
			w.fail("This file cannot be opened", err)
			return
		}
		if f == nil {
			return
		}
		f.Close()
		w.open(f.URI().Path())
	}, w.win)
	d.SetFilter(storage.NewExtensionFileFilter([]string{".json"}))
	w.place(d, "Open a study")
	d.Show()
}

// place gives a file dialog its title, the folder to start in and room to work.
func (w *Window) place(d *dialog.FileDialog, title string) {
	d.SetTitleText(title)
	d.SetView(dialog.ListView)
	if dir, err := storage.ListerForURI(storage.NewFileURI(w.folder())); err == nil {
		d.SetLocation(dir)
	}
	size := w.win.Canvas().Size()
	d.Resize(fyne.NewSize(min(size.Width-80, 1000), min(size.Height-80, 720)))
}

// dropped opens a study that is dropped on the window.
func (w *Window) dropped(_ fyne.Position, files []fyne.URI) {
	if len(files) != 1 || files[0].Scheme() != "file" {
		w.fail("That cannot be opened", errors.New("drop one study file (*"+suffix+") on the window"))
		return
	}
	w.open(files[0].Path())
}

// close asks only when something is unsaved.
func (w *Window) close() {
	w.guard(func() {
		w.eval.Stop()
		w.sets.Stop()
		w.keeper.Drop()
		w.keeper.Close()
		w.win.SetCloseIntercept(nil)
		w.win.Close()
	})
}

// recoverTitle is the title of the dialog that offers unsaved work.
const recoverTitle = "Unsaved work was found"

// offerRecovery offers what an earlier process left unsaved.
func (w *Window) offerRecovery() {
	left := Leftovers(stateDir())
	if len(left) == 0 {
		return
	}
	newest := left[0]
	name := newest.Path
	if name == "" {
		name = newest.Study.Title.Study
	}
	text := fmt.Sprintf("Quietbus ended on %s before %q was saved. Its last edit is kept.",
		newest.When.Format("2 January 15:04"), name)
	w.choose(recoverTitle, text, "Go on with it", func() {
		w.guard(func() {
			w.adopt(newest.Project())
			os.Remove(newest.File)
		})
	}, "Throw it away", func() { os.Remove(newest.File) })
}

// export writes the handout of what is on the screen into a folder.
func (w *Window) export() {
	p := w.picture
	if p == nil || p.After == nil {
		w.fail("There is nothing to hand out yet", errors.New("the study must be solved first: mend what the verdict line says"))
		return
	}
	d := dialog.NewFolderOpen(func(dir fyne.ListableURI, err error) {
		if err != nil {
			w.fail("The handout cannot be written", err)
			return
		}
		if dir == nil {
			return
		}
		w.writeHandout(p, filepath.Join(dir.Path(), strings.TrimSuffix(fileName(w.project), suffix)+"-handout"))
	}, w.win)
	d.SetConfirmText("Write it here")
	w.place(d, "Folder for the handout")
	d.Show()
}

// writeHandout writes the handout off the main routine and says where it is.
func (w *Window) writeHandout(p *Picture, dir string) {
	ctx, cancel := context.WithCancel(context.Background())
	bar := widget.NewProgressBarInfinite()
	wait := dialog.NewCustom("Writing the handout", "Cancel", container.NewVBox(widget.NewLabel(dir), bar), w.win)
	wait.SetOnClosed(cancel)
	wait.Show()
	paper := handout.A4
	if w.app.Preferences().String("paper") == "letter" {
		paper = handout.Letter
	}
	in := handout.Input{Study: w.project.Study(), Before: p.Before, After: p.After, Version: readMeta().Version}
	go func() {
		err := os.MkdirAll(dir, 0o755)
		if err == nil {
			err = guardedHandout(ctx, dir, in, handout.Options{Paper: paper})
		}
		canceled := ctx.Err() != nil
		w.post(func() {
			wait.SetOnClosed(func() {})
			wait.Hide()
			cancel()
			switch {
			case canceled:
				w.status.Say("The handout was cancelled.")
			case err != nil:
				w.fail("The handout cannot be written", err)
			default:
				w.status.Say("Handout written to " + dir)
				w.tell("Handout written", "The summary (handout.pdf), the figures, the tables and results.json are in\n"+dir)
			}
		})
	}()
}

// guardedHandout writes a handout and turns a panic into an error.
func guardedHandout(ctx context.Context, dir string, in handout.Input, opt handout.Options) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = &InternalError{Problem: fmt.Sprint(r)}
		}
	}()
	_, err = handout.Write(ctx, dir, in, opt)
	return err
}
