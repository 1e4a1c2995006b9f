package study

import (
	"errors"
	"strings"
	"testing"
)

// There is a step from every older format.
func TestMigrationsReachTheFormat(t *testing.T) {
	if len(migrations) != Format-1 {
		t.Errorf("%d steps lead to format %d, want %d", len(migrations), Format, Format-1)
	}
}

// Steps are taken one after the other from the file's format on, numbers keep
// their digits, and a step that fails names the formats.
func TestMigrate(t *testing.T) {
	steps := []migration{
		func(doc map[string]any) error { doc["frequencyHz"] = doc["hertz"]; delete(doc, "hertz"); return nil },
		func(doc map[string]any) error {
			if doc["frequencyHz"] == nil {
				return errors.New("it has no frequency")
			}
			doc["maxOrder"] = 40
			return nil
		},
	}
	data, err := migrate([]byte(`{"format": 1, "hertz": 50.000000000000007}`), 1, steps)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"format": 3`, `"frequencyHz": 50.000000000000007`, `"maxOrder": 40`} {
		if !strings.Contains(string(data), want) {
			t.Errorf("%s lacks %s", data, want)
		}
	}
	if data, err = migrate([]byte(`{"format": 2, "hertz": 50}`), 2, steps); err == nil || !strings.Contains(err.Error(), "format 2 and cannot be brought to format 3") {
		t.Errorf("%s %v", data, err)
	}
	if err := migrated(strict([]byte(`{"bananas": 1}`)), 1); !strings.Contains(err.Error(), "bananas") || strings.Contains(err.Error(), "line 1") {
		t.Errorf("%v", err)
	}
}
