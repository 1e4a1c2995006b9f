package study

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/google/renameio/v2"
)

// Bytes returns the study as it is written to a file: keys in fixed order,
// indented, ending in a newline, with the present format's number.
func (s *Study) Bytes() ([]byte, error) {
	written := *s
	written.Format = Format
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(&written); err != nil {
		return nil, fmt.Errorf("the study cannot be written: %w", err)
	}
	return b.Bytes(), nil
}

// Previous returns where Save keeps the previous version of a study file.
func Previous(path string) string { return path + ".previous" }

// Save writes the study to path so that nothing is lost whatever happens: to a
// temporary file first, which then takes the old one's place in one step; the
// old one is kept as Previous(path). Permissions stay as they are, a link is
// followed, and a file that is set read-only is left alone.
func Save(path string, s *Study) error {
	data, err := s.Bytes()
	if err != nil {
		return err
	}
	info, err := os.Stat(path)
	if err == nil && info.Mode().Perm()&0o200 == 0 {
		return fmt.Errorf("%s is read-only, so nothing was saved; save under another name, or allow writing", filepath.Base(path))
	}
	old, err := os.ReadFile(path)
	switch {
	case err == nil && !bytes.Equal(old, data):
		if err := renameio.WriteFile(Previous(path), old, info.Mode().Perm()); err != nil {
			return fmt.Errorf("the previous version cannot be kept, so nothing was saved: %w", err)
		}
	case err != nil && !errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("the study cannot be saved: %w", err)
	}
	target := path
	if real, err := filepath.EvalSymlinks(path); err == nil {
		target = real
	}
	if err := renameio.WriteFile(target, data, 0o644); err != nil {
		return fmt.Errorf("the study cannot be saved: %w", err)
	}
	return nil
}
