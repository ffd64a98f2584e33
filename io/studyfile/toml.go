package studyfile

import (
	"bytes"
	"errors"
	"fmt"
	"strings"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// document is a TOML file: its values, and where each key stands.
type document struct {
	name string // as messages name it
	keys map[string]any
	at   map[string][2]int // line and column by path, such as entry[0].flow
}

// decode reads a TOML file. It returns false after a syntax error, which it reports.
func decode(name string, data []byte, f *faults) (*document, bool) {
	d := &document{name: name, keys: make(map[string]any), at: make(map[string][2]int)}
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	if err := toml.Unmarshal(data, &d.keys); err != nil {
		var e *toml.DecodeError
		line, column := 0, 0
		if errors.As(err, &e) {
			line, column = e.Position()
		}
		f.add(name, line, column, "this is not TOML: "+strings.TrimPrefix(err.Error(), "toml: "), "")
		return nil, false
	}
	d.locate(data)
	return d, true
}

// root is the file's top table, whose faults go to f.
func (d *document) root(f *faults) *table {
	return &table{keys: d.keys, report: func(path, text, hint string) {
		line, column := d.position(path)
		f.add(d.name, line, column, text, hint)
	}}
}

// position finds a key, or the nearest table that holds it.
func (d *document) position(path string) (line, column int) {
	path = strings.TrimPrefix(path, ".")
	for path != "" {
		if at, ok := d.at[path]; ok {
			return at[0], at[1]
		}
		cut := strings.LastIndexAny(path, ".[")
		if cut < 0 {
			return 0, 0
		}
		path = path[:cut]
	}
	return 0, 0
}

// locate walks over the document once and notes where each key stands.
func (d *document) locate(data []byte) {
	var p unstable.Parser
	p.Reset(data)
	counts := make(map[string]int) // tables of each array so far
	prefix := ""
	for p.NextExpression() {
		e := p.Expression()
		switch e.Kind {
		case unstable.Table, unstable.ArrayTable:
			path := d.header(&p, e, counts)
			if e.Kind == unstable.ArrayTable {
				full := fmt.Sprintf("%s[%d]", path, counts[path])
				d.at[full] = d.at[path]
				counts[path]++
				path = full
			}
			prefix = path
		case unstable.KeyValue:
			d.value(&p, prefix, e)
		}
	}
}

// header notes a table's header and returns its path, with the number of the last table of each array before it.
func (d *document) header(p *unstable.Parser, e *unstable.Node, counts map[string]int) string {
	path := ""
	for it := e.Key(); it.Next(); {
		if n := counts[path]; n > 0 {
			path = fmt.Sprintf("%s[%d]", path, n-1)
		}
		path = join(path, string(it.Node().Data))
		d.note(p, path, it.Node())
	}
	return path
}

// value notes a key and what is below it.
func (d *document) value(p *unstable.Parser, prefix string, e *unstable.Node) {
	path := prefix
	for it := e.Key(); it.Next(); {
		path = join(path, string(it.Node().Data))
		d.note(p, path, it.Node())
	}
	d.inside(p, path, e.Value())
}

// inside notes the keys of inline tables, also within arrays.
func (d *document) inside(p *unstable.Parser, path string, v *unstable.Node) {
	switch v.Kind {
	case unstable.InlineTable:
		for it := v.Children(); it.Next(); {
			d.value(p, path, it.Node())
		}
	case unstable.Array:
		i := 0
		for it := v.Children(); it.Next(); i++ {
			item := fmt.Sprintf("%s[%d]", path, i)
			d.note(p, item, it.Node())
			d.inside(p, item, it.Node())
		}
	}
}

func (d *document) note(p *unstable.Parser, path string, n *unstable.Node) {
	if n.Raw.Length == 0 {
		return
	}
	start := p.Shape(n.Raw).Start
	d.at[path] = [2]int{start.Line, start.Column}
}

func join(path, key string) string {
	if path == "" {
		return key
	}
	return path + "." + key
}
