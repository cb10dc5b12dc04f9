package report

import (
	"encoding/json"
	"maps"
	"reflect"
	"slices"
	"strings"
	"testing"

	"footing/audit"
)

// node is what the test needs of a schema.
type node struct {
	Description string           `json:"description"`
	Ref         string           `json:"$ref"`
	Type        any              `json:"type"`
	Enum        []any            `json:"enum"`
	Properties  map[string]*node `json:"properties"`
	Required    []string         `json:"required"`
	Additional  any              `json:"additionalProperties"`
	Items       *node            `json:"items"`
	MinItems    int              `json:"minItems"`
	MaxItems    int              `json:"maxItems"`
	AnyOf       []*node          `json:"anyOf"`
	Defs        map[string]*node `json:"$defs"`
}

// types lists the JSON types that a node allows; a reference is "object".
func (n *node) types() []string {
	var all []string
	add := func(t string) {
		if !slices.Contains(all, t) {
			all = append(all, t)
		}
	}
	switch v := n.Type.(type) {
	case string:
		add(v)
	case []any:
		for _, t := range v {
			add(t.(string))
		}
	}
	if n.Ref != "" {
		add("object")
	}
	for _, branch := range n.AnyOf {
		for _, t := range branch.types() {
			add(t)
		}
	}
	slices.Sort(all)
	return all
}

// reference is the definition that a node points to, null or not.
func (n *node) reference() string {
	for _, branch := range append([]*node{n}, n.AnyOf...) {
		if branch.Ref != "" {
			return strings.TrimPrefix(branch.Ref, "#/$defs/")
		}
	}
	return ""
}

// TestSchemaFollowsTheResult walks the structs of the result beside the schema:
// a field that one of the two lacks, or of another type or presence, fails, and
// so does a definition that no struct has.
func TestSchemaFollowsTheResult(t *testing.T) {
	var root node
	if err := json.Unmarshal(auditSchema, &root); err != nil {
		t.Fatal(err)
	}
	w := &schemaWalk{t: t, defs: root.Defs, seen: map[string]bool{"evidence": true}} // evidence is a map of whatever a rule tells
	w.structure("the result", reflect.TypeFor[audit.Result](), &root)
	for name := range root.Defs {
		if !w.seen[name] {
			t.Errorf("the schema defines %q, which no struct of the result has", name)
		}
	}
	if len(w.seen) < 15 {
		t.Errorf("only %d definitions were walked", len(w.seen))
	}
}

type schemaWalk struct {
	t    *testing.T
	defs map[string]*node
	seen map[string]bool
}

func (w *schemaWalk) structure(name string, of reflect.Type, n *node) {
	w.t.Helper()
	if n.Additional != false {
		w.t.Errorf("%s allows further fields", name)
	}
	var required []string
	left := maps.Clone(n.Properties)
	for f := range of.Fields() {
		if f.Type == reflect.TypeFor[*audit.Drawing]() {
			continue // for figures only; --per-row has what JSON tells of rows
		}
		key, options, _ := strings.Cut(f.Tag.Get("json"), ",")
		if key == "-" {
			continue // for other forms of report only
		}
		if key == "" {
			w.t.Errorf("%s: the field %s has no name in JSON", name, f.Name)
			continue
		}
		if options != "omitempty" {
			required = append(required, key)
		}
		p, ok := left[key]
		if !ok {
			w.t.Errorf("%s: the schema lacks %q", name, key)
			continue
		}
		delete(left, key)
		if p.Description == "" {
			w.t.Errorf("%s: %q is not described", name, key)
		}
		w.field(name+"."+key, f.Type, p, options == "omitempty")
	}
	for key := range left {
		w.t.Errorf("%s: the schema has %q, which the struct lacks", name, key)
	}
	slices.Sort(required)
	got := slices.Sorted(slices.Values(n.Required))
	if !slices.Equal(got, required) {
		w.t.Errorf("%s requires %v, want %v", name, got, required)
	}
}

// field compares one type with its node. absent is set for a field that is left
// out when it is empty: a pointer then is never null.
func (w *schemaWalk) field(name string, of reflect.Type, n *node, absent bool) {
	w.t.Helper()
	if of.Kind() == reflect.Pointer {
		of = of.Elem()
		want := jsonType(of)
		if !absent {
			want = append(want, "null")
		}
		w.expect(name, n, want)
	} else {
		w.expect(name, n, jsonType(of))
	}
	switch of.Kind() {
	case reflect.Struct:
		w.definition(name, of, n)
	case reflect.Slice, reflect.Array:
		if n.Items == nil {
			w.t.Errorf("%s: the schema does not say what it holds", name)
			return
		}
		if of.Kind() == reflect.Array && (n.MinItems != of.Len() || n.MaxItems != of.Len()) {
			w.t.Errorf("%s holds %d to %d items, want %d", name, n.MinItems, n.MaxItems, of.Len())
		}
		w.field(name+"[]", of.Elem(), n.Items, false)
	case reflect.String:
		if want := statesOf(of); want != nil && !slices.Equal(n.Enum, want) {
			w.t.Errorf("%s is one of %v, want %v", name, n.Enum, want)
		}
	}
}

func (w *schemaWalk) expect(name string, n *node, want []string) {
	w.t.Helper()
	slices.Sort(want)
	if got := n.types(); !slices.Equal(got, want) {
		w.t.Errorf("%s is %v in the schema, want %v", name, got, want)
	}
}

func (w *schemaWalk) definition(name string, of reflect.Type, n *node) {
	w.t.Helper()
	at := n.reference()
	def, ok := w.defs[at]
	if !ok {
		w.t.Errorf("%s points to %q, which is not defined", name, at)
		return
	}
	if want := strings.ReplaceAll(at, "_", ""); want != strings.ToLower(of.Name()) {
		w.t.Errorf("%s points to %q, and is a %s", name, at, of.Name())
	}
	if w.seen[at] {
		return
	}
	w.seen[at] = true
	w.structure(at, of, def)
}

// jsonType is how a type is written; a Number that is not defined is null.
func jsonType(of reflect.Type) []string {
	if of == reflect.TypeFor[audit.Number]() {
		return []string{"number", "null"}
	}
	switch of.Kind() {
	case reflect.Struct, reflect.Map:
		return []string{"object"}
	case reflect.Slice, reflect.Array:
		return []string{"array"}
	case reflect.String:
		return []string{"string"}
	case reflect.Bool:
		return []string{"boolean"}
	case reflect.Int, reflect.Uint64:
		return []string{"integer"}
	}
	return nil
}

// statesOf lists the values of the named string types.
func statesOf(of reflect.Type) []any {
	switch of {
	case reflect.TypeFor[audit.State]():
		return []any{string(audit.Pass), string(audit.Thin), string(audit.Warn), string(audit.Stop), string(audit.Skip)}
	case reflect.TypeFor[audit.Grade]():
		return []any{string(audit.Unsound), string(audit.Guarded), string(audit.Tentative), string(audit.Firm)}
	case reflect.TypeFor[audit.Standing]():
		return []any{string(audit.Quote), string(audit.QuoteWith), string(audit.DoNotQuote)}
	}
	return nil
}
