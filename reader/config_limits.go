package reader

import (
	"errors"
	"fmt"
	"reflect"
	"slices"
	"strings"

	"nightbook/schema"
)

// checkLimits refuses limits that are none, or are set beyond what serves. As
// with columns, the types are looked at here.
func checkLimits(section any) (l schema.Limits, err error) {
	given, ok := section.(map[string]any)
	if !ok && section != nil {
		return l, errors.New("limits: expected a section [limits] with lines such as row_bytes = 2097152")
	}
	for _, key := range sortedKeys(given) {
		k := slices.IndexFunc(schema.LimitDocs[:], func(d schema.LimitDoc) bool { return d.Key == key })
		if k < 0 {
			return l, fmt.Errorf("limits.%s: there is no such limit; the limits are %s", key, strings.Join(limitNames(), ", "))
		}
		d := &schema.LimitDocs[k]
		n, ok := given[key].(int64)
		if !ok || n < d.Least || n > d.Most {
			return l, fmt.Errorf("limits.%s is %v: expected a whole number from %d to %d", key, given[key], d.Least, d.Most)
		}
		l[k] = n
	}
	return l, nil
}

// configKeys lists the keys of run.toml.
func configKeys() []string {
	var keys []string
	t := reflect.TypeFor[runFile]()
	for i := range t.NumField() {
		f := t.Field(i)
		key := f.Tag.Get("toml")
		if f.Type.Kind() != reflect.Struct {
			keys = append(keys, key)
			continue
		}
		for k := range f.Type.NumField() {
			keys = append(keys, key+"."+f.Type.Field(k).Tag.Get("toml"))
		}
	}
	return keys
}

func limitNames() []string {
	var names []string
	for _, d := range schema.LimitDocs {
		names = append(names, d.Key)
	}
	return names
}
