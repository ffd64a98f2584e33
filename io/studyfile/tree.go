package studyfile

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/tailback/network/unit"
)

// table is one TOML table below [[alternative]], with the path of keys that leads to it and where faults go.
type table struct {
	path   string // such as alternative[0].lane_closure[1]
	keys   map[string]any
	report func(path, text, hint string)
	bad    bool // a fault was found in it
}

// fault reports what is wrong with a key, "" for the table itself.
func (t *table) fault(key, hint, format string, args ...any) {
	t.bad = true
	t.report(t.at(key), fmt.Sprintf(format, args...), hint)
}

func (t *table) at(key string) string {
	if key == "" {
		return t.path
	}
	return t.path + "." + key
}

// known reports every key that is not in a list of words, and the word that is spelled most like it.
func (t *table) known(words string) {
	list := strings.Fields(words)
	for key := range t.keys {
		if slices.Contains(list, key) {
			continue
		}
		hint := "known here are `" + strings.Join(list, "`, `") + "`"
		if near := nearest(key, list); near != "" {
			hint = "did you mean `" + near + "`?"
		}
		t.fault(key, hint, "unknown key `%s`", key)
	}
}

// has reports whether a key is given.
func (t *table) has(key string) bool { _, ok := t.keys[key]; return ok }

// text reads a text; "" where it is not given.
func (t *table) text(key string) string {
	switch x := t.keys[key].(type) {
	case nil:
	case string:
		return x
	default:
		t.fault(key, "", "`%s` must be a text in quotes, found %v", key, x)
	}
	return ""
}

// number reads a plain number.
func (t *table) number(key string, otherwise float64) float64 {
	switch x := t.keys[key].(type) {
	case nil:
	case int64:
		return float64(x)
	case float64:
		if !math.IsNaN(x) && !math.IsInf(x, 0) {
			return x
		}
		t.fault(key, "", "`%s` must be a finite number, found %v", key, x)
	default:
		t.fault(key, "", "`%s` must be a number, found %v", key, x)
	}
	return otherwise
}

// quantity reads a text with a unit; a share may be a plain number.
func (t *table) quantity(key string, kind unit.Kind, otherwise float64) float64 {
	var x float64
	var err error
	switch v := t.keys[key].(type) {
	case nil:
		return otherwise
	case string:
		x, err = unit.Parse(kind, v)
	case int64, float64:
		if kind != unit.Share {
			t.fault(key, "", "`%s` needs a unit in quotes, such as %s", key, example(kind))
			return otherwise
		}
		x, err = unit.FromNumber(kind, t.number(key, 0))
	default:
		err = fmt.Errorf("found %v, want a %s such as %s", v, kind, example(kind))
	}
	if err != nil {
		t.fault(key, "", "`%s`: %v", key, err)
		return otherwise
	}
	return x
}

// example shows how a quantity is written.
func example(kind unit.Kind) string {
	return map[unit.Kind]string{
		unit.Speed: `"80 km/h"`, unit.Length: `"300 m"`, unit.Flow: `"900 veh/h"`, unit.FlowPerLane: `"1550 veh/h/lane"`,
		unit.DensityPerLane: `"130 veh/km/lane"`, unit.Duration: `"15 min"`, unit.Share: "0.9",
	}[kind]
}

// clock reads a clock time.
func (t *table) clock(key string, otherwise float64) float64 {
	if !t.has(key) {
		return otherwise
	}
	x, err := unit.ParseClock(t.text(key))
	if err != nil {
		t.fault(key, "", "`%s`: %v", key, err)
		return otherwise
	}
	return x
}

// texts reads a list of texts.
func (t *table) texts(key string) []string {
	list, ok := t.keys[key].([]any)
	if !ok {
		if t.has(key) {
			t.fault(key, "", "`%s` must be a list of texts, such as [\"E1\", \"E2\"]", key)
		}
		return nil
	}
	var texts []string
	for _, x := range list {
		s, ok := x.(string)
		if !ok {
			t.fault(key, "", "`%s` must hold texts in quotes, found %v", key, x)
			continue
		}
		texts = append(texts, s)
	}
	return texts
}

// tables reads a list of tables.
func (t *table) tables(key string) []*table {
	var list []*table
	add := func(m map[string]any) {
		list = append(list, &table{path: fmt.Sprintf("%s[%d]", t.at(key), len(list)), keys: m, report: t.report})
	}
	switch x := t.keys[key].(type) {
	case nil:
	case []map[string]any:
		for _, m := range x {
			add(m)
		}
	case []any:
		for _, v := range x {
			m, ok := v.(map[string]any)
			if !ok {
				t.fault(key, "", "`%s` must hold tables in braces, found %v", key, v)
				continue
			}
			add(m)
		}
	default:
		t.fault(key, "", "`%s` must be a list of tables", key)
	}
	return list
}

// table reads one table; nil where it is not given.
func (t *table) table(key string) *table {
	switch x := t.keys[key].(type) {
	case nil:
	case map[string]any:
		return &table{path: t.at(key), keys: x, report: t.report}
	default:
		t.fault(key, "", "`%s` must be a table in braces, found %v", key, x)
	}
	return nil
}

// truth reads true or false.
func (t *table) truth(key string) bool {
	switch x := t.keys[key].(type) {
	case nil:
	case bool:
		return x
	default:
		t.fault(key, "", "`%s` must be true or false, found %v", key, x)
	}
	return false
}
