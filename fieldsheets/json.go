package fieldsheets

import (
	_ "embed"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"reflect"
	"slices"
	"strings"
)

//go:embed schema/assess.schema.json
var schema []byte

// Schema is the JSON Schema (draft 2020-12) of what WriteJSON prints.
func Schema() []byte { return slices.Clone(schema) }

// WriteJSON prints the report as one JSON object: SI units named in the keys, uncertain values as {"value", "u"} with the
// standard uncertainty, full precision. A number that is not finite is an error that names its place.
func WriteJSON(w io.Writer, r Report) error {
	if err := finite(r); err != nil {
		return err
	}
	text, err := json.MarshalIndent(r, "", "  ")
	if err != nil {
		return fmt.Errorf("cannot print: %w", err)
	}
	_, err = w.Write(append(text, '\n'))
	return err
}

// finite refuses a report that holds a NaN or an infinity, whatever it is printed as: a figure that failed must not reach
// paper. The error names the place by its JSON keys.
func finite(r Report) error {
	if path := notFinite(reflect.ValueOf(r), ""); path != "" {
		return fmt.Errorf("cannot print: %s is not a finite number", path)
	}
	return nil
}

// notFinite is the path of the first number that is NaN or infinite, "" when all are finite. Fields without a JSON key go by
// their Go name.
func notFinite(v reflect.Value, path string) string {
	switch v.Kind() {
	case reflect.Float64:
		if f := v.Float(); math.IsNaN(f) || math.IsInf(f, 0) {
			return path
		}
	case reflect.Pointer, reflect.Interface:
		if !v.IsNil() {
			return notFinite(v.Elem(), path)
		}
	case reflect.Slice, reflect.Array:
		for i := range v.Len() {
			if p := notFinite(v.Index(i), fmt.Sprintf("%s[%d]", path, i)); p != "" {
				return p
			}
		}
	case reflect.Struct:
		for i := range v.NumField() {
			f := v.Type().Field(i)
			if !f.IsExported() {
				continue
			}
			key, _, _ := strings.Cut(f.Tag.Get("json"), ",")
			if key == "" || key == "-" {
				key = f.Name
			}
			if p := notFinite(v.Field(i), strings.TrimPrefix(path+"."+key, ".")); p != "" {
				return p
			}
		}
	}
	return ""
}
