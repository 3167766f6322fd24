package scenes

import (
	"fmt"
	"slices"
	"strings"
)

// readTables checks a list of inline tables against Fields, all but the
// ranges.
func (r *reading) readTables(v value) *fault {
	k := r.key
	if v.kind != kindList {
		return &fault{at: v.span, problem: "wrong type, " + v.kind.String(), allowed: k.Allowed()}
	}
	if n := len(v.items); n > maxItems {
		return &fault{at: v.span, problem: fmt.Sprintf("a list of %d items", n), allowed: fmt.Sprintf("up to %d", maxItems)}
	}
	for i, item := range v.items {
		if item.kind != kindTable {
			return &fault{at: item.span, problem: "wrong type, " + item.kind.String(), allowed: k.Allowed()}
		}
		fields, f := k.readFields(item, fmt.Sprintf("%s %d", strings.TrimSuffix(k.Name, "s"), i+1))
		if f != nil {
			return f
		}
		r.tables = append(r.tables, fields)
	}
	return nil
}

// readFields checks one inline table, called name, and fills in defaults.
func (k Key) readFields(v value, name string) (map[string]reading, *fault) {
	all := map[string]reading{}
	for _, f := range v.fields {
		at := slices.IndexFunc(k.Fields, func(known Key) bool { return known.Name == f.key })
		if at < 0 {
			return nil, &fault{at: f.keySpan, problem: name + ": unknown key", nearest: nearestField(k.Fields, f.key)}
		}
		r, wrong := read(k.Fields[at], f.value)
		r.part = name + ", " + f.key
		if wrong != nil {
			wrong.problem = r.part + ": " + wrong.problem
			return nil, wrong
		}
		r.given = true
		all[f.key] = r
	}
	for _, known := range k.Fields {
		if _, given := all[known.Name]; given {
			continue
		}
		if known.Required {
			brace := span{v.span.from, v.span.from}
			return nil, &fault{at: brace, problem: name + " needs " + known.Name, allowed: known.Name + ", " + known.Allowed()}
		}
		all[known.Name] = known.ownDefault()
	}
	return all, nil
}
