package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"sync"
	"syscall"
	"time"

	"quietbus/study"
)

// A Keeper writes the unsaved study of this process beside those of others, so
// that a crash loses at most the edit that was being written. Writing happens
// on its own routine; the newest version wins.
type Keeper struct {
	file string

	mu      sync.Mutex
	pending *kept
	drop    bool
	wake    chan struct{}
	done    chan struct{}
	err     error
}

// kept is a recovery file.
type kept struct {
	Path  string          `json:"path"` // the study's own file, "" when it has none
	When  time.Time       `json:"when"`
	Study json.RawMessage `json:"study"`

	study *study.Study
}

// NewKeeper starts keeping in a folder; Close ends it.
func NewKeeper(dir string) *Keeper {
	k := &Keeper{
		file: filepath.Join(dir, fmt.Sprintf("unsaved-%d.json", os.Getpid())),
		wake: make(chan struct{}, 1), done: make(chan struct{}),
	}
	go k.loop()
	return k
}

// Keep has the study written soon. It returns at once.
func (k *Keeper) Keep(path string, s *study.Study) {
	k.ask(func() { k.pending, k.drop = &kept{Path: path, When: time.Now(), study: s}, false })
}

// Drop removes what was kept: the study is saved, or given up on purpose.
func (k *Keeper) Drop() {
	k.ask(func() { k.pending, k.drop = nil, true })
}

// Close finishes what is to be written and stops. It returns the last error of
// writing, so that a full disk does not stay unnoticed.
func (k *Keeper) Close() error {
	close(k.wake)
	<-k.done
	return k.Err()
}

// Err returns the error of the last write.
func (k *Keeper) Err() error {
	k.mu.Lock()
	defer k.mu.Unlock()
	return k.err
}

func (k *Keeper) ask(change func()) {
	k.mu.Lock()
	change()
	k.mu.Unlock()
	select {
	case k.wake <- struct{}{}:
	default:
	}
}

func (k *Keeper) loop() {
	defer close(k.done)
	for range k.wake {
		k.flush()
	}
	k.flush()
}

func (k *Keeper) flush() {
	k.mu.Lock()
	next, drop := k.pending, k.drop
	k.pending, k.drop = nil, false
	k.mu.Unlock()
	var err error
	switch {
	case drop:
		if err = os.Remove(k.file); os.IsNotExist(err) {
			err = nil
		}
	case next != nil:
		if next.Study, err = json.Marshal(next.study); err == nil {
			err = writeJSON(k.file, next)
		}
	default:
		return
	}
	k.mu.Lock()
	k.err = err
	k.mu.Unlock()
}

// Recovered is unsaved work that a process left behind.
type Recovered struct {
	File  string // the recovery file, to be removed once dealt with
	Path  string // the study's own file, "" when it had none
	When  time.Time
	Study *study.Study
}

// Leftovers returns the unsaved work of processes that are gone, newest first.
// Recovery files that cannot be read are left alone.
func Leftovers(dir string) []Recovered {
	files, _ := filepath.Glob(filepath.Join(dir, "unsaved-*.json"))
	var found []Recovered
	for _, file := range files {
		number := strings.TrimSuffix(strings.TrimPrefix(filepath.Base(file), "unsaved-"), ".json")
		pid, err := strconv.Atoi(number)
		if err != nil || running(pid) {
			continue
		}
		data, err := os.ReadFile(file)
		if err != nil {
			continue
		}
		var k kept
		if json.Unmarshal(data, &k) != nil {
			continue
		}
		s, err := study.Read(bytes.NewReader(k.Study))
		if err != nil {
			continue
		}
		found = append(found, Recovered{File: file, Path: k.Path, When: k.When, Study: s})
	}
	slices.SortFunc(found, func(a, b Recovered) int { return b.When.Compare(a.When) })
	return found
}

// Project returns the recovered work as an unsaved project on its own file.
func (r Recovered) Project() *Project {
	p := NewProject(r.Study)
	p.path = r.Path
	p.disk, _ = digest(r.Path)
	p.MarkUnsaved()
	return p
}

// running reports whether a process of that number is alive. This process
// counts as gone: what carries its number is from an earlier one.
func running(pid int) bool {
	if pid == os.Getpid() {
		return false
	}
	process, err := os.FindProcess(pid)
	if err != nil {
		return false
	}
	err = process.Signal(syscall.Signal(0))
	return err == nil || os.IsPermission(err)
}
