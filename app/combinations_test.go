//go:build !headless

package main

import (
	"slices"
	"strings"
	"testing"
	"time"

	"quietbus/widgets"
)

// The strip: pointing at a set shows the screen as it would be without changing
// the study, leaving it brings the own state back, a click adopts the set as
// one step that undo takes back.
func TestCombinationStrip(t *testing.T) {
	b := newBed(t)
	b.evidence.turn(combinationsName)
	timeout := time.After(20 * time.Second)
	for b.evidence.sets.known() == nil || b.evidence.sets.known().Whole == nil {
		select {
		case f := <-b.queue:
			f()
		case <-timeout:
			t.Fatal("the sets never came")
		}
	}
	page := b.evidence.sets
	x := page.known()
	mark := func(name string) widgets.Hot {
		for _, h := range page.strip.picture.Hots() {
			if mask, ok := maskOf(h); ok && x.SetName(mask) == name {
				return h
			}
		}
		t.Fatalf("no mark for %s", name)
		return widgets.Hot{}
	}
	page.strip.picture.Capture(1) // draws
	set := mark("Filter 5")
	if !strings.Contains(set.Text, "meets every limit") {
		t.Errorf("read-out %q", set.Text)
	}
	page.hovered(set)
	for b.picture == nil || !slices.Equal(b.picture.On, []string{"Filter 5"}) {
		select {
		case f := <-b.queue:
			f()
		case <-timeout:
			t.Fatal("no preview came")
		}
	}
	if on := b.project.Study().OnMeasures(); len(on) != 0 {
		t.Fatalf("the preview switched %v on", on)
	}
	page.hovered(widgets.Hot{})
	b.settle()
	if len(b.picture.On) != 0 {
		t.Errorf("after leaving the strip %v is shown", b.picture.On)
	}
	page.tapped(set)
	b.settle()
	if on := b.project.Study().OnMeasures(); !slices.Equal(on, []string{"Filter 5"}) {
		t.Errorf("adopted: %v", on)
	}
	b.undo()
	b.settle()
	if on := b.project.Study().OnMeasures(); len(on) != 0 {
		t.Errorf("after undo: %v", on)
	}
	if page.least.Disabled() {
		t.Fatal("no least-cost set to adopt")
	}
	page.adoptNamed(true)
	b.settle()
	if !b.picture.After.MeetsAll() {
		t.Error("the least-cost set does not meet the limits")
	}
}
