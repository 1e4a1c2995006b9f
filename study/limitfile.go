package study

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"reflect"

	"github.com/google/renameio/v2"
)

// LimitFile is the ending of a file that holds one limit set by itself, to be
// shared between studies.
const LimitFile = ".limits.json"

// limitDocument is what such a file holds.
type limitDocument struct {
	Format   int      `json:"format"`
	LimitSet LimitSet `json:"limitSet"`
}

// SaveLimitSet writes a limit set to a file of its own, in one step.
func SaveLimitSet(path string, x *LimitSet) error {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(limitDocument{Format, *x}); err != nil {
		return fmt.Errorf("the limits cannot be written: %w", err)
	}
	if err := renameio.WriteFile(path, b.Bytes(), 0o644); err != nil {
		return fmt.Errorf("the limits cannot be saved: %w", err)
	}
	return nil
}

// OpenLimitSet reads a file that SaveLimitSet wrote. It is as strict as Open,
// and the limits are validated: FieldErrors name what is wrong with them.
func OpenLimitSet(path string) (*LimitSet, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("the limit file cannot be opened: %w", err)
	}
	x, err := ParseLimitSet(data)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", filepath.Base(path), err)
	}
	return x, nil
}

// ParseLimitSet is OpenLimitSet from memory.
func ParseLimitSet(data []byte) (*LimitSet, error) {
	data, err := asText(data)
	if err != nil {
		return nil, err
	}
	if _, err := versionOf(data); err != nil {
		return nil, err
	}
	if err := strictly(data, reflect.TypeFor[limitDocument](), "limit file"); err != nil {
		return nil, err
	}
	var doc limitDocument
	if err := json.Unmarshal(data, &doc); err != nil {
		return nil, located(data, err)
	}
	x := &doc.LimitSet
	if problems := x.Validate(); len(problems) > 0 {
		return nil, FieldErrors(problems)
	}
	return x, nil
}

// Validate returns every problem of a limit set by itself; nil when there is
// none.
func (x *LimitSet) Validate() []*FieldError {
	c := &checker{study: &Study{LimitSets: []LimitSet{*x}}, kind: map[string]Kind{x.Name: KindLimitSet}}
	if x.Name == "" {
		c.add("limit set", "name", "is empty", "give it a name")
	}
	c.fields(InfoOf(KindLimitSet), 0, &c.study.LimitSets[0])
	if len(c.found) == 0 {
		c.limitSets()
	}
	return c.found
}
