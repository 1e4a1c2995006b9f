package main

import (
	"crypto/sha256"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"

	"quietbus/study"
)

// A Project is the study that is open, with its history and its file. Every
// change makes a new snapshot; a snapshot is never written to again, so the
// evaluator and the figures may read it while the next edit goes on.
//
// A Project belongs to the main routine.
type Project struct {
	path  string // "" until it is saved for the first time
	now   snapshot
	saved *study.Study // the snapshot that the file holds, nil when none does
	undo  []step
	redo  []step
	disk  [32]byte // digest of the file as last read or written
}

// A snapshot is one version of the study. Two snapshots with the same base
// differ at most in what changes no result but by switches: switch positions
// and the places on the single-line.
type snapshot struct {
	study *study.Study
	base  *study.Study
}

// A step is an edit that can be taken back: its name and what was before it.
type step struct {
	name string
	was  snapshot
}

// NewProject returns a project for a study that has no file yet.
func NewProject(s *study.Study) *Project {
	return &Project{now: snapshot{s, s}, saved: s}
}

// OpenProject reads a study file. The error names item and field where it can
// be told. A study that can be read but has mistakes in it comes back together
// with its study.FieldErrors, so that the caller may offer to mend it.
func OpenProject(path string) (*Project, error) {
	s, err := study.Open(path)
	if err != nil {
		return nil, err
	}
	p := NewProject(s)
	p.path = absolute(path)
	p.disk, _ = digest(p.path)
	if problems := s.Validate(); len(problems) > 0 {
		return p, study.FieldErrors(problems)
	}
	return p, nil
}

// Study returns the newest snapshot. It must not be written to.
func (p *Project) Study() *study.Study { return p.now.study }

// Base returns the snapshot in which something other than switch positions and
// drawing last changed. It is another one after each such change, and comes
// back when that change is undone.
func (p *Project) Base() *study.Study { return p.now.base }

// Path returns the file, "" when there is none yet.
func (p *Project) Path() string { return p.path }

// Name returns what the window's title calls the study.
func (p *Project) Name() string {
	if p.path != "" {
		return filepath.Base(p.path)
	}
	if t := p.now.study.Title.Study; t != "" {
		return t
	}
	return "New study"
}

// Dirty reports whether there is something to save.
func (p *Project) Dirty() bool { return p.now.study != p.saved }

// Do makes a named change. When change fails the study is as it was.
func (p *Project) Do(name string, change func(s *study.Study) error) error {
	next := p.now.study.Clone()
	if err := change(next); err != nil {
		return err
	}
	p.push(name, snapshot{next, next})
	return nil
}

// Switch sets which measures are on. It is an edit like others, but keeps the
// base.
func (p *Project) Switch(name string, on []string) {
	next := p.now.study.Clone()
	for i := range next.Measures {
		next.Measures[i].On = slices.Contains(on, next.Measures[i].Name)
	}
	p.push(name, snapshot{next, p.now.base})
}

// Arrange sets the places of buses on the single-line. Like a switch it changes
// no result.
func (p *Project) Arrange(name string, drawing map[string]study.Point) {
	next := p.now.study.Clone()
	next.Drawing = drawing
	p.push(name, snapshot{next, p.now.base})
}

func (p *Project) push(name string, next snapshot) {
	p.undo = append(p.undo, step{name, p.now})
	p.redo = nil
	p.now = next
}

// Undo takes the last edit back and returns its name, "" when there is none.
func (p *Project) Undo() string { return turn(&p.undo, &p.redo, &p.now) }

// Redo makes the last undone edit again and returns its name, "" when there is
// none.
func (p *Project) Redo() string { return turn(&p.redo, &p.undo, &p.now) }

func turn(from, to *[]step, now *snapshot) string {
	if len(*from) == 0 {
		return ""
	}
	last := (*from)[len(*from)-1]
	*from = (*from)[:len(*from)-1]
	*to = append(*to, step{last.name, *now})
	*now = last.was
	return last.name
}

// CanUndo returns the name of the edit that Undo would take back.
func (p *Project) CanUndo() string { return last(p.undo) }

// CanRedo returns the name of the edit that Redo would make again.
func (p *Project) CanRedo() string { return last(p.redo) }

func last(steps []step) string {
	if len(steps) == 0 {
		return ""
	}
	return steps[len(steps)-1].name
}

// ErrNoPath is returned by Save for a study that has no file yet.
var ErrNoPath = errors.New("the study has no file yet: choose one with Save as")

// ChangedOutside is returned by Save when the file is no longer what was read
// or written last.
type ChangedOutside struct{ Path string }

func (e *ChangedOutside) Error() string {
	return fmt.Sprintf("%s was changed by another program since it was opened here", e.Path)
}

// Save writes the study to its file. Unless force is set it refuses with
// *ChangedOutside when another program has written the file in the meantime.
func (p *Project) Save(force bool) error {
	if p.path == "" {
		return ErrNoPath
	}
	if !force {
		if now, err := digest(p.path); err == nil && now != p.disk {
			return &ChangedOutside{p.path}
		}
	}
	return p.write(p.path)
}

// SaveAs writes the study to another file, which becomes its file.
func (p *Project) SaveAs(path string) error { return p.write(absolute(path)) }

func (p *Project) write(path string) error {
	if err := study.Save(path, p.now.study); err != nil {
		return err
	}
	p.path, p.saved = path, p.now.study
	p.disk, _ = digest(path)
	return nil
}

// MarkUnsaved makes the project dirty, as a recovered study is.
func (p *Project) MarkUnsaved() { p.saved = nil }

// digest returns the SHA-256 of a file.
func digest(path string) ([32]byte, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return [32]byte{}, err
	}
	return sha256.Sum256(data), nil
}

func absolute(path string) string {
	if abs, err := filepath.Abs(path); err == nil {
		return abs
	}
	return path
}
