//go:build headless

package main

import "errors"

// openWindow of a build without the graphics driver: go build -tags headless
// makes a program for servers that needs no C compiler.
func openWindow(string) error {
	return errors.New("this is a build without a window; the commands handout and check are here, see quietbus help")
}
