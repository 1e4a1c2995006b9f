package study

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"reflect"
	"strings"
)

// strict walks the document with the types beside it and refuses unknown
// keys, by name and place, and repeated ones.
func strict(data []byte) error { return strictly(data, reflect.TypeFor[Study](), "study") }

// strictly is strict for a document of another type, which where names.
func strictly(data []byte, t reflect.Type, where string) error {
	w := &walker{data: data, dec: json.NewDecoder(bytes.NewReader(data))}
	w.dec.UseNumber()
	tok, err := w.token()
	if err != nil {
		return located(data, err)
	}
	if tok != json.Delim('{') {
		return &FileError{Line: 1, Column: 1, Problem: "the file does not hold one JSON object", Remedy: "a " + where + " begins with {"}
	}
	if err := w.object(t, where); err != nil {
		return err
	}
	if _, err := w.token(); err != io.EOF {
		return w.at("there is something after the end of the "+where, "remove it")
	}
	return nil
}

type walker struct {
	data  []byte
	dec   *json.Decoder
	start int64 // where the last token began, blanks and separators before it included
}

func (w *walker) token() (json.Token, error) {
	w.start = w.dec.InputOffset()
	return w.dec.Token()
}

// at is an error at the last token.
func (w *walker) at(problem, remedy string) error {
	begin := int(w.start)
	for begin < len(w.data) && bytes.IndexByte([]byte(" \t\r\n,:"), w.data[begin]) >= 0 {
		begin++
	}
	line, column := place(w.data, int64(begin))
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
		tok, err := w.token()
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
	_, err := w.token()
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
	tok, err := w.token()
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
		if tooLarge(v, t) {
			return "", w.at(fmt.Sprintf("%s is %s, which is too large a number", where, v), "correct it")
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
		_, err := w.token()
		if err != nil {
			return "", located(w.data, err)
		}
	}
	return "", nil
}

func tooLarge(v json.Number, t reflect.Type) bool {
	if t != nil && t.Kind() == reflect.Int {
		_, err := v.Int64()
		return err != nil
	}
	_, err := v.Float64()
	return err != nil
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
		line, column := place(data, max(0, syntax.Offset-1))
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
