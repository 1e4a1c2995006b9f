package handout

import (
	"sort"
	"strings"
	"unicode"
	"unicode/utf8"

	"gonum.org/v1/plot/vg"
)

// span is a piece of a paragraph in one style.
type span struct {
	style style
	text  string
}

// line is a wrapped line: its parts with their distance from the start.
type line struct {
	parts  []part
	width  vg.Length
	height vg.Length
}

type part struct {
	style style
	text  string
	at    vg.Length
}

// wrap breaks spans into lines of at most width w. A line feed in a span ends
// the line; a word wider than w is broken where it must be.
func (b *book) wrap(w vg.Length, spans []span) []line {
	var lines []line
	var now line
	end := func(s style) {
		now.height = max(now.height, s.line())
		lines = append(lines, now)
		now = line{}
	}
	for _, sp := range spans {
		for i, text := range strings.Split(sp.text, "\n") {
			if i > 0 {
				end(sp.style)
			}
			for _, word := range words(text) {
				b.place(&now, w, sp.style, word, end)
			}
		}
	}
	if len(now.parts) > 0 || len(lines) == 0 {
		s := b.body
		if len(spans) > 0 {
			s = spans[len(spans)-1].style
		}
		end(s)
	}
	return lines
}

// place adds a word with its leading spaces to the line, which it ends first
// when there is no room.
func (b *book) place(now *line, w vg.Length, s style, word string, end func(style)) {
	bare := strings.TrimLeft(word, " ")
	if len(now.parts) == 0 {
		word = bare
	}
	if len(now.parts) > 0 && now.width+b.fonts.width(s, word) > w {
		if bare == "" {
			return // no space stands at the end of a line
		}
		end(s)
		word = bare
	}
	for b.fonts.width(s, word) > w { // a word wider than the line
		runes := []rune(word)
		n := max(1, sort.Search(len(runes), func(n int) bool { return b.fonts.width(s, string(runes[:n+1])) > w }))
		if n == len(runes) {
			break
		}
		now.add(b, s, string(runes[:n]))
		end(s)
		word = string(runes[n:])
	}
	if word != "" {
		now.add(b, s, word)
	}
}

// add appends text to the line, to its last part when the style is the same.
func (l *line) add(b *book, s style, text string) {
	l.height = max(l.height, s.line())
	if n := len(l.parts); n > 0 && l.parts[n-1].style == s {
		p := &l.parts[n-1]
		p.text += text
		l.width = p.at + b.fonts.width(s, p.text)
		return
	}
	l.parts = append(l.parts, part{s, text, l.width})
	l.width += b.fonts.width(s, text)
}

// words splits text before the spaces where a line may end: not before a per
// cent sign or a unit, which belong to their number.
func words(text string) []string {
	var out []string
	start := 0
	for i := 0; i < len(text); i++ {
		if text[i] == ' ' && i > start && text[i-1] != ' ' && !glued(text, i) {
			out = append(out, text[start:i])
			start = i
		}
	}
	if start < len(text) {
		out = append(out, text[start:])
	}
	return out
}

// glued reports whether the space at i stands between a number and its unit.
func glued(text string, i int) bool {
	r, _ := utf8.DecodeLastRuneInString(text[:i])
	if !unicode.IsDigit(r) {
		return false
	}
	next, _, _ := strings.Cut(text[i+1:], " ")
	next = strings.TrimRight(next, ".,;:)")
	switch next {
	case "%", "x", "V", "kV", "A", "kA", "Ω", "ohm", "kvar", "kVA", "MVA", "kW", "W", "Hz", "mH", "µH", "µF", "uF", "deg", "°":
		return true
	}
	return false
}
