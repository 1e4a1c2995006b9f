//go:build !headless

package main

import (
	"errors"
	"fmt"
	"os"
	"runtime"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/app"
)

// openWindow opens the window with a study file, or with the demo when path is
// empty, and returns when it is closed. This file alone imports the toolkit's
// driver, so that everything else builds and is tested without it.
func openWindow(path string) error {
	if runtime.GOOS == "linux" && os.Getenv("DISPLAY") == "" {
		return errors.New("there is no display to open a window on (DISPLAY is not set); " +
			"the commands handout and check work without one, see quietbus help")
	}
	w, err := newWindowOn(app.NewWithID(readMeta().ID))
	if err != nil {
		return err
	}
	w.Start(path)
	w.win.ShowAndRun()
	return nil
}

// newWindowOn builds the window. The driver panics when it cannot open the
// display; that is told in words.
func newWindowOn(a fyne.App) (w *Window, err error) {
	defer func() {
		if r := recover(); r != nil {
			if !strings.Contains(fmt.Sprint(r), "GLFW") {
				panic(r)
			}
			err = fmt.Errorf("no window can be opened on the display %q: %v; "+
				"the commands handout and check work without one, see quietbus help", os.Getenv("DISPLAY"), r)
		}
	}()
	return NewWindow(a, fyne.Do), nil
}
