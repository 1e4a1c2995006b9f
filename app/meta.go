package main

import (
	"os"
	"path/filepath"
	"strings"

	"github.com/BurntSushi/toml"
)

// Meta is what FyneApp.toml says about the program.
type Meta struct {
	Name    string
	ID      string
	Version string
	Icon    string // path of the icon
}

// readMeta reads FyneApp.toml from where the toolkit looks for it: the working
// directory under "go run", else the folder of the executable. Without the file
// the version is unknown.
func readMeta() Meta {
	m := Meta{Name: "Quietbus", ID: "app.quietbus.workbench", Version: "unknown"}
	var file struct{ Details Meta }
	dir := homeDir()
	if _, err := toml.DecodeFile(filepath.Join(dir, "FyneApp.toml"), &file); err != nil {
		return m
	}
	d := file.Details
	for _, v := range []struct{ to, from *string }{{&m.Name, &d.Name}, {&m.ID, &d.ID}, {&m.Version, &d.Version}} {
		if *v.from != "" {
			*v.to = *v.from
		}
	}
	if d.Icon != "" {
		m.Icon = filepath.Join(dir, d.Icon)
	}
	return m
}

// homeDir returns the folder that FyneApp.toml is looked for in.
func homeDir() string {
	exe, err := os.Executable()
	work, _ := os.Getwd()
	if err != nil || strings.HasPrefix(exe, os.TempDir()) || strings.Contains(exe, "go-build") {
		return work
	}
	return filepath.Dir(exe)
}
