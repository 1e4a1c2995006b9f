package widgets

import (
	"reflect"
	"strings"
	"testing"
)

func TestSplitRows(t *testing.T) {
	cases := []struct {
		name, text string
		want       [][]string
	}{
		{"tabs", "5\t20.1\t180\n7\t14\t0", [][]string{{"5", "20.1", "180"}, {"7", "14", "0"}}},
		{"tabs, decimal comma", "5\t20,1\t-180\r\n7\t14,25\t0\r\n", [][]string{{"5", "20.1", "-180"}, {"7", "14.25", "0"}}},
		{"semicolons, decimal comma", "5;20,1;180\n7; 14,25; 0", [][]string{{"5", "20.1", "180"}, {"7", "14.25", "0"}}},
		{"commas and points", "5,20.1,180", [][]string{{"5", "20.1", "180"}}},
		{"commas, whole numbers", "5,20,180", [][]string{{"5", "20", "180"}}},
		{"commas and blanks", "5, 20, 180", [][]string{{"5", "20", "180"}}},
		{"decimal commas parted by comma and blank", "5, 20,1, 180", [][]string{{"5", "20.1", "180"}}},
		{"blanks", "5  20,1   180", [][]string{{"5", "20.1", "180"}}},
		{"one number", "20,1", [][]string{{"20.1"}}},
		{"a heading", "Order\tCurrent, %\tAngle\n5\t20\t0", [][]string{{"5", "20", "0"}}},
		{"empty lines", "\n\n5\t20\n  \n7\t14\n\n", [][]string{{"5", "20"}, {"7", "14"}}},
		{"an empty cell at the end", "5\t20\t\n7\t14\t0", [][]string{{"5", "20"}, {"7", "14", "0"}}},
		{"an empty cell in the middle", "5\t\t180", [][]string{{"5", "", "180"}}},
		{"old Macintosh line ends", "5\t20\r7\t14", [][]string{{"5", "20"}, {"7", "14"}}},
		{"words among numbers", "5\tabout 20\t0", [][]string{{"5", "about 20", "0"}}},
		{"nothing", "  \n", nil},
	}
	for _, c := range cases {
		if got := SplitRows(c.text); !reflect.DeepEqual(got, c.want) {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func TestPointNumber(t *testing.T) {
	for text, want := range map[string]string{
		"12,5": "12.5", " 12.5 ": "12.5", "1.234,5": "1234.5", "1,234.5": "1234.5", "1 250": "1250", "1\u202f250,5": "1250.5",
		"\u22123,2": "-3.2", "6e": "6e", "abc": "abc", "": "", "1e3": "1e3", "1,2,3": "1,2,3", "630 kVA": "630 kVA", "inf": "inf", "NaN": "NaN", "0x10": "0x10", "1e999": "1e999", "0,4": "0.4",
		"12,500,000.5": "12500000.5",
	} {
		if got := PointNumber(text); got != want {
			t.Errorf("%q became %q, want %q", text, got, want)
		}
	}
}

// What is joined comes apart the same, and no text breaks the reader.
func FuzzSplitRows(f *testing.F) {
	for _, seed := range []string{"5\t20,1\t180", "5;20;1", "a, b", ",;\t", "1.234,5 7", "\x00\xff"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		rows := SplitRows(text)
		for _, row := range rows {
			for _, cell := range row {
				if strings.ContainsAny(cell, "\t\n\r") && !strings.ContainsAny(strings.TrimSpace(cell), "\t\n\r") {
					t.Errorf("cell %q of %q", cell, text)
				}
			}
		}
		PointNumber(text)
	})
}
