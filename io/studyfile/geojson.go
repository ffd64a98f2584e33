package studyfile

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"sort"
	"strings"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/geojson"

	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// feature is one feature of the network file and where it begins.
type feature struct {
	*geojson.Feature
	number int // from 1
	line   int
}

// road is a network file being read.
type road struct {
	file     string
	f        *faults
	study    *draft
	features []feature
	nodes    []network.Node
	links    []network.Link
	lines    []int // by link: line of its feature
	nodeLine map[string]int
	byName   map[string]network.NodeID
	places   map[[2]int][]network.NodeID // nodes by cell of a fine grid
}

// readNetwork reads a GeoJSON FeatureCollection. It returns nil after faults.
func (d *draft) readNetwork(file string, data []byte) *network.Network {
	r := &road{
		file: file, f: d.f, study: d, nodeLine: make(map[string]int),
		byName: make(map[string]network.NodeID), places: make(map[[2]int][]network.NodeID),
	}
	before := len(d.f.list)
	r.split(data)
	for i := range r.features {
		r.point(&r.features[i])
	}
	for i := range r.features {
		r.line(&r.features[i])
	}
	if len(r.links) == 0 && len(d.f.list) == before {
		d.f.add(file, 0, 0, "the network has no links: a LineString is one", "")
	}
	if len(d.f.list) > before {
		return nil
	}
	n, err := network.New(r.nodes, r.links)
	if err != nil {
		for _, p := range err.(network.Problems) {
			r.problem(p)
		}
		return nil
	}
	d.roadFile, d.linkLine, d.nodeLine = file, r.lines, r.nodeLine
	return n
}

// problem reports a fault of the network at the line of its link or node.
func (r *road) problem(p network.Problem) {
	line := 0
	switch {
	case p.Link >= 0:
		line = r.lines[p.Link]
	case p.Node >= 0:
		line = r.nodeLine[r.nodes[p.Node].Name]
	}
	r.f.add(r.file, line, 0, p.Text, p.Hint)
}

// split reads the collection feature by feature, so that each knows its line.
func (r *road) split(data []byte) {
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	var top struct {
		Type     string            `json:"type"`
		Features []json.RawMessage `json:"features"`
	}
	if err := json.Unmarshal(data, &top); err != nil {
		r.f.add(r.file, lineOf(data, jsonOffset(err)), 0, "this is not GeoJSON: "+jsonText(err), "")
		return
	}
	if top.Type != "FeatureCollection" {
		r.f.add(r.file, 1, 0, fmt.Sprintf("the top of the file is of type `%s`: it must be a FeatureCollection (RFC 7946)", top.Type), "")
		return
	}
	offset, line := 0, 1
	for i, raw := range top.Features {
		at := bytes.Index(data[offset:], raw)
		line += bytes.Count(data[offset:offset+at], []byte("\n"))
		ft := feature{number: i + 1, line: line}
		line += bytes.Count(raw, []byte("\n"))
		offset += at + len(raw)
		var err error
		if ft.Feature, err = geojson.UnmarshalFeature(raw); err != nil {
			r.fault(&ft, "", "this is no feature of GeoJSON: %s", jsonText(err))
			continue
		}
		r.features = append(r.features, ft)
	}
}

// jsonOffset is the byte at which JSON went wrong, 0 unknown.
func jsonOffset(err error) int {
	switch e := err.(type) {
	case *json.SyntaxError:
		return int(e.Offset)
	case *json.UnmarshalTypeError:
		return int(e.Offset)
	}
	return 0
}

func jsonText(err error) string {
	return strings.TrimPrefix(strings.TrimPrefix(err.Error(), "json: "), "geojson: ")
}

func lineOf(data []byte, offset int) int {
	return 1 + bytes.Count(data[:min(offset, len(data))], []byte("\n"))
}

// fault reports what is wrong with a feature.
func (r *road) fault(ft *feature, hint, format string, args ...any) {
	name := fmt.Sprintf("feature %d", ft.number)
	if ft.Feature != nil {
		if id := ft.id(); id != "" {
			name += " (`" + id + "`)"
		}
	}
	r.f.add(r.file, ft.line, 0, name+": "+fmt.Sprintf(format, args...), hint)
}

// id is the property `id`, else the feature's own id, as text.
func (ft *feature) id() string {
	for _, x := range []any{ft.Properties["id"], ft.ID} {
		switch v := x.(type) {
		case string:
			return v
		case float64:
			return fmt.Sprintf("%.15g", v)
		}
	}
	return ""
}

// textOf is a text or number property as text.
func (ft *feature) textOf(key string) string {
	switch v := ft.Properties[key].(type) {
	case string:
		return v
	case float64:
		return fmt.Sprintf("%.15g", v)
	}
	return ""
}

// point reads a node.
func (r *road) point(ft *feature) {
	p, ok := ft.Geometry.(orb.Point)
	if !ok {
		return
	}
	id := ft.id()
	if id == "" {
		r.fault(ft, "", "a node needs the property `id`")
		return
	}
	if !onEarth(p) {
		r.fault(ft, "", "%v is no longitude and latitude in degrees", p)
		return
	}
	if line, twice := r.nodeLine[id]; twice {
		r.fault(ft, "", "node `%s` stands already in line %d", id, line)
		return
	}
	r.nodeLine[id] = ft.line
	title := ft.textOf("name")
	if title == "" {
		title = id
	}
	r.addNode(network.Node{Name: id, Title: title, At: p})
}

func onEarth(p orb.Point) bool {
	return math.Abs(p[0]) <= 180 && math.Abs(p[1]) <= 90
}

func (r *road) addNode(n network.Node) network.NodeID {
	id := network.NodeID(len(r.nodes))
	r.nodes = append(r.nodes, n)
	r.byName[n.Name] = id
	c := gridCell(n.At)
	r.places[c] = append(r.places[c], id)
	return id
}

// gridCell is the cell of 1e-5 degrees (about a metre) that holds a point.
func gridCell(p [2]float64) [2]int {
	return [2]int{int(math.Floor(p[0] * 1e5)), int(math.Floor(p[1] * 1e5))}
}

// near finds the node within 1 m of a point, or makes one.
func (r *road) near(p [2]float64) network.NodeID {
	c := gridCell(p)
	wide := 1 + int(1.2/math.Max(0.02, math.Cos(p[1]*math.Pi/180))) // a degree of longitude shrinks with latitude
	for dx := -wide; dx <= wide; dx++ {
		for dy := -2; dy <= 2; dy++ {
			for _, id := range r.places[[2]int{c[0] + dx, c[1] + dy}] {
				if network.Geodesic(r.nodes[id].At, p) <= 1 {
					return id
				}
			}
		}
	}
	name := fmt.Sprintf("node-%d", len(r.nodes)+1)
	for r.has(name) {
		name += "a"
	}
	return r.addNode(network.Node{Name: name, Title: name, At: p})
}

func (r *road) has(node string) bool { _, ok := r.byName[node]; return ok }

// end finds a link's end by its property, or by its place.
func (r *road) end(ft *feature, key string, at [2]float64) network.NodeID {
	name := ft.textOf(key)
	if name == "" {
		return r.near(at)
	}
	if id, ok := r.byName[name]; ok {
		return id
	}
	return r.addNode(network.Node{Name: name, Title: name, At: at})
}

// line reads a link.
func (r *road) line(ft *feature) {
	line, ok := ft.Geometry.(orb.LineString)
	if !ok {
		if _, point := ft.Geometry.(orb.Point); !point {
			kind := "none"
			if ft.Geometry != nil {
				kind = ft.Geometry.GeoJSONType()
			}
			r.fault(ft, "a link is a LineString, a node a Point", "its geometry is %s", kind)
		}
		return
	}
	if len(line) < 2 {
		r.fault(ft, "", "a line needs at least 2 positions, this one has %d", len(line))
		return
	}
	path := make([][2]float64, len(line))
	for i, p := range line {
		if !onEarth(p) {
			r.fault(ft, "", "position %d, %v, is no longitude and latitude in degrees", i+1, p)
			return
		}
		path[i] = p
	}
	l := network.Link{
		Name: ft.id(), Title: ft.textOf("name"), Kind: ft.textOf("kind"), Line: path,
		From: r.end(ft, "from", path[0]), To: r.end(ft, "to", path[len(path)-1]),
		Properties: ft.Properties,
	}
	if l.Title == "" {
		l.Title = l.Name
	}
	if l.Name == "" {
		r.fault(ft, "", "a link needs an `id`, as property or as the feature's own")
		return
	}
	r.measure(ft, &l)
	r.study.chooseDiagram(r, ft, &l)
	r.links = append(r.links, l)
	r.lines = append(r.lines, ft.line)
}

// measure reads lanes and length.
func (r *road) measure(ft *feature, l *network.Link) {
	switch v := ft.Properties["lanes"].(type) {
	case float64:
		l.Lanes = v
		if !(v > 0) {
			r.fault(ft, "", "`lanes` is %g: a link has more than 0", v)
		}
	case nil:
		r.fault(ft, "", "a link needs the property `lanes`")
	default:
		r.fault(ft, "", "`lanes` must be a number, found %v", v)
	}
	drawn := network.LineLength(l.Line)
	length, given := r.quantity(ft, "length", unit.Length)
	switch {
	case !given && !(drawn > 0):
		r.fault(ft, "give `length`", "its line has no length")
		drawn = 1
		fallthrough
	case !given:
		l.Length = drawn
	case !(length > 0):
		r.fault(ft, "", "`length` must be more than 0 m")
		l.Length = 1
	default:
		l.Length = length
		if math.Abs(length-drawn) > 0.2*length {
			r.study.warn("%s:%d: link `%s` is given as %.0f m long, but its line measures %.0f m: %.0f m is used", r.file, ft.line, l.Name, length, drawn, length)
		}
	}
	if l.Lanes <= 0 {
		l.Lanes = 1
	}
}

// quantity reads a property that is a number in the default unit or a text with a unit.
func (r *road) quantity(ft *feature, key string, kind unit.Kind) (x float64, given bool) {
	var err error
	switch v := ft.Properties[key].(type) {
	case nil:
		return 0, false
	case float64:
		x, err = unit.FromNumber(kind, v)
	case string:
		x, err = unit.Parse(kind, v)
	default:
		err = fmt.Errorf("found %v, want a number or a text such as %s", v, example(kind))
	}
	if err != nil {
		r.fault(ft, "", "`%s`: %v", key, err)
		return 0, false
	}
	return x, true
}

// sortedKeys lists the keys of a map in order.
func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}
