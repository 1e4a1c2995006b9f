//go:build !headless

package main

import (
	"image/color"
	"os"
	"path/filepath"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"quietbus/study"
	"quietbus/widgets"
)

// A Window is the workbench: one open project, its newest picture, and the
// parts that show it. Its methods run on the main routine.
type Window struct {
	app  fyne.App
	win  fyne.Window
	post func(func()) // runs a function on the main routine; fyne.Do

	project *Project
	recent  *Recent
	keeper  *Keeper
	eval    *Evaluator
	sets    *Exploring
	picture *Picture // newest shown; its study may be older than the project's
	sel     selection

	look     *look
	menu     *menuPart
	tools    *widgets.ToolRow
	tabs     *tabRow // single-line or items
	verdict  *widgets.VerdictLine
	line     *linePart
	items    *itemsPart
	evidence *evidencePart
	measures *measuresPart
	status   *widgets.StatusLine

	pictures   int
	listsStale bool
	dialog     string // title of the dialog that is open, for the report
}

// NewWindow builds the window; Start opens a study in it. Work on other
// routines comes back through post: fyne.Do, or a queue in tests.
func NewWindow(a fyne.App, post func(func())) *Window {
	dir := stateDir()
	w := &Window{app: a, post: post, win: a.NewWindow("Quietbus"), recent: NewRecent(dir), keeper: NewKeeper(dir)}
	w.project = NewProject(blankStudy())
	w.look = newLook(w)
	w.menu = newMenuPart(w)
	w.tools = widgets.NewToolRow()
	w.tabs = newTabRow("Single-line", "Items")
	w.verdict = widgets.NewVerdictLine(w.verdictTapped)
	w.line = newLinePart(w)
	w.items = newItemsPart(w)
	w.evidence = newEvidencePart(w)
	w.measures = newMeasuresPart(w)
	w.status = newStatus()
	w.tools.OnHint = w.status.Say
	w.eval = NewEvaluator(post, w.show, w.worth)
	w.sets = NewExploring(post, w.evidence.sets.show)
	w.build()
	w.win.SetMaster()
	w.win.SetPadded(false)
	w.win.Resize(fyne.NewSize(1280, 770))
	w.win.SetOnDropped(w.dropped)
	w.win.SetCloseIntercept(w.close)
	return w
}

// build lays the parts out: verdict on top; single-line or items on the left;
// evidence above measures on the right; status at the foot.
func (w *Window) build() {
	head := container.NewBorder(nil, nil, w.tabs.row(), nil, w.tools)
	left := container.NewBorder(head, nil, nil, nil, w.tabs.stack(w.line.object(), w.items.object()))
	right := container.NewBorder(nil, container.New(besideLayout{}, w.measures.object(), w.evidence.sets.small.body), nil, nil, w.evidence.object())
	middle := container.NewHSplit(left, right)
	middle.Offset = 0.46
	top := container.NewVBox(gap(4), w.verdict, widget.NewSeparator())
	bottom := container.NewVBox(widget.NewSeparator(), w.status)
	w.win.SetContent(container.New(&told{layout.NewBorderLayout(top, bottom, nil, nil), w.report}, top, bottom, middle))
}

// told is a layout that tells when it has laid out: the report names places.
type told struct {
	inner fyne.Layout
	then  func()
}

func (t *told) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	t.inner.Layout(objects, size)
	t.then()
}

func (t *told) MinSize(objects []fyne.CanvasObject) fyne.Size { return t.inner.MinSize(objects) }

// gap is an empty strip of a height.
func gap(height float32) fyne.CanvasObject {
	r := canvas.NewRectangle(color.Transparent)
	r.SetMinSize(fyne.NewSize(0, height))
	return r
}

// wide asks for a width.
func wide(width float32) fyne.CanvasObject {
	r := canvas.NewRectangle(color.Transparent)
	r.SetMinSize(fyne.NewSize(width, 0))
	return r
}

// Start opens the study named on the command line, else the demo, and offers
// what a crash left unsaved.
func (w *Window) Start(path string) {
	nothing := w.project
	if path != "" {
		w.open(path)
	}
	if w.project == nothing {
		w.adopt(w.demo())
	}
	if prefs := w.app.Preferences(); path == "" && !prefs.Bool("guided") {
		prefs.SetBool("guided", true)
		w.guide()
	}
	w.offerRecovery()
}

// adopt makes a project the open one.
func (w *Window) adopt(p *Project) {
	w.project = p
	w.sel = firstSelection(p.Study())
	w.picture = nil
	w.measures.worth = nil
	w.line.reset()
	w.refreshVerdict()
	w.changed()
}

// do makes a named edit and tells whether it was possible; an error is shown
// and changes nothing.
func (w *Window) do(name string, change func(*study.Study) error) bool {
	if err := w.project.Do(name, change); err != nil {
		w.fail("That change cannot be made", err)
		return false
	}
	w.changed()
	return true
}

// changed follows any change of the project. It asks for a new picture at once
// and turns the switches; lists and menus follow after the picture.
func (w *Window) changed() {
	w.sel = w.sel.in(w.project.Study())
	w.ask()
	if w.project.Dirty() {
		w.keeper.Keep(w.project.Path(), w.project.Study())
	} else {
		w.keeper.Drop()
	}
	w.listsStale = true
	w.measures.refresh()
	w.retitle()
	w.eval.Await(sameFrame)
}

// sameFrame is how long a change waits for its picture. Beyond it the window
// goes on, and the picture comes when it is ready.
const sameFrame = 12 * time.Millisecond

// refreshLists brings lists and menus up to date with the project.
func (w *Window) refreshLists() {
	if !w.listsStale {
		return
	}
	w.listsStale = false
	w.items.refresh()
	w.menu.refresh()
}

// ask submits a job for the project as it is now.
func (w *Window) ask() {
	s := w.project.Study()
	w.sets.Explore(w.project.Base())
	w.eval.Submit(Job{Study: w.project.Base(), On: s.OnMeasures(), ScanBus: w.sel.Bus, Asked: time.Now()})
}

// show puts a picture on the screen. The evaluator calls it with the newest
// one only.
func (w *Window) show(p *Picture) {
	start := time.Now()
	w.picture = p
	w.pictures++
	w.refreshVerdict()
	line := w.line.refresh()
	panels := w.evidence.refresh()
	w.measures.refresh()
	w.status.SetCheck(checkText(p))
	shown := time.Now()
	w.refreshLists()
	timing("flip", "numbers", p.Took, "four panels", panels, "single-line", line,
		"picture in all", shown.Sub(start), "switch to picture", shown.Sub(p.Asked), "lists and menus after it", time.Since(shown))
	w.report()
}

// worth shows what each measure buys, which comes a little after the picture.
func (w *Window) worth(found *Worths) {
	w.measures.worth = found
	w.measures.refresh()
}

// refreshPictures draws everything that has the palette in it anew.
func (w *Window) refreshPictures() {
	w.line.refresh()
	w.evidence.refresh()
	w.measures.repaint()
}

// pick changes what the evidence is about.
func (w *Window) pick(sel selection) {
	if sel == w.sel || sel.Bus == "" {
		return
	}
	scan := sel.Bus != w.sel.Bus
	w.sel = sel
	w.line.refresh()
	w.evidence.refresh()
	w.items.follow()
	w.menu.refresh()
	if scan {
		w.ask()
	}
}

// retitle writes the window's title.
func (w *Window) retitle() {
	title := w.project.Name() + " - Quietbus"
	if w.project.Dirty() {
		title = w.project.Name() + " (unsaved) - Quietbus"
	}
	if w.win.Title() != title {
		w.win.SetTitle(title)
	}
}

// refreshTools brings the buttons beside the menu up to date.
func (w *Window) refreshTools() {
	w.tools.SetTools([]widgets.Tool{
		{Icon: theme.FolderOpenIcon(), Hint: "Open a study (Ctrl+O)", Gap: true, OnTapped: w.openDialog},
		{Icon: theme.DocumentSaveIcon(), Hint: "Save the study (Ctrl+S)", Disabled: !w.project.Dirty(), OnTapped: func() { w.save(nil) }},
		{Icon: theme.ContentUndoIcon(), Hint: trimmed("Undo "+w.project.CanUndo()) + " (Ctrl+Z)", Disabled: w.project.CanUndo() == "", OnTapped: w.undo},
		{Icon: theme.ContentRedoIcon(), Hint: trimmed("Redo "+w.project.CanRedo()) + " (Ctrl+Y)", Disabled: w.project.CanRedo() == "", OnTapped: w.redo},
		{Label: "Add", Icon: theme.ContentAddIcon(), Hint: "Add an item at the selected bus", OnTapped: w.addMenu},
		{Label: "Edit", Icon: theme.DocumentCreateIcon(), Hint: trimmed("Edit "+w.sel.item()) + " (Ctrl+Return)", Disabled: w.sel.item() == "", OnTapped: func() { w.edit(w.sel.item()) }},
		{Label: "Handout", Icon: theme.DocumentPrintIcon(), Hint: "Write the printed summary, figures and tables (Ctrl+E)", OnTapped: w.export},
	})
}

// addMenu offers the kinds of item to add.
func (w *Window) addMenu() {
	button := w.tools.Button("Add")
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(button)
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", w.menu.kinds()...), w.win.Canvas(), at.AddXY(0, button.Size().Height))
}

// report writes the window's report for a driver outside.
func (w *Window) report() {
	if !reporting() {
		return
	}
	r := Report{Title: w.win.Title(), Path: w.project.Path(), Unsaved: w.project.Dirty(), Pictures: w.pictures,
		On: []string{}, Dialog: w.dialog, Switches: w.measures.places()}
	if p := w.picture; p != nil {
		r.On = append(r.On, p.On...)
		if p.Err != nil {
			r.Error = p.Err.Error()
		} else {
			r.Verdict = verdictTexts(beforeOf(p), p.After)
		}
	}
	r.write()
}

// demo returns the demonstration study as a project without a file, so that it
// is not overwritten by accident.
func (w *Window) demo() *Project {
	s, err := demoStudy()
	if err != nil {
		w.fail("The demo study cannot be opened", err)
		return NewProject(blankStudy())
	}
	return NewProject(s)
}

// folder returns where file dialogs start.
func (w *Window) folder() string {
	if p := w.project.Path(); p != "" {
		return filepath.Dir(p)
	}
	if files := w.recent.Files(); len(files) > 0 {
		return filepath.Dir(files[0])
	}
	dir, err := os.UserHomeDir()
	if err != nil {
		return "."
	}
	return dir
}
