package fieldsheets

import (
	"bytes"
	_ "embed"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"reflect"
	"slices"
	"strings"

	"tautbook/tension"
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
	around := r
	around.Cables = []tension.Assessment{}
	text, err := json.MarshalIndent(around, "", "  ")
	if err != nil {
		return fmt.Errorf("cannot print: %w", err)
	}
	const key = "\n  \"cables\": ["
	at := bytes.Index(text, []byte(key)) + len(key)
	if len(r.Cables) == 0 {
		at = len(text)
	}
	if _, err := w.Write(text[:at]); err != nil {
		return err
	}
	if len(r.Cables) > 0 {
		if err := writeCables(w, r.Cables); err != nil {
			return err
		}
	}
	_, err = w.Write(append(text[at:], '\n'))
	return err
}

// writeCables prints the elements of the list of cables. They are worked out on all cores and written in order, so that a report of very
// many never stands in memory whole.
func writeCables(w io.Writer, cables []tension.Assessment) error {
	err := inOrder(w, len(cables), func(out *bytes.Buffer, i int) error {
		text, err := json.MarshalIndent(&cables[i], "    ", "  ")
		if err != nil {
			return fmt.Errorf("cannot print: %w", err)
		}
		if i > 0 {
			out.WriteByte(',')
		}
		out.WriteString("\n    ")
		out.Write(text)
		return nil
	})
	if err != nil {
		return err
	}
	_, err = io.WriteString(w, "\n  ")
	return err
}

// finite refuses a report that holds a NaN or an infinity, whatever it is printed as: a figure that failed must not reach
// paper. The error names the place by its JSON keys.
func finite(r Report) error {
	cables := r.Cables
	r.Cables = nil
	if allFinite(reflect.ValueOf(r)) && finiteCables(cables) {
		return nil
	}
	r.Cables = cables
	if path := notFinite(reflect.ValueOf(r), ""); path != "" {
		return fmt.Errorf("cannot print: %s is not a finite number", path)
	}
	return nil
}

// finiteCables reports whether every number of every cable is finite.
func finiteCables(cables []tension.Assessment) bool {
	return inOrder(io.Discard, len(cables), func(_ *bytes.Buffer, i int) error {
		if !allFinite(reflect.ValueOf(&cables[i])) {
			return errNotFinite
		}
		return nil
	}) == nil
}

var errNotFinite = errors.New("not a finite number")

// allFinite is notFinite without the name of the place, which costs more than the look.
func allFinite(v reflect.Value) bool {
	switch v.Kind() {
	case reflect.Float64:
		f := v.Float()
		return f-f == 0
	case reflect.Pointer, reflect.Interface:
		return v.IsNil() || allFinite(v.Elem())
	case reflect.Slice, reflect.Array:
		if floats, ok := v.Interface().([]float64); ok {
			for _, f := range floats {
				if f-f != 0 {
					return false
				}
			}
			return true
		}
		if v.Type().Elem().Kind() == reflect.String {
			return true
		}
		for i := range v.Len() {
			if !allFinite(v.Index(i)) {
				return false
			}
		}
	case reflect.Struct:
		t := v.Type()
		for i := range v.NumField() {
			if t.Field(i).IsExported() && !allFinite(v.Field(i)) {
				return false
			}
		}
	}
	return true
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
