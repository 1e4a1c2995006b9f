package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"slices"

	"github.com/adrg/xdg"
	"github.com/google/renameio/v2/maybe"
)

// stateDir returns where recent files and unsaved work are kept: QUIETBUS_HOME
// when it is set (the tests do), else the user's state folder.
func stateDir() string {
	if dir := os.Getenv("QUIETBUS_HOME"); dir != "" {
		return dir
	}
	return filepath.Join(xdg.StateHome, "quietbus")
}

// maxRecent is how many files the menu offers.
const maxRecent = 10

// Recent is the list of study files used last, newest first. It lives in one
// small file; a missing or damaged one counts as empty.
type Recent struct{ file string }

// NewRecent returns the list kept in a folder.
func NewRecent(dir string) *Recent { return &Recent{filepath.Join(dir, "recent.json")} }

// Files returns the paths that still exist, newest first.
func (r *Recent) Files() []string {
	var list []string
	data, err := os.ReadFile(r.file)
	if err != nil || json.Unmarshal(data, &list) != nil {
		return nil
	}
	return slices.DeleteFunc(list, func(path string) bool {
		_, err := os.Stat(path)
		return err != nil
	})
}

// Add puts a path at the top of the list.
func (r *Recent) Add(path string) error {
	path = absolute(path)
	list := slices.DeleteFunc(r.Files(), func(p string) bool { return p == path })
	list = append([]string{path}, list...)
	if len(list) > maxRecent {
		list = list[:maxRecent]
	}
	return writeJSON(r.file, list)
}

// writeJSON writes a small file of our own whole or not at all.
func writeJSON(path string, v any) error {
	data, err := json.MarshalIndent(v, "", "  ")
	if err != nil {
		return err
	}
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		return err
	}
	return maybe.WriteFile(path, append(data, '\n'), 0o644)
}
