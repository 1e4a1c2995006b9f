package handout

import (
	"bytes"
	"compress/zlib"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"unicode/utf16"
)

// pdfText returns the text of a PDF: by poppler's pdftotext where it is
// installed, else by reading the page streams as this package writes them.
func pdfText(t *testing.T, raw []byte) string {
	t.Helper()
	tool, err := exec.LookPath("pdftotext")
	if err != nil {
		return streamText(t, raw)
	}
	path := filepath.Join(t.TempDir(), "page.pdf")
	if err := os.WriteFile(path, raw, 0o600); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(tool, "-layout", "-enc", "UTF-8", path, "-").Output()
	if err != nil {
		t.Fatalf("pdftotext: %v", err)
	}
	return string(out)
}

var (
	stream = regexp.MustCompile(`(?s)stream\n(.*?)\nendstream`)
	shown  = regexp.MustCompile(`(?s)BT [-0-9.]+ ([-0-9.]+) Td \((.*?[^\\]|)\) Tj ET`)
)

// streamText joins the text that the streams show, a line for each height.
func streamText(t *testing.T, raw []byte) string {
	t.Helper()
	var b strings.Builder
	for _, m := range stream.FindAllSubmatch(raw, -1) {
		z, err := zlib.NewReader(bytes.NewReader(m[1]))
		if err != nil {
			continue
		}
		page, err := io.ReadAll(z)
		if err != nil {
			continue
		}
		height := ""
		for _, s := range shown.FindAllSubmatch(page, -1) {
			if h := string(s[1]); h != height {
				b.WriteByte('\n')
				height = h
			}
			b.WriteString(decoded(s[2]))
		}
	}
	return b.String()
}

var escaped = strings.NewReplacer(`\\`, `\`, `\(`, `(`, `\)`, `)`, `\r`, "\r")

func decoded(text []byte) string {
	raw := escaped.Replace(string(text))
	var units []uint16
	for i := 0; i+1 < len(raw); i += 2 {
		units = append(units, uint16(raw[i])<<8|uint16(raw[i+1]))
	}
	return string(utf16.Decode(units))
}

// TestStreamText compares the two ways to read a page.
func TestStreamText(t *testing.T) {
	if _, err := exec.LookPath("pdftotext"); err != nil {
		t.Skip("pdftotext is not installed")
	}
	b := testBook()
	b.paragraph(span{b.body, "Voltage THD (AVATAR) 3.15 % – 45 °C, 35 mm², 2 Ω"})
	var raw bytes.Buffer
	if _, err := b.WriteTo(&raw); err != nil {
		t.Fatal(err)
	}
	a, z := strings.TrimSpace(pdfText(t, raw.Bytes())), strings.TrimSpace(streamText(t, raw.Bytes()))
	if a != z || !strings.Contains(a, "2 Ω") {
		t.Errorf("pdftotext reads %q, the streams hold %q", a, z)
	}
}
