package main

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"
)

// call runs a command line in this process and returns its exit status and what it printed.
func call(t *testing.T, ctx context.Context, args ...string) (code int, out, complaints string) {
	t.Helper()
	dir := t.TempDir()
	var files [2]*os.File
	for i, name := range []string{"out", "err"} {
		f, err := os.Create(filepath.Join(dir, name))
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		files[i] = f
	}
	code = command(session{ctx, files[0], files[1]}, args)
	var text [2]string
	for i, f := range files {
		b, err := os.ReadFile(f.Name())
		if err != nil {
			t.Fatal(err)
		}
		text[i] = string(b)
	}
	return code, text[0], text[1]
}

// An interrupted run ends with status 1, and the results of the run before are as they were.
func TestInterrupted(t *testing.T) {
	demo := filepath.Join(t.TempDir(), "demo")
	if code, _, complaints := call(t, context.Background(), "sample", demo); code != 0 {
		t.Fatal(complaints)
	}
	kept := filepath.Join(demo, "results", "base", "links.csv")
	if err := os.MkdirAll(filepath.Dir(kept), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(kept, []byte("earlier"), 0o644); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	code, out, complaints := call(t, ctx, "run", demo)
	if code != exitFailed || out != "" || !strings.Contains(complaints, "interrupted: earlier results are as they were") {
		t.Errorf("status %d, stdout %q, stderr %q", code, out, complaints)
	}
	if got, err := os.ReadFile(kept); err != nil || string(got) != "earlier" {
		t.Errorf("earlier results: %q, %v", got, err)
	}
	left, err := os.ReadDir(filepath.Join(demo, "results"))
	if err != nil || len(left) != 1 {
		t.Errorf("beside them: %v, %v", left, err)
	}
}

// The demo's screen fits a terminal and its figures are those worked by hand in the demo's README: a point queue at
// 4200 veh/h begins at 07:08:36, is gone at 09:36:07 and costs 692.4 veh·h, and those who leave at Brindlowe Way lose 12 %
// of the time lost upstream of it, which makes 740 veh·h within half a percent.
func TestDemoScreen(t *testing.T) {
	demo := filepath.Join(t.TempDir(), "demo")
	if code, _, complaints := call(t, context.Background(), "sample", demo); code != 0 {
		t.Fatal(complaints)
	}
	for units, places := range map[string][]string{
		"metric": {"(km 15.0)", "3.9 km at most", "(km 11.1)", "veh·km"},
		"us":     {"(MP 9.3)", "2.4 mi at most", "(MP 6.9)", "veh·mi"},
	} {
		code, out, complaints := call(t, context.Background(), "run", demo, "--units", units, "--alternative", "works-c")
		if code != 0 {
			t.Fatal(complaints)
		}
		base, _, _ := strings.Cut(out, "works-c")
		for _, want := range append(places, "from 07:09, cleared 09:36", "lets 4,200 veh/h through", "739 veh·h in all") {
			if !strings.Contains(base, want) {
				t.Errorf("%s: the screen lacks %q:\n%s", units, want, base)
			}
		}
		if n := strings.Count(base, "\n"); n < 24 || n > 40 {
			t.Errorf("%s: the screen has %d lines, want 24 to 40", units, n)
		}
		for _, line := range strings.Split(strings.ReplaceAll(base, demo, "demo"), "\n") {
			if utf8.RuneCountInString(line) > columns {
				t.Errorf("%s: longer than %d columns: %q", units, columns, line)
			}
		}
	}
}
