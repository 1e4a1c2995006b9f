package main

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// capital starts a word with a capital letter.
func capital(s string) string {
	r, n := utf8.DecodeRuneInString(s)
	if n == 0 {
		return s
	}
	return string(unicode.ToUpper(r)) + s[n:]
}

// count words a number of things: "1 more mistake", "3 more mistakes".
func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// trimmed cuts a menu label that would be too wide.
func trimmed(s string) string {
	s = strings.TrimSpace(s)
	if r := []rune(s); len(r) > 48 {
		return string(r[:47]) + "..."
	}
	return s
}

// short prints a number with three significant digits, without an exponent for
// the sizes met here.
func short(v float64) string {
	s := fmt.Sprintf("%.3g", v)
	if strings.Contains(s, "e") {
		rounded, err := strconv.ParseFloat(s, 64)
		if err != nil {
			return s
		}
		s = strconv.FormatFloat(rounded, 'f', -1, 64)
	}
	return s
}

// grouped prints a whole amount with thin spaces between thousands.
func grouped(v float64) string {
	s := fmt.Sprintf("%.0f", v)
	for i := len(s) - 3; i > 0 && s[i-1] != '-'; i -= 3 {
		s = s[:i] + "\u202f" + s[i:]
	}
	return s
}
