package handout

import (
	"bytes"
	"encoding/json"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

func compiledSchema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	raw, err := jsonschema.UnmarshalJSON(bytes.NewReader(ResultsSchema()))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("results.schema.json", raw); err != nil {
		t.Fatal(err)
	}
	schema, err := c.Compile("results.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	return schema
}

// TestSchemaAccepts checks documents with and without before and measures. The
// schema refuses unknown and missing keys, so that it cannot fall behind the
// Go types unnoticed.
func TestSchemaAccepts(t *testing.T) {
	schema := compiledSchema(t)
	whole := sample()
	alone := sample()
	alone.Before = nil
	bare := sample()
	bare.After, bare.Before = bare.Before, nil
	for name, in := range map[string]Input{"whole": whole, "no before": alone, "no measures": bare} {
		_, raw := mustResults(t, in)
		doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(raw))
		if err != nil {
			t.Fatalf("%s: not JSON: %v", name, err)
		}
		if err := schema.Validate(doc); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// TestSchemaRefuses spoils a good document in ways that must be noticed.
func TestSchemaRefuses(t *testing.T) {
	schema := compiledSchema(t)
	_, raw := mustResults(t, sample())
	for what, swap := range map[string][2]string{
		"another format":   {`"format": 1`, `"format": 2`},
		"an unknown key":   {`"meetsAll"`, `"meetsAllOfThem"`},
		"an unknown mark":  {`"mark": "memory"`, `"mark": "hearsay"`},
		"a short digest":   {`"sha256": "`, `"sha256": "00`},
		"text for a value": {`"thdPercent": 1.5`, `"thdPercent": "1.5",  "x": 1.5`},
	} {
		spoiled := strings.Replace(string(raw), swap[0], swap[1], 1)
		if spoiled == string(raw) {
			t.Errorf("%s: %q is not in the document", what, swap[0])
			continue
		}
		doc, err := jsonschema.UnmarshalJSON(strings.NewReader(spoiled))
		if err != nil {
			t.Fatalf("%s: %v", what, err)
		}
		if schema.Validate(doc) == nil {
			t.Errorf("%s is accepted", what)
		}
	}
}

// TestSchemaDescribes wants a description on every property.
func TestSchemaDescribes(t *testing.T) {
	var root any
	if err := json.Unmarshal(ResultsSchema(), &root); err != nil {
		t.Fatal(err)
	}
	n := 0
	var walk func(path string, v any)
	walk = func(path string, v any) {
		m, ok := v.(map[string]any)
		if !ok {
			return
		}
		if props, ok := m["properties"].(map[string]any); ok {
			for key, p := range props {
				n++
				if text, _ := p.(map[string]any)["description"].(string); text == "" {
					t.Errorf("%s.%s has no description", path, key)
				}
			}
		}
		for key, child := range m {
			walk(path+"/"+key, child)
		}
	}
	walk("", root)
	if n < 100 {
		t.Errorf("only %d properties were seen", n)
	}
}
