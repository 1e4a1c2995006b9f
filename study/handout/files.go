package handout

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
)

// file is one file of the handout: its path within the folder, with slashes,
// and its bytes.
type file struct {
	name string
	data []byte
}

// contentsName is the list of the handout's files with their digests. The
// next handout in the same folder reads it to clear away figures and tables
// that no longer belong to the study, if nobody has changed them.
const contentsName = "CONTENTS.txt"

// store writes the files into dir, each under a temporary name first: a disk
// that fails leaves the earlier handout, or whole files, but no half of one.
func store(dir string, files []file) (err error) {
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return fmt.Errorf("the handout's folder %s cannot be made: %w; choose another folder", dir, cause(err))
	}
	temp, err := os.MkdirTemp(dir, ".handout-")
	if err != nil {
		return fmt.Errorf("the handout's folder %s cannot be written: %w; choose another folder or change its permissions", dir, cause(err))
	}
	defer func() {
		if e := os.RemoveAll(temp); err == nil && e != nil {
			err = fmt.Errorf("temporary files are left in %s: %w", temp, cause(e))
		}
	}()
	earlier := readContents(dir)
	files = append(files, file{contentsName, contents(files)})
	if err := writeAll(temp, files); err != nil {
		return err
	}
	for i, f := range files {
		target := filepath.Join(dir, filepath.FromSlash(f.name))
		if err := os.MkdirAll(filepath.Dir(target), 0o755); err != nil {
			return fmt.Errorf("%s: its folder cannot be made: %w", target, cause(err))
		}
		if err := os.Rename(filepath.Join(temp, fmt.Sprint(i)), target); err != nil {
			return fmt.Errorf("%s cannot be replaced: %w; close it where it is open", target, cause(err))
		}
	}
	return sweep(dir, earlier, files)
}

// writeAll writes each file under its number, several at a time: they wait for
// the disk, not for a processor.
func writeAll(temp string, files []file) error {
	var group sync.WaitGroup
	errs := make([]error, len(files))
	turns := make(chan struct{}, 8)
	for i, f := range files {
		turns <- struct{}{}
		group.Go(func() {
			errs[i] = writeWhole(filepath.Join(temp, fmt.Sprint(i)), f)
			<-turns
		})
	}
	group.Wait()
	return errors.Join(errs...)
}

func writeWhole(path string, f file) error {
	out, err := os.Create(path)
	if err == nil {
		_, err = out.Write(f.data)
		err = errors.Join(err, out.Sync(), out.Close())
	}
	if err != nil {
		return fmt.Errorf("%s cannot be written: %w", f.name, cause(err))
	}
	return nil
}

// cause returns what went wrong without the path that the message names.
func cause(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}

func contents(files []file) []byte {
	var b strings.Builder
	for _, f := range files {
		sum := sha256.Sum256(f.data)
		fmt.Fprintf(&b, "%s  %s\n", hex.EncodeToString(sum[:]), f.name)
	}
	return []byte(b.String())
}

// readContents returns the digests of the earlier handout's files by name.
func readContents(dir string) map[string]string {
	raw, err := os.ReadFile(filepath.Join(dir, contentsName))
	if err != nil {
		return nil
	}
	sums := map[string]string{}
	for _, l := range strings.Split(string(raw), "\n") {
		if sum, name, ok := strings.Cut(l, "  "); ok && filepath.IsLocal(name) {
			sums[name] = sum
		}
	}
	return sums
}

// sweep removes the earlier handout's files that the present one does not
// have, as long as they are what the earlier one wrote.
func sweep(dir string, earlier map[string]string, files []file) error {
	for name, sum := range earlier {
		if slices.ContainsFunc(files, func(f file) bool { return f.name == name }) {
			continue
		}
		path := filepath.Join(dir, filepath.FromSlash(name))
		raw, err := os.ReadFile(path)
		if err != nil {
			continue // gone already
		}
		if now := sha256.Sum256(raw); hex.EncodeToString(now[:]) != sum {
			continue // somebody made it their own
		}
		if err := os.Remove(path); err != nil {
			return fmt.Errorf("%s is left from the earlier handout and cannot be removed: %w", path, cause(err))
		}
	}
	return nil
}
