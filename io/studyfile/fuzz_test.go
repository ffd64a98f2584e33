package studyfile

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// readWith reads the faultless study with one file's content replaced. Whatever it holds, the reader must return, and
// every error must name a file.
func readWith(t *testing.T, file string, content []byte) {
	dir := t.TempDir()
	for name, text := range faultless {
		data := []byte(text)
		if name == file {
			data = content
		}
		if name == "demand.toml" && file == "counts.csv" {
			data = []byte(strings.Replace(text, "start = \"06:00\"\nevery = \"60 min\"\nflow = [900, 1200]", "counts = \"counts.csv\"\nunit = \"veh\"", 1))
		}
		if err := os.WriteFile(filepath.Join(dir, name), data, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	s, err := Read(filepath.Join(dir, "study.toml"))
	if err == nil {
		if s.Base == nil || s.Base.Network == nil || len(s.Base.Demand.Entries) == 0 {
			t.Fatal("no error, but no study either")
		}
		return
	}
	list, ok := err.(Errors)
	if !ok || len(list) == 0 {
		t.Fatalf("the error is %T: %v", err, err)
	}
	for _, e := range list {
		if !strings.HasPrefix(e.File, dir) || e.Text == "" {
			t.Errorf("error without file or text: %+v", e)
		}
	}
}

func FuzzStudyFile(f *testing.F) {
	text := faultless["study.toml"]
	f.Add([]byte(text))
	f.Add([]byte(strings.ReplaceAll(text, "\n", "\r\n")))
	f.Add([]byte("\ufeff" + text))
	f.Add([]byte(text + "[[alternative]]\nname = \"a\"\n[[alternative.lane_closure]]\nlinks = [\"E1\"]\nlanes = 1\n"))
	f.Add([]byte(text + "[[outflow]]\nlink = \"E2\"\nflow = 1e308\n[queue]\nwhen = \"60 %\"\n"))
	f.Add([]byte("a = [[[[[[[[[[[[{a.b.c = [1,2]}]]]]]]]]]]]]\ntime.start = \"06:00\""))
	f.Add([]byte("diagram = 3\ntime = [1]\ncorridor = {}\nalternative = [3]"))
	f.Fuzz(func(t *testing.T, data []byte) { readWith(t, "study.toml", data) })
}

func FuzzDemandFile(f *testing.F) {
	text := faultless["demand.toml"]
	f.Add([]byte(text))
	f.Add([]byte("[class.a]\npce = 1e300\n" + text))
	f.Add([]byte(strings.Replace(text, "0.9", "[0.9, 0.8]", 1)))
	f.Add([]byte("entry = 1\nturning = [[1]]\nclass = []"))
	f.Fuzz(func(t *testing.T, data []byte) { readWith(t, "demand.toml", data) })
}

func FuzzNetworkFile(f *testing.F) {
	text := faultless["network.geojson"]
	f.Add([]byte(text))
	f.Add([]byte("\ufeff" + strings.ReplaceAll(text, "\n", "\r\n")))
	f.Add([]byte(strings.ReplaceAll(text, `"E1"`, "17")))
	f.Add([]byte(strings.Replace(text, `"geometry": {"type": "Point", "coordinates": [-40.00, 12.02]}`, `"geometry": null`, 1)))
	f.Add([]byte(strings.Replace(text, "12.00", "1e400", 1)))
	f.Add([]byte(`{"type": "FeatureCollection", "features": [null, 3, {}, {"type": "Feature"}]}`))
	f.Fuzz(func(t *testing.T, data []byte) { readWith(t, "network.geojson", data) })
}

func FuzzCountsFile(f *testing.F) {
	f.Add([]byte(faultless["counts.csv"]))
	f.Add([]byte("\ufefftime,E1\r\n06:00,\"9\"\r\n07:00,1e9\r\n"))
	f.Add([]byte("time\n"))
	f.Add([]byte("time,E1,E1\n06:00,1,2\n06:00,1,2\n\"07:00,1"))
	f.Fuzz(func(t *testing.T, data []byte) { readWith(t, "counts.csv", data) })
}
