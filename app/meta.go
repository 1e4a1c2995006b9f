package main

import (
	"os"
	"path/filepath"

	"github.com/BurntSushi/toml"
)

// Meta is what FyneApp.toml says about the program.
type Meta struct {
	Name    string
	ID      string
	Version string
	Icon    string // path of the icon
}

// readMeta reads FyneApp.toml. Without the file the version is unknown.
func readMeta() Meta {
	m := Meta{Name: "Quietbus", ID: "app.quietbus.workbench", Version: "unknown"}
	var file struct{ Details Meta }
	dir, found := homeDir()
	if !found {
		return m
	}
	if _, err := toml.DecodeFile(filepath.Join(dir, metaFile), &file); err != nil {
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

const metaFile = "FyneApp.toml"

// homeDir returns the folder that holds FyneApp.toml: that of the executable,
// else the working directory, as under "go run".
func homeDir() (dir string, found bool) {
	work, _ := os.Getwd()
	exe, _ := os.Executable()
	for _, dir := range []string{filepath.Dir(exe), work} {
		if _, err := os.Stat(filepath.Join(dir, metaFile)); err == nil {
			return dir, true
		}
	}
	return "", false
}
