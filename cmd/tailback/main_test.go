package main

import (
	"bytes"
	"context"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"example.org/tailback/testdata"
	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"tailback": main})
}

// The scripts run the command as a process of its own. Beside testscript's commands they have
//
//	status N command args...   run a command that must exit with status N
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 filepath.Join("testdata", "script"),
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Cmds:                map[string]func(*testscript.TestScript, bool, []string){"status": status},
	})
}

func status(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N command args...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got, err := 0, ts.Exec(args[1], args[2:]...)
	var exit *exec.ExitError
	switch {
	case errors.As(err, &exit):
		got = exit.ExitCode()
	case err != nil:
		ts.Fatalf("%v", err)
	}
	if got != want {
		ts.Fatalf("exit status %d, want %d", got, want)
	}
}

// Each command line in the README's code blocks does what it says: exit status 0. They run one after the other in
// one folder that holds the demo where the repository does.
func TestReadmeCommands(t *testing.T) {
	text, err := os.ReadFile(filepath.Join("..", "..", "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	lines := readmeCommands(string(text))
	if len(lines) < 5 {
		t.Fatalf("found %d command lines in the README, want at least 5", len(lines))
	}
	t.Chdir(t.TempDir())
	if err := os.CopyFS("testdata", testdata.Sedgarth); err != nil {
		t.Fatal(err)
	}
	for _, line := range lines {
		out, err := os.Create("output.txt")
		if err != nil {
			t.Fatal(err)
		}
		code := command(session{context.Background(), out, out}, line)
		out.Close()
		if code != 0 {
			said, _ := os.ReadFile("output.txt")
			t.Errorf("%q exits with status %d:\n%s", line, code, said)
		}
	}
}

// readmeCommands lists the arguments of each command line in fenced blocks.
func readmeCommands(text string) [][]string {
	var list [][]string
	fenced := false
	for _, line := range strings.Split(text, "\n") {
		if strings.HasPrefix(line, "```") {
			fenced = !fenced
			continue
		}
		call := regexp.MustCompile(`^\s*(?:go run \./cmd/tailback|tailback) ([^#]*)`).FindStringSubmatch(line)
		if !fenced || call == nil {
			continue
		}
		var args []string
		for _, quoted := range regexp.MustCompile(`"[^"]*"|\S+`).FindAllString(call[1], -1) {
			args = append(args, strings.Trim(quoted, `"`))
		}
		list = append(list, args)
	}
	return list
}

func TestReadmeCommandsAreFound(t *testing.T) {
	text := "```sh\ngo run ./cmd/tailback run a.toml   # comment\ntailback run b.toml --queued \"50 km/h\"\n```\ntailback not this\n```\ntailbacks\n```\n"
	got := readmeCommands(text)
	want := [][]string{{"run", "a.toml"}, {"run", "b.toml", "--queued", "50 km/h"}}
	if len(got) != 2 || strings.Join(got[0], "|") != strings.Join(want[0], "|") || strings.Join(got[1], "|") != strings.Join(want[1], "|") {
		t.Errorf("got %q, want %q", got, want)
	}
}

// What sample writes is the demo study byte for byte.
func TestSampleIsTheDemo(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "demo")
	out, err := os.Create(filepath.Join(t.TempDir(), "out"))
	if err != nil {
		t.Fatal(err)
	}
	defer out.Close()
	if code := command(session{context.Background(), out, out}, []string{"sample", dir}); code != 0 {
		t.Fatalf("exit status %d", code)
	}
	for _, name := range []string{"study.toml", "demand.toml", "counts.csv", "network.geojson", "README.md"} {
		got, err := os.ReadFile(filepath.Join(dir, name))
		if err != nil {
			t.Error(err)
			continue
		}
		want, err := os.ReadFile(filepath.Join("..", "..", "testdata", "sedgarth", name))
		if err != nil {
			t.Error(err)
			continue
		}
		if !bytes.Equal(got, want) {
			t.Errorf("%s differs from the demo study's", name)
		}
	}
}
