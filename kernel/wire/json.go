package wire

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"reflect"
	"strings"
)

// Marshal writes v as JSON and cannot fail: what JSON cannot hold is replaced.
// A number that is not finite becomes null, a complex number its text, a map
// key that is not text its text, and a function, a channel or a value that
// contains itself null. Characters are not escaped for HTML.
func Marshal(v any) json.RawMessage {
	if b, err := encode(v); err == nil {
		return b
	}
	b, err := encode(clean(reflect.ValueOf(v), map[uintptr]bool{}))
	if err != nil {
		return json.RawMessage("null")
	}
	return b
}

func encode(v any) (json.RawMessage, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		return nil, err
	}
	return json.RawMessage(bytes.TrimSuffix(b.Bytes(), []byte("\n"))), nil
}

// clean returns a value with the JSON of v in which nothing is left that
// cannot be written. Path holds the references on the way down to v.
func clean(v reflect.Value, path map[uintptr]bool) any {
	if !v.IsValid() {
		return nil
	}
	if v.CanInterface() {
		if _, ok := v.Interface().(json.Marshaler); ok {
			if b, err := encode(v.Interface()); err == nil {
				return b
			}
			return nil
		}
	}
	switch v.Kind() {
	case reflect.Float32, reflect.Float64:
		if f := v.Float(); math.IsNaN(f) || math.IsInf(f, 0) {
			return nil
		}
		return v.Interface()
	case reflect.Complex64, reflect.Complex128:
		return fmt.Sprint(v.Complex())
	case reflect.Chan, reflect.Func, reflect.UnsafePointer:
		return nil
	case reflect.Interface:
		return clean(v.Elem(), path)
	case reflect.Pointer, reflect.Map, reflect.Slice:
		if v.IsNil() {
			return nil
		}
		p := v.Pointer()
		if path[p] {
			return nil
		}
		path[p] = true
		defer delete(path, p)
	}
	switch v.Kind() {
	case reflect.Pointer:
		return clean(v.Elem(), path)
	case reflect.Map:
		m := make(map[string]any, v.Len())
		for it := v.MapRange(); it.Next(); {
			m[fmt.Sprint(it.Key())] = clean(it.Value(), path)
		}
		return m
	case reflect.Slice, reflect.Array:
		if v.Type().Elem().Kind() == reflect.Uint8 && v.Kind() == reflect.Slice {
			return v.Bytes()
		}
		s := make([]any, v.Len())
		for i := range s {
			s[i] = clean(v.Index(i), path)
		}
		return s
	case reflect.Struct:
		m := map[string]any{}
		cleanFields(v, path, m)
		return m
	}
	return v.Interface()
}

// cleanFields puts the fields of the struct v into m under their JSON names.
func cleanFields(v reflect.Value, path map[uintptr]bool, m map[string]any) {
	for i := range v.NumField() {
		f := v.Type().Field(i)
		name, options, _ := strings.Cut(f.Tag.Get("json"), ",")
		switch {
		case f.Tag.Get("json") == "-" || !f.IsExported() && !f.Anonymous:
			continue
		case f.Anonymous && name == "" && f.Type.Kind() == reflect.Struct:
			cleanFields(v.Field(i), path, m)
			continue
		case !f.IsExported():
			continue
		case name == "":
			name = f.Name
		}
		if strings.Contains(options, "omitempty") && v.Field(i).IsZero() {
			continue
		}
		m[name] = clean(v.Field(i), path)
	}
}
