package study

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"unicode/utf8"

	"github.com/google/renameio/v2"
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
	switch {
	case len(data) > maxFile:
		return nil, &FileError{Problem: "the file is larger than 64 MB", Remedy: "this is no study file; choose a .study.json"}
	case len(bytes.TrimSpace(data)) == 0:
		return nil, &FileError{Problem: "the file is empty", Remedy: "open the previous version that is kept beside it"}
	case bytes.IndexByte(data, 0) >= 0 || !utf8.Valid(data):
		return nil, &FileError{Problem: "the file is binary, not text", Remedy: "choose a .study.json"}
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if err := scanKeys(data); err != nil {
		return nil, err
	}
	if err := format(data); err != nil {
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

// format looks at the version before anything else is judged.
func format(data []byte) error {
	var head struct {
		Format *json.Number `json:"format"`
	}
	if err := json.Unmarshal(data, &head); err != nil {
		return located(data, err)
	}
	if head.Format == nil {
		return &FileError{Problem: `the key "format" is missing`, Remedy: "this is no study file, or a damaged one; a study begins with \"format\": 1"}
	}
	n, err := head.Format.Int64()
	switch {
	case err != nil || n < 1:
		return &FileError{Problem: fmt.Sprintf(`"format" is %s, which no version of this program has written`, head.Format), Remedy: "check the file"}
	case n > Format:
		return &FileError{Problem: fmt.Sprintf("the file has format %d; this program reads up to format %d", n, Format), Remedy: "open it with a newer version of the program"}
	}
	return nil
}

// scanKeys walks the document with the types beside it and refuses unknown
// keys, by name and place, and repeated ones.
func scanKeys(data []byte) error {
	w := &walker{data: data, dec: json.NewDecoder(bytes.NewReader(data))}
	w.dec.UseNumber()
	tok, err := w.dec.Token()
	if err != nil {
		return located(data, err)
	}
	if tok != json.Delim('{') {
		return &FileError{Line: 1, Column: 1, Problem: "the file does not hold one JSON object", Remedy: "a study begins with {"}
	}
	if err := w.object(reflect.TypeFor[Study](), "study"); err != nil {
		return err
	}
	if _, err := w.dec.Token(); err != io.EOF {
		return w.at("there is something after the end of the study", "remove it")
	}
	return nil
}

type walker struct {
	data []byte
	dec  *json.Decoder
}

func (w *walker) at(problem, remedy string) error {
	line, column := place(w.data, w.dec.InputOffset())
	return &FileError{Line: line, Column: column, Problem: problem, Remedy: remedy}
}

// object reads the rest of an object of type t; where names it in messages.
func (w *walker) object(t reflect.Type, where string) error {
	seen := map[string]bool{}
	known := map[string]reflect.Type{}
	if t != nil && t.Kind() == reflect.Struct {
		keysOf(t, known)
	}
	for w.dec.More() {
		tok, err := w.dec.Token()
		if err != nil {
			return located(w.data, err)
		}
		key := tok.(string)
		if seen[key] {
			return w.at(fmt.Sprintf("%s has the key %q twice", where, key), "remove one of them")
		}
		seen[key] = true
		next, ok := known[key]
		if t != nil && t.Kind() == reflect.Struct && !ok {
			return w.at(fmt.Sprintf("%s has the key %q, which is not known", where, key), "correct or remove it; known are "+strings.Join(sortedKeys(t), ", "))
		}
		if t != nil && t.Kind() == reflect.Map {
			next = t.Elem()
		}
		name, err := w.value(next, inside(where, key))
		if err != nil {
			return err
		}
		if key == "name" && name != "" {
			where = name
		}
	}
	_, err := w.dec.Token()
	if err != nil {
		return located(w.data, err)
	}
	return nil
}

func inside(where, key string) string {
	if where == "study" {
		return key
	}
	return where + ", " + key
}

// value reads one value and returns it when it is a string.
func (w *walker) value(t reflect.Type, where string) (string, error) {
	tok, err := w.dec.Token()
	if err != nil {
		return "", located(w.data, err)
	}
	for t != nil && t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	switch v := tok.(type) {
	case string:
		return v, w.expect(t, where, "text", reflect.String)
	case json.Number:
		if t != nil && t.Kind() == reflect.Int && strings.ContainsAny(v.String(), ".eE") {
			return "", w.at(fmt.Sprintf("%s is %s, but must be a whole number", where, v), "correct it")
		}
		return "", w.expect(t, where, "a number", reflect.Float64, reflect.Int)
	case bool:
		return "", w.expect(t, where, "true or false", reflect.Bool)
	case nil:
		if t == nil {
			return "", nil
		}
		return "", w.at(fmt.Sprintf("%s is null", where), "give a value, or leave the key out")
	case json.Delim:
		if v == '{' {
			if err := w.expect(t, where, "an object", reflect.Struct, reflect.Map); err != nil {
				return "", err
			}
			return "", w.object(t, where)
		}
		if err := w.expect(t, where, "a list", reflect.Slice); err != nil {
			return "", err
		}
		for i := 0; w.dec.More(); i++ {
			var elem reflect.Type
			if t != nil {
				elem = t.Elem()
			}
			if _, err := w.value(elem, fmt.Sprintf("%s[%d]", where, i)); err != nil {
				return "", err
			}
		}
		_, err := w.dec.Token()
		if err != nil {
			return "", located(w.data, err)
		}
	}
	return "", nil
}

func (w *walker) expect(t reflect.Type, where, found string, kinds ...reflect.Kind) error {
	if t == nil {
		return nil
	}
	for _, k := range kinds {
		if t.Kind() == k {
			return nil
		}
	}
	want := map[reflect.Kind]string{reflect.String: "text in quotes", reflect.Float64: "a number", reflect.Int: "a whole number", reflect.Bool: "true or false", reflect.Slice: "a list", reflect.Struct: "an object", reflect.Map: "an object"}[t.Kind()]
	return w.at(fmt.Sprintf("%s is %s, but must be %s", where, found, want), "correct it")
}

func keysOf(t reflect.Type, into map[string]reflect.Type) {
	for i := range t.NumField() {
		f := t.Field(i)
		if f.Anonymous {
			keysOf(f.Type, into)
		} else if key := jsonKey(f); key != "" {
			into[key] = f.Type
		}
	}
}

func sortedKeys(t reflect.Type) []string {
	var keys []string
	for i := range t.NumField() {
		f := t.Field(i)
		if f.Anonymous {
			keys = append(keys, sortedKeys(f.Type)...)
		} else if key := jsonKey(f); key != "" {
			keys = append(keys, key)
		}
	}
	return keys
}

// located turns an error of the JSON reader into one with line and column.
func located(data []byte, err error) error {
	var syntax *json.SyntaxError
	var kind *json.UnmarshalTypeError
	var already *FileError
	switch {
	case errors.As(err, &already):
		return err
	case errors.Is(err, io.EOF) || errors.Is(err, io.ErrUnexpectedEOF):
		line, column := place(data, int64(len(data)))
		return &FileError{line, column, "the file ends in the middle of the study", "it was cut off; open the previous version that is kept beside it"}
	case errors.As(err, &syntax):
		if int(syntax.Offset) >= len(data) {
			return located(data, io.ErrUnexpectedEOF)
		}
		line, column := place(data, syntax.Offset)
		return &FileError{line, column, "this is not JSON: " + syntax.Error(), "correct it there"}
	case errors.As(err, &kind):
		line, column := place(data, kind.Offset)
		return &FileError{line, column, fmt.Sprintf("%s is %s, which does not fit", kind.Field, kind.Value), "correct it"}
	}
	return &FileError{Problem: err.Error(), Remedy: "check the file"}
}

func place(data []byte, offset int64) (line, column int) {
	before := data[:min(int(offset), len(data))]
	line = 1 + bytes.Count(before, []byte("\n"))
	return line, len(before) - bytes.LastIndexByte(before, '\n')
}

// Bytes returns the study as it is written to a file: keys in fixed order,
// indented, ending in a newline.
func (s *Study) Bytes() ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(s); err != nil {
		return nil, fmt.Errorf("the study cannot be written: %w", err)
	}
	return b.Bytes(), nil
}

// Previous returns where Save keeps the previous version of a study file.
func Previous(path string) string { return path + ".previous" }

// Save writes the study to path so that nothing is lost whatever happens: to a
// temporary file first, which then takes the old one's place in one step; the
// old one is kept as Previous(path).
func Save(path string, s *Study) error {
	data, err := s.Bytes()
	if err != nil {
		return err
	}
	old, err := os.ReadFile(path)
	switch {
	case err == nil && !bytes.Equal(old, data):
		if err := renameio.WriteFile(Previous(path), old, 0o644); err != nil {
			return fmt.Errorf("the previous version cannot be kept, so nothing was saved: %w", err)
		}
	case err != nil && !errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("the study cannot be saved: %w", err)
	}
	if err := renameio.WriteFile(path, data, 0o644); err != nil {
		return fmt.Errorf("the study cannot be saved: %w", err)
	}
	return nil
}
