package study

import (
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"os"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"quietbus/testdata"
)

var update = flag.Bool("update", false, "write study.schema.json and FORMAT.md anew")

const (
	keysBegin = "<!-- keys: made by go test ./study -update -->\n"
	keysEnd   = "<!-- end of keys -->\n"
)

func TestSchemaIsCurrent(t *testing.T) {
	if *update {
		if err := os.WriteFile("study.schema.json", Schema(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	kept, err := os.ReadFile("study.schema.json")
	if err != nil || !bytes.Equal(kept, Schema()) {
		t.Errorf("study.schema.json is not what the types say (%v); run go test ./study -update", err)
	}
}

func TestFormatPageIsCurrent(t *testing.T) {
	page, err := os.ReadFile("FORMAT.md")
	if err != nil {
		t.Fatal(err)
	}
	head, rest, ok := strings.Cut(string(page), keysBegin)
	_, tail, ok2 := strings.Cut(rest, keysEnd)
	if !ok || !ok2 {
		t.Fatal("FORMAT.md lacks the marks of its generated part")
	}
	want := head + keysBegin + FormatKeys() + keysEnd + tail
	if *update {
		if err := os.WriteFile("FORMAT.md", []byte(want), 0o644); err != nil {
			t.Fatal(err)
		}
	} else if want != string(page) {
		t.Error("FORMAT.md does not list what the types say; run go test ./study -update")
	}
}

func schema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(Schema()))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("study.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("study.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func example(t *testing.T) []byte {
	t.Helper()
	page, err := os.ReadFile("FORMAT.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, _ := strings.Cut(string(page), "```json\n")
	text, _, ok := strings.Cut(rest, "```")
	if !ok {
		t.Fatal("FORMAT.md has no example")
	}
	return []byte(text)
}

// The page's example, the demo and every study this program writes fit the
// schema; the example can be evaluated as it stands.
func TestExamplesFitTheSchema(t *testing.T) {
	s := schema(t)
	written, err := thirty().Bytes()
	if err != nil {
		t.Fatal(err)
	}
	for name, data := range map[string][]byte{"example": example(t), "demo": testdata.Demo, "thirty": written} {
		v, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
		if err != nil {
			t.Fatal(name, err)
		}
		if err := s.Validate(v); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	small, err := Parse(example(t))
	if err != nil {
		t.Fatal(err)
	}
	o, err := Evaluate(context.Background(), small, small.OnMeasures())
	if err != nil {
		t.Fatal(err)
	}
	if !o.MeetsAll() {
		t.Error("the example's measure does not bring it within its limits")
	}
}

// What the reader and the validation refuse, the schema refuses too where a
// schema can say it.
func TestSchemaRefuses(t *testing.T) {
	s := schema(t)
	for name, change := range map[string]func(map[string]any){
		"unknown key":     func(m map[string]any) { m["colour"] = "red" },
		"other format":    func(m map[string]any) { m["format"] = 2 },
		"negative power":  func(m map[string]any) { item(m, "nonlinearLoads")["kW"] = -1 },
		"missing bus":     func(m map[string]any) { delete(item(m, "banks"), "bus") },
		"word out of set": func(m map[string]any) { item(m, "measures")["kind"] = "magic" },
		"text for number": func(m map[string]any) { item(m, "supplies")["xOverR"] = "eight" },
	} {
		var m map[string]any
		if err := json.Unmarshal(example(t), &m); err != nil {
			t.Fatal(err)
		}
		change(m)
		if err := s.Validate(m); err == nil {
			t.Errorf("%s: the schema lets it pass", name)
		}
	}
}

func item(m map[string]any, list string) map[string]any {
	return m[list].([]any)[0].(map[string]any)
}
