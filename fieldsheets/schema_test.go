package fieldsheets

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"reflect"
	"strings"
	"testing"
	"time"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

var update = flag.Bool("update", false, "rewrite golden files and the schema")

// schemaOf describes a Go type as JSON Schema, for writing the schema file with -update. What holds the output to the file is
// TestOutputMeetsSchema; this only saves typing.
func schemaOf(t reflect.Type, defs map[string]any) any {
	switch t.Kind() {
	case reflect.Pointer:
		return map[string]any{"anyOf": []any{schemaOf(t.Elem(), defs), map[string]any{"type": "null"}}}
	case reflect.Slice:
		return map[string]any{"type": "array", "items": schemaOf(t.Elem(), defs)}
	case reflect.Float64:
		return map[string]any{"type": "number"}
	case reflect.Int, reflect.Uint64:
		return map[string]any{"type": "integer"}
	case reflect.Bool:
		return map[string]any{"type": "boolean"}
	case reflect.String:
		if t.Name() == "Verdict" {
			return map[string]any{"enum": []any{"as designed", "slack", "overload", "off design", "undecided", "no design"}}
		}
		return map[string]any{"type": "string"}
	}
	if t == reflect.TypeFor[time.Time]() {
		return map[string]any{"type": "string", "format": "date-time"}
	}
	ref := map[string]any{"$ref": "#/$defs/" + t.Name()}
	if _, done := defs[t.Name()]; done {
		return ref
	}
	defs[t.Name()] = nil
	properties, required := map[string]any{}, []any{}
	for i := range t.NumField() {
		f := t.Field(i)
		tag := f.Tag.Get("json")
		if tag == "-" || !f.IsExported() {
			continue
		}
		key, options, _ := strings.Cut(tag, ",")
		properties[key] = schemaOf(f.Type, defs)
		if options != "omitempty" {
			required = append(required, key)
		}
	}
	defs[t.Name()] = map[string]any{"type": "object", "properties": properties, "required": required, "additionalProperties": false}
	return ref
}

func writeSchema(t *testing.T) {
	defs := map[string]any{}
	root := schemaOf(reflect.TypeFor[Report](), defs)
	text, err := json.MarshalIndent(map[string]any{"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "tautbook assess",
		"description": "What tautbook assess --format json prints: SI units, named in the keys; uncertain values as value and standard uncertainty u.",
		"$ref":        root.(map[string]any)["$ref"], "$defs": defs}, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile("schema/assess.schema.json", append(text, '\n'), 0o644); err != nil {
		t.Fatal(err)
	}
}

func compiled(t *testing.T) *jsonschema.Schema {
	t.Helper()
	if *update {
		writeSchema(t)
	}
	text, err := os.ReadFile("schema/assess.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("assess.schema.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("assess.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func validate(t *testing.T, s *jsonschema.Schema, text []byte) error {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return s.Validate(doc)
}

func TestOutputMeetsSchema(t *testing.T) {
	s := compiled(t)
	var out bytes.Buffer
	if err := WriteJSON(&out, sampleReport()); err != nil {
		t.Fatal(err)
	}
	if err := validate(t, s, out.Bytes()); err != nil {
		t.Fatal(err)
	}
	for _, change := range [][2]string{
		{`"horizontal_tension_N"`, `"horizontal_tension_kN"`}, {`"verdict": "slack"`, `"verdict": "loose"`}, {`"sha256"`, `"hash"`}, {`"u": `, `"U": `},
	} {
		changed := strings.Replace(out.String(), change[0], change[1], 1)
		if changed == out.String() {
			t.Fatalf("%s is not in the output", change[0])
		}
		if err := validate(t, s, []byte(changed)); err == nil {
			t.Errorf("schema accepts %s for %s", change[1], change[0])
		}
	}
	if !bytes.Equal(Schema(), schema) {
		t.Error("Schema() is not the file")
	}
}
