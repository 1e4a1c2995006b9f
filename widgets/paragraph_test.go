package widgets

import (
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

func TestWrapText(t *testing.T) {
	test.NewTempApp(t)
	fyne.CurrentApp().Settings().SetTheme(NewTheme(false, 1))
	width := func(s string) float32 { return fyne.MeasureText(s, 14, fyne.TextStyle{}).Width }
	for _, c := range []struct {
		text  string
		width float32
		most  int
		want  string
	}{
		{"one two three", width("one two"), 0, "one two|three"},
		{"one two three", 1e6, 0, "one two three"},
		{"limit of 12 % here", width("12 % here"), 0, "limit of|12 % here"},
		{"a\nb c", 1e6, 0, "a|b c"},
		{"at 0.4\u00a0kV now", width("0.4\u00a0kV") + 1, 0, "at|0.4\u00a0kV|now"},
		{"unbreakable", width("unbre"), 0, "unbre|akabl|e"},
		{"", 100, 0, ""},
		{"one two three four", width("one two..."), 1, "one two..."},
		{"one two", width("one two"), 1, "one two"},
	} {
		if got := strings.Join(wrapText(c.text, c.width, 14, fyne.TextStyle{}, c.most), "|"); got != c.want {
			t.Errorf("%q at %.0f: %q, want %q", c.text, c.width, got, c.want)
		}
	}
	// Even a width for nothing ends.
	if n := len(wrapText("abc", 0.1, 14, fyne.TextStyle{}, 0)); n != 3 {
		t.Errorf("%d lines", n)
	}
}
