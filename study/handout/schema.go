package handout

import _ "embed"

//go:embed results.schema.json
var resultsSchema []byte

// ResultsSchema returns the JSON Schema of results.json.
func ResultsSchema() []byte { return append([]byte(nil), resultsSchema...) }
