package study

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
)

// A migration turns the document of a study of one format into the next one's,
// in place. Numbers are json.Number, so that none loses a digit.
type migration func(doc map[string]any) error

// migrations holds one step for each older format: the first turns format 1
// into format 2. Format 1 is the first that was ever written, so there is no
// step yet; a test holds their number to Format.
var migrations = []migration{}

// migrate brings a document from a format to the present one, one step after
// the other.
func migrate(data []byte, from int, steps []migration) ([]byte, error) {
	doc := map[string]any{}
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.UseNumber()
	if err := dec.Decode(&doc); err != nil {
		return nil, located(data, err)
	}
	for n := from; n <= len(steps); n++ {
		if err := steps[n-1](doc); err != nil {
			return nil, &FileError{Problem: fmt.Sprintf("the file has format %d and cannot be brought to format %d: %v", from, n+1, err), Remedy: "open it with the version that wrote it, and correct it there"}
		}
		doc["format"] = n + 1
	}
	return json.MarshalIndent(doc, "", "  ")
}

// migrated says of an error that it stands in a migrated study, where lines
// and columns are no longer those of the file.
func migrated(err error, from int) error {
	var f *FileError
	if !errors.As(err, &f) {
		return err
	}
	return &FileError{Problem: fmt.Sprintf("%s (the file has format %d and was read as format %d)", f.Problem, from, Format), Remedy: f.Remedy}
}
