package figure

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// The strip has a place for each mark, the cheaper further left, the better
// further down; what passes is named, what is on is ringed.
func TestStrip(t *testing.T) {
	marks := []SetMark{
		{ID: "0", Cost: 0, Share: 3.4, Cause: "resonance", Now: true, Detail: "no measure"},
		{ID: "1", Cost: 21000, Share: 0.52, Named: "least cost"},
		{ID: "2", Cost: 800, Share: 1.4, Cause: "limit"},
		{ID: "3", Cost: 40000, Share: 0.3, Cause: "stress", Faded: true},
		{ID: "4", Cost: 40000, Share: math.NaN(), Cause: "no solution"},
	}
	sk := sketchOf(Strip(marks, ""), 480, 240)
	at := map[string][2]float64{}
	for _, h := range sk.hots {
		if h.Role == "set" {
			at[h.ID] = [2]float64{float64(h.Rect.Min.X+h.Rect.Max.X) / 2, float64(h.Rect.Min.Y+h.Rect.Max.Y) / 2}
		}
	}
	if len(at) != 4 {
		t.Fatalf("%d places, want 4: a set without a share has none", len(at))
	}
	if !(at["0"][0] < at["2"][0] && at["2"][0] < at["1"][0] && at["1"][0] < at["3"][0]) {
		t.Errorf("cost is not along: %v", at)
	}
	if !(at["0"][1] > at["2"][1] && at["2"][1] > at["1"][1] && at["1"][1] > at["3"][1]) {
		t.Errorf("share is not up: %v", at)
	}
	all := ""
	for _, x := range sk.texts {
		all += x.text + "|"
	}
	for _, want := range []string{"least cost", "on now", "limit, 100", "meets everything"} {
		if !strings.Contains(all, want) {
			t.Errorf("no %q among %s", want, all)
		}
	}
	if sk := sketchOf(Strip(nil, "12 sets so far"), 480, 240); len(sk.texts) == 0 {
		t.Error("nothing said while there is nothing to show")
	}
}

// Thousands of marks keep their figure readable: those on the same spot are
// drawn once, the most important of them.
func TestStripOfThousands(t *testing.T) {
	var marks []SetMark
	for i := range 4096 {
		marks = append(marks, SetMark{ID: fmt.Sprint(i), Cost: float64(i % 64), Share: 0.5 + float64(i/64)/64, Cause: "limit", Faded: true})
	}
	marks[2000].Cause, marks[2000].Faded, marks[2000].Named = "", false, "least cost"
	sk := sketchOf(Strip(marks, ""), 400, 160)
	found, places := false, 0
	for _, h := range sk.hots {
		if h.Role == "set" {
			places++
			found = found || h.ID == "2000"
		}
	}
	if !found || places > 4096/2 {
		t.Errorf("%d places drawn, the named one: %v", places, found)
	}
}
