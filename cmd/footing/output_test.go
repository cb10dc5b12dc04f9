package main

import (
	"os"
	"path/filepath"
	"testing"

	"footing/audit/report"
)

// TestCommitWritesAllOrNothing takes the folder of the second file away after the
// check: the first is not written either, and what it would have replaced stays.
func TestCommitWritesAllOrNothing(t *testing.T) {
	dir := t.TempDir()
	first, folder := filepath.Join(dir, "first.md"), filepath.Join(dir, "folder")
	const was = "<!-- footing-audit/1 markdown -->\nold\n"
	if err := os.WriteFile(first, []byte(was), 0o640); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir(folder, 0o700); err != nil {
		t.Fatal(err)
	}
	add := func(o *outputs, path string) {
		t.Helper()
		if err := o.add("--output", path, report.FormNamed("markdown")); err != nil {
			t.Fatal(err)
		}
		o.taken[len(o.taken)-1].text = []byte("new\n")
	}
	var broken outputs
	add(&broken, first)
	add(&broken, filepath.Join(folder, "second.md"))
	if err := os.Remove(folder); err != nil {
		t.Fatal(err)
	}
	if err := broken.commit(); err == nil {
		t.Error("a file was written to a folder that is gone")
	}
	holds(t, dir, first, was)

	var whole outputs
	add(&whole, first)
	if err := whole.commit(); err != nil {
		t.Fatal(err)
	}
	holds(t, dir, first, "new\n")
	info, err := os.Stat(first)
	if err != nil {
		t.Fatal(err)
	}
	if info.Mode().Perm() != 0o640 {
		t.Errorf("the file's mode became %v", info.Mode().Perm())
	}
}

// holds looks at the one file that a folder should have.
func holds(t *testing.T, dir, path, want string) {
	t.Helper()
	got, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if string(got) != want {
		t.Errorf("the file holds %q, want %q", got, want)
	}
	all, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	if len(all) != 1 {
		t.Errorf("the folder holds %d files", len(all))
	}
}

func TestParseOutput(t *testing.T) {
	junit := report.FormNamed("junit")
	cases := []struct {
		value      string
		given      *report.Form
		form, path string
	}{
		{"a.md", nil, "markdown", "a.md"},
		{"a.md", junit, "markdown", "a.md"},
		{"statement=a.md", nil, "statement", "a.md"},
		{"json=a=b.md", nil, "json", "a=b.md"},
		{"a=b.md", nil, "markdown", "a=b.md"}, // what stands before the = is no form
		{"report", junit, "junit", "report"},
		{"report", nil, "", ""},
		{"json=", nil, "", ""},
		{"", junit, "", ""},
	}
	for _, c := range cases {
		form, path, err := parseOutput(c.value, c.given)
		got := ""
		if form != nil {
			got = form.Name
		}
		if got != c.form || path != c.path || (err != nil) != (c.form == "") {
			t.Errorf("%q: %q to %q, error %v; want %q to %q", c.value, got, path, err, c.form, c.path)
		}
	}
}
