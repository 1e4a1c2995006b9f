//go:build !headless

package main

import (
	"fmt"
	"path/filepath"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"quietbus/study"
)

// menuPart is the main menu with its shortcuts.
type menuPart struct {
	w     *Window
	shown string // what the menu was built from, to rebuild it only when that changes
}

func newMenuPart(w *Window) *menuPart { return &menuPart{w: w} }

func ctrl(key fyne.KeyName) fyne.Shortcut {
	return &desktop.CustomShortcut{KeyName: key, Modifier: fyne.KeyModifierShortcutDefault}
}

func ctrlShift(key fyne.KeyName) fyne.Shortcut {
	return &desktop.CustomShortcut{KeyName: key, Modifier: fyne.KeyModifierShortcutDefault | fyne.KeyModifierShift}
}

// item is a menu item with an optional shortcut.
func item(label string, shortcut fyne.Shortcut, f func()) *fyne.MenuItem {
	i := fyne.NewMenuItem(label, f)
	i.Shortcut = shortcut
	return i
}

// refresh brings the menu up to date with history, selection and files.
func (m *menuPart) refresh() {
	w := m.w
	w.refreshTools()
	recent := w.recent.Files()
	now := fmt.Sprint(w.project.CanUndo(), "|", w.project.CanRedo(), "|", recent, "|", w.sel, "|", w.look.dark, w.look.scale)
	if now == m.shown {
		return
	}
	m.shown = now
	w.win.SetMainMenu(fyne.NewMainMenu(m.file(recent), m.edit(), m.view(), m.help()))
}

func (m *menuPart) file(recent []string) *fyne.Menu {
	w := m.w
	files := item("Open recent", nil, nil)
	var sub []*fyne.MenuItem
	for _, path := range recent {
		sub = append(sub, item(filepath.Base(path)+"   ("+filepath.Dir(path)+")", nil, func() { w.open(path) }))
	}
	files.ChildMenu = fyne.NewMenu("", sub...)
	files.Disabled = len(sub) == 0
	quit := item("Quit", ctrl(fyne.KeyQ), w.close)
	quit.IsQuit = true
	paper := item("Paper", nil, nil)
	paper.ChildMenu = fyne.NewMenu("", m.paper("A4", "a4"), m.paper("Letter", "letter"))
	return fyne.NewMenu("File",
		item("New study...", ctrl(fyne.KeyN), w.newStudy),
		item("Empty study", nil, func() { w.guard(func() { w.adopt(NewProject(blankStudy())) }) }),
		item("Open...", ctrl(fyne.KeyO), w.openDialog),
		files,
		item("Demo study", nil, func() { w.guard(func() { w.adopt(w.demo()) }) }),
		fyne.NewMenuItemSeparator(),
		item("Save", ctrl(fyne.KeyS), func() { w.save(nil) }),
		item("Save as...", ctrlShift(fyne.KeyS), func() { w.saveAs(nil) }),
		fyne.NewMenuItemSeparator(),
		item("Export handout...", ctrl(fyne.KeyE), w.export),
		paper,
		fyne.NewMenuItemSeparator(),
		quit,
	)
}

func (m *menuPart) paper(label, value string) *fyne.MenuItem {
	prefs := m.w.app.Preferences()
	i := item(label, nil, func() {
		prefs.SetString("paper", value)
		m.shown = ""
		m.refresh()
	})
	i.Checked = prefs.StringWithFallback("paper", "a4") == value
	return i
}

func (m *menuPart) edit() *fyne.Menu {
	w := m.w
	undo := item(trimmed("Undo "+w.project.CanUndo()), &fyne.ShortcutUndo{}, w.undo)
	undo.Disabled = w.project.CanUndo() == ""
	redo := item(trimmed("Redo "+w.project.CanRedo()), &fyne.ShortcutRedo{}, w.redo)
	redo.Disabled = w.project.CanRedo() == ""
	add := item("Add", nil, nil)
	add.ChildMenu = fyne.NewMenu("", m.kinds()...)
	name := w.sel.item()
	change := item(trimmed("Edit "+name), &desktop.CustomShortcut{KeyName: fyne.KeyReturn, Modifier: fyne.KeyModifierShortcutDefault}, func() { w.edit(w.sel.item()) })
	change.Disabled = name == ""
	remove := item(trimmed("Remove "+name), &desktop.CustomShortcut{KeyName: fyne.KeyDelete, Modifier: fyne.KeyModifierShortcutDefault}, func() { w.remove(w.sel.item()) })
	remove.Disabled = name == ""
	return fyne.NewMenu("Edit", undo, redo, fyne.NewMenuItemSeparator(),
		add, change, remove, fyne.NewMenuItemSeparator(),
		item("Title block and settings...", nil, w.editTitle))
}

// kinds offers an item of each kind to add at the selected bus.
func (m *menuPart) kinds() []*fyne.MenuItem {
	var items []*fyne.MenuItem
	for _, k := range study.Kinds() {
		items = append(items, item(capital(k.Singular)+"...", nil, func() { m.w.add(k.Kind, "") }))
	}
	return items
}

func (m *menuPart) view() *fyne.Menu {
	w := m.w
	light := item("Light", nil, func() { w.look.setDark(false) })
	dark := item("Dark", nil, func() { w.look.setDark(true) })
	light.Checked, dark.Checked = !w.look.dark, w.look.dark
	full := item("Full screen", &desktop.CustomShortcut{KeyName: fyne.KeyF, Modifier: fyne.KeyModifierShortcutDefault | fyne.KeyModifierShift},
		func() { w.win.SetFullScreen(!w.win.FullScreen()) })
	items := []*fyne.MenuItem{light, dark, fyne.NewMenuItemSeparator()}
	for i, name := range evidenceNames {
		key := fyne.KeyName(fmt.Sprint(i + 1))
		items = append(items, item(name, ctrl(key), func() { w.evidence.turn(name) }))
	}
	size := item("Type size", nil, nil)
	var sizes []*fyne.MenuItem
	for _, scale := range typeScales {
		i := item(fmt.Sprintf("%.0f %%", 100*scale), nil, func() { w.look.setScale(scale) })
		i.Checked = scale == w.look.scale
		sizes = append(sizes, i)
	}
	size.ChildMenu = fyne.NewMenu("", sizes...)
	items = append(items, fyne.NewMenuItemSeparator(), size, item("Tidy the single-line", ctrl(fyne.KeyT), w.tidy), full)
	return fyne.NewMenu("View", items...)
}

func (m *menuPart) help() *fyne.Menu {
	w := m.w
	return fyne.NewMenu("Help",
		item("What you see", &desktop.CustomShortcut{KeyName: fyne.KeySlash, Modifier: fyne.KeyModifierShortcutDefault}, w.guide),
		item("About Quietbus", nil, w.about))
}

// undo takes the last edit back; a text field that has the focus takes back
// its own typing instead.
func (w *Window) undo() {
	if field, ok := w.win.Canvas().Focused().(fyne.Shortcutable); ok {
		field.TypedShortcut(&fyne.ShortcutUndo{})
		return
	}
	if name := w.project.Undo(); name != "" {
		w.changed()
		w.status.Say("Undone: " + name)
	}
}

func (w *Window) redo() {
	if field, ok := w.win.Canvas().Focused().(fyne.Shortcutable); ok {
		field.TypedShortcut(&fyne.ShortcutRedo{})
		return
	}
	if name := w.project.Redo(); name != "" {
		w.changed()
		w.status.Say("Done again: " + name)
	}
}

// about shows name, version and cautions.
func (w *Window) about() {
	meta := w.app.Metadata()
	name, version := meta.Name, meta.Version
	if meta.ID == "" || name == "" { // FyneApp.toml was not found by the toolkit
		m := readMeta()
		name, version = m.Name, m.Version
	}
	w.tell("About "+name, fmt.Sprintf("%s %s\nHarmonic studies of electrical installations.\n\n%s", name, version, cautions))
}

// cautions are said in the window and, in the handout's own words, on paper.
const cautions = `Results are calculations from the data entered; where the data are assumed, so are the results. ` +
	`They do not replace measurement, nor the judgement of a licensed practitioner. ` +
	`Local codes, the network operator's rules and the standards' own text come first: limit values marked "memory" are to be confirmed against the document. ` +
	`Capacitors and filters hold dangerous charge; work on them only isolated, discharged and earthed.`

// guide says in three lines what the window shows.
func (w *Window) guide() {
	w.tell("What you see", `Top: the verdict at each assessment point, now and before. Click a sentence to see its cause.

Middle: the single-line, where a click selects a bus or an item and a double-click opens its sheet; beside it the evidence, before (warm grey) beside after (blue-green). Double-click a figure to see it alone.

Bottom: the measures. Flip a switch and watch.`)
}
