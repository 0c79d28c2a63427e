// Package jsonpaths lists the paths and types of a JSON interface, for the
// tests that pin them.
package jsonpaths

import (
	"fmt"
	"reflect"
	"strings"
)

// kinds are how JSON's types are named in the list.
var kinds = map[reflect.Kind]string{reflect.String: "string", reflect.Bool: "true or false", reflect.Int: "number", reflect.Float64: "number"}

// Of returns every path and type below t, a line each, in the order of the
// fields. It panics where t holds what has no plain JSON name, or no kind of
// value that a reader could rely on.
func Of(t reflect.Type) string {
	var b strings.Builder
	list(&b, t, "")
	return b.String()
}

func list(b *strings.Builder, t reflect.Type, path string) {
	null := ""
	if t.Kind() == reflect.Pointer {
		t, null = t.Elem(), " or null"
	}
	switch kind := t.Kind(); kind {
	case reflect.Struct:
		if null != "" {
			fmt.Fprintf(b, "%s object or null\n", path)
		}
		for i := range t.NumField() {
			tag := t.Field(i).Tag.Get("json")
			if tag == "" || strings.Contains(tag, ",") {
				panic(t.Name() + "." + t.Field(i).Name + " has no plain JSON name")
			}
			list(b, t.Field(i).Type, strings.TrimPrefix(path+"."+tag, "."))
		}
	case reflect.Slice, reflect.Array:
		if null != "" {
			fmt.Fprintf(b, "%s list or null\n", path)
		}
		list(b, t.Elem(), path+"[]")
	default:
		if kinds[kind] == "" {
			panic("a JSON interface of " + t.String())
		}
		fmt.Fprintf(b, "%s %s%s\n", path, kinds[kind], null)
	}
}
