package study

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"unicode/utf8"
)

// maxFile is the largest study file that is read; real ones have kilobytes.
const maxFile = 64 << 20

// FileError says what is wrong with a study file and where.
type FileError struct {
	Line, Column int    // from 1; 0 when the whole file is meant
	Problem      string // what is wrong
	Remedy       string // what to do
}

func (e *FileError) Error() string {
	text := e.Problem
	if e.Line > 0 {
		text = fmt.Sprintf("line %d, column %d: %s", e.Line, e.Column, text)
	}
	if e.Remedy != "" {
		text += "; " + e.Remedy
	}
	return text
}

// Open reads the study file at path. The errors are those of Read with the
// path put before them.
func Open(path string) (*Study, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("the study file cannot be opened: %w", err)
	}
	defer f.Close()
	s, err := Read(f)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", filepath.Base(path), err)
	}
	return s, nil
}

// Read reads a study. It is strict: unknown and repeated keys, wrong types,
// truncated, binary and huge files are a *FileError with line and column; a
// newer format is refused. The study's values are not judged: see Validate.
func Read(r io.Reader) (*Study, error) {
	data, err := io.ReadAll(io.LimitReader(r, maxFile+1))
	if err != nil {
		return nil, fmt.Errorf("the study file cannot be read: %w", err)
	}
	return Parse(data)
}

// Parse is Read from memory.
func Parse(data []byte) (*Study, error) {
	data, err := asText(data)
	if err != nil {
		return nil, err
	}
	version, err := versionOf(data)
	if err != nil {
		return nil, err
	}
	if version == Format {
		return decode(data)
	}
	if data, err = migrate(data, version, migrations); err != nil {
		return nil, err
	}
	s, err := decode(data)
	if err != nil {
		return nil, migrated(err, version)
	}
	return s, nil
}

// asText refuses what is no text and takes the byte order mark off.
func asText(data []byte) ([]byte, error) {
	if len(data) > maxFile {
		return nil, &FileError{Problem: "the file is larger than 64 MB", Remedy: "this is no study file; choose a .study.json"}
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	switch {
	case len(bytes.TrimSpace(data)) == 0:
		return nil, &FileError{Problem: "the file is empty", Remedy: "open the previous version that is kept beside it"}
	case bytes.HasPrefix(data, []byte("\xff\xfe")) || bytes.HasPrefix(data, []byte("\xfe\xff")):
		return nil, &FileError{Problem: "the file is text in UTF-16", Remedy: "save it as UTF-8 in the editor that wrote it"}
	case bytes.IndexByte(data, 0) >= 0:
		return nil, &FileError{Problem: "the file is binary, not text", Remedy: "choose a .study.json"}
	}
	if at := badUTF8(data); at >= 0 {
		line, column := place(data, int64(at))
		return nil, &FileError{Line: line, Column: column, Problem: "the file is binary, or text that is not UTF-8", Remedy: "choose a .study.json, or save it as UTF-8"}
	}
	return data, nil
}

// badUTF8 returns where data stops to be UTF-8, -1 when it does not. A last
// character that is cut off is left to the JSON reader, which calls the file
// cut off.
func badUTF8(data []byte) int {
	for at := 0; at < len(data); {
		r, n := utf8.DecodeRune(data[at:])
		if r == utf8.RuneError && n == 1 {
			if !utf8.FullRune(data[at:]) {
				return -1
			}
			return at
		}
		at += n
	}
	return -1
}

// versionOf looks at the format before anything else is judged, since a newer
// one may hold keys that are not known here.
func versionOf(data []byte) (int, error) {
	if bytes.TrimSpace(data)[0] != '{' && json.Valid(data) {
		return 0, &FileError{Line: 1, Column: 1, Problem: "the file does not hold one JSON object", Remedy: "a study begins with {"}
	}
	var head struct {
		Format json.RawMessage `json:"format"`
	}
	if err := json.NewDecoder(bytes.NewReader(data)).Decode(&head); err != nil {
		return 0, located(data, err)
	}
	if head.Format == nil {
		return 0, &FileError{Problem: `the key "format" is missing`, Remedy: "this is no study file, or a damaged one; a study begins with \"format\": 1"}
	}
	n, err := strconv.Atoi(string(head.Format))
	switch {
	case err != nil || n < 1:
		return 0, &FileError{Problem: fmt.Sprintf(`"format" is %.40s, which no version of this program has written`, head.Format), Remedy: "check the file"}
	case n > Format:
		return 0, &FileError{Problem: fmt.Sprintf("the file has format %d; this program reads up to format %d", n, Format), Remedy: "open it with a newer version of the program"}
	}
	return n, nil
}

// decode reads a study of the present format, strictly.
func decode(data []byte) (*Study, error) {
	if err := strict(data); err != nil {
		return nil, err
	}
	s := &Study{}
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.DisallowUnknownFields()
	if err := dec.Decode(s); err != nil {
		return nil, located(data, err)
	}
	return s, nil
}
