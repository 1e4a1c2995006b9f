package handout

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"quietbus/study/figure"
)

func names(t *testing.T, dir string) []string {
	t.Helper()
	var list []string
	err := filepath.WalkDir(dir, func(path string, d os.DirEntry, err error) error {
		if err == nil && !d.IsDir() {
			rel, _ := filepath.Rel(dir, path)
			list = append(list, filepath.ToSlash(rel))
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return list
}

func TestStore(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "folder")
	first := []file{{"a.txt", []byte("one")}, {"figures/b.svg", []byte("two")}, {"figures/c.svg", []byte("three")}, {"figures/d.svg", []byte("four")}}
	if err := store(dir, first); err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(names(t, dir), " "); got != "CONTENTS.txt a.txt figures/b.svg figures/c.svg figures/d.svg" {
		t.Fatalf("stored: %s", got)
	}
	// A file of the reader's own and one that was changed stay; one that no
	// longer belongs to the handout goes.
	for name, text := range map[string]string{"mine.txt": "mine", "figures/c.svg": "edited"} {
		if err := os.WriteFile(filepath.Join(dir, filepath.FromSlash(name)), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if err := store(dir, []file{{"a.txt", []byte("uno")}, {"figures/b.svg", []byte("dos")}}); err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(names(t, dir), " "); got != "CONTENTS.txt a.txt figures/b.svg figures/c.svg mine.txt" {
		t.Fatalf("after the second time: %s", got)
	}
	if raw, _ := os.ReadFile(filepath.Join(dir, "a.txt")); string(raw) != "uno" {
		t.Errorf("a.txt holds %q", raw)
	}
}

// TestStoreFails wants the folder named, and the earlier files whole.
func TestStoreFails(t *testing.T) {
	dir := t.TempDir()
	blocked := filepath.Join(dir, "blocked")
	if err := os.WriteFile(blocked, nil, 0o644); err != nil {
		t.Fatal(err)
	}
	err := store(filepath.Join(blocked, "out"), []file{{"a.txt", nil}})
	if err == nil || !strings.Contains(err.Error(), filepath.Join(blocked, "out")) || !strings.Contains(err.Error(), "choose another folder") {
		t.Errorf("a folder inside a file: %v", err)
	}
	good := filepath.Join(dir, "good")
	if err := store(good, []file{{"a.txt", []byte("old")}}); err != nil {
		t.Fatal(err)
	}
	// b.txt cannot be replaced because a folder with something in it is there
	if err := os.MkdirAll(filepath.Join(good, "b.txt", "in the way"), 0o755); err != nil {
		t.Fatal(err)
	}
	err = store(good, []file{{"b.txt", []byte("new")}, {"a.txt", []byte("new")}})
	if err == nil || !strings.Contains(err.Error(), "b.txt") {
		t.Errorf("a folder in the way: %v", err)
	}
	if raw, _ := os.ReadFile(filepath.Join(good, "a.txt")); string(raw) != "old" {
		t.Errorf("a.txt holds %q after a failed write", raw)
	}
	for _, name := range names(t, good) {
		if strings.Contains(name, ".handout-") {
			t.Errorf("temporary file %s is left", name)
		}
	}
	t.Run("without permission", func(t *testing.T) {
		if os.Geteuid() == 0 {
			t.Skip("the superuser may write everywhere")
		}
		locked := filepath.Join(dir, "locked")
		if err := os.Mkdir(locked, 0o555); err != nil {
			t.Fatal(err)
		}
		if err := store(locked, []file{{"a.txt", nil}}); err == nil || !strings.Contains(err.Error(), locked) {
			t.Errorf("the folder is not named: %v", err)
		}
	})
}

func TestFileStems(t *testing.T) {
	var list []drawn
	for _, key := range []string{"spectrum-Board A", "spectrum-Board-A", "Ω/..\\", "", strings.Repeat("x", 200)} {
		list = append(list, drawn{Figure: &figure.Figure{Key: key}})
	}
	got := strings.Join(fileStems(list), " ")
	if want := "spectrum-board-a spectrum-board-a-2 figure figure-2 " + strings.Repeat("x", 80); got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
