package main

import (
	"bytes"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

var update = flag.Bool("update", false, "rewrite the expected output in the scripts")

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"footing": main})
}

// TestScripts runs testdata/script/*.txtar: commands with their standard
// output, standard error and exit code. The folder testdata of the project
// lies beside each script's files as testdata.
func TestScripts(t *testing.T) {
	root, err := filepath.Abs("../..")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:           filepath.Join(root, "testdata", "script"),
		UpdateScripts: *update,
		Setup: func(env *testscript.Env) error {
			return os.Symlink(filepath.Join(root, "testdata"), filepath.Join(env.WorkDir, "testdata"))
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"exits": exits,
			"lines": lines,
		},
	})
}

// exits runs a command and holds it to an exit code: exits 2 footing audit x.csv
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits CODE COMMAND...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	err = ts.Exec(args[1], args[2:]...)
	got := 0
	var exit *exec.ExitError
	if err != nil {
		if !asExit(err, &exit) {
			ts.Fatalf("%v", err)
		}
		got = exit.ExitCode()
	}
	if got != want {
		ts.Fatalf("%s: exit code %d, want %d", strings.Join(args[1:], " "), got, want)
	}
}

func asExit(err error, exit **exec.ExitError) bool {
	e, ok := err.(*exec.ExitError)
	*exit = e
	return ok
}

// lines holds a file, or stdout, to a most number of lines and of columns:
// lines stdout 24 80
func lines(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 3 {
		ts.Fatalf("usage: lines FILE MOST WIDEST")
	}
	most, err := strconv.Atoi(args[1])
	ts.Check(err)
	widest, err := strconv.Atoi(args[2])
	ts.Check(err)
	text := strings.TrimSuffix(ts.ReadFile(args[0]), "\n")
	all := strings.Split(text, "\n")
	if len(all) > most {
		ts.Fatalf("%d lines, at most %d are allowed:\n%s", len(all), most, text)
	}
	for _, line := range all {
		if len([]rune(line)) > widest {
			ts.Fatalf("a line of %d columns: %s", len([]rune(line)), line)
		}
	}
}

// TestReadmeCommands runs every command that README gives for the demo, word
// for word but for the program's name.
func TestReadmeCommands(t *testing.T) {
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	// What the commands write stays out of the project.
	root, err := filepath.Abs("../..")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	if err := os.Symlink(filepath.Join(root, "testdata"), "testdata"); err != nil {
		t.Fatal(err)
	}
	ran := 0
	for line := range strings.Lines(string(text)) {
		command, ok := strings.CutPrefix(strings.TrimSpace(line), "go run ./cmd/footing ")
		if !ok {
			continue
		}
		command, exit, _ := strings.Cut(command, "   # exits ")
		want := 0
		if exit != "" {
			if want, err = strconv.Atoi(strings.TrimSpace(exit)); err != nil {
				t.Fatalf("%s: %v", line, err)
			}
		}
		ran++
		var stdout, stderr bytes.Buffer
		if got := run(strings.Fields(command), strings.NewReader(""), &stdout, &stderr); got != want {
			t.Errorf("%s: exit code %d, want %d\n%s%s", command, got, want, stdout.String(), stderr.String())
		}
	}
	if ran < 2 {
		t.Errorf("README gives %d commands", ran)
	}
}
