package widgets

import (
	"testing"

	"gonum.org/v1/plot/vg"
)

// grid places nine hots, 30 points apart, named by column and row from the top
// left.
func grid() []Hot {
	var hots []Hot
	for y := range 3 {
		for x := range 3 {
			p := vg.Point{X: vg.Length(30 * x), Y: vg.Length(90 - 30*y)}
			hots = append(hots, Hot{Rect: vg.Rectangle{Min: p, Max: p.Add(vg.Point{X: 4, Y: 4})}, ID: string(rune('a'+x)) + string(rune('1'+y)), Role: "bus"})
		}
	}
	return hots
}

func TestNeighbour(t *testing.T) {
	hots := grid()
	at := func(id string) Hot {
		for _, h := range hots {
			if h.ID == id {
				return h
			}
		}
		return Hot{}
	}
	for _, c := range []struct {
		from string
		d    direction
		want string
	}{
		{"", direction{1, 0}, "a1"}, {"a1", direction{1, 0}, "b1"}, {"b1", direction{0, -1}, "b2"}, {"b2", direction{-1, 0}, "a2"},
		{"b2", direction{0, 1}, "b1"}, {"b2", direction{1, 0}, "c2"}, {"c3", direction{1, 0}, ""}, {"a3", direction{0, -1}, ""},
	} {
		got, ok := neighbour(hots, at(c.from), c.d)
		if got.ID != c.want || ok != (c.want != "") {
			t.Errorf("from %q by %v: %q, want %q", c.from, c.d, got.ID, c.want)
		}
	}
	// Straight on, although something off the line is a little nearer ahead.
	hots = append(hots, Hot{Rect: vg.Rectangle{Min: vg.Point{X: 45, Y: 75}, Max: vg.Point{X: 49, Y: 79}}, ID: "off", Role: "bus"})
	if got, _ := neighbour(hots, at("b1"), direction{1, 0}); got.ID != "c1" {
		t.Errorf("went to %q", got.ID)
	}
	// Two places of one thing are two places.
	hots = append(hots, Hot{Rect: vg.Rectangle{Min: vg.Point{X: 70, Y: 90}, Max: vg.Point{X: 74, Y: 94}}, ID: "c1", Role: "switch"})
	if got, _ := neighbour(hots, at("c1"), direction{1, 0}); got.Role != "switch" {
		t.Errorf("went to %v", got)
	}
	if _, ok := neighbour(nil, Hot{}, direction{1, 0}); ok {
		t.Error("found a place in an empty picture")
	}
}

func TestHit(t *testing.T) {
	hots := grid()
	if h, _ := hit(hots, vg.Point{X: 32, Y: 92}, 18); h.ID != "b1" {
		t.Errorf("hit %q", h.ID)
	}
	if h, _ := hit(hots, vg.Point{X: 39, Y: 85}, 18); h.ID != "b1" {
		t.Errorf("5 points beside the target: hit %q", h.ID)
	}
	if h, ok := hit(hots, vg.Point{X: 47, Y: 75}, 18); ok {
		t.Errorf("between the targets: hit %q", h.ID)
	}
}
