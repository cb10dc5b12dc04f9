package main

import (
	"fmt"
	"os"
	"strings"
	"testing"

	"footing/rules"
)

// TestReadmeRules keeps README's table equal to the list of rules; -update
// rewrites it.
func TestReadmeRules(t *testing.T) {
	const from, to = "<!-- rules: kept equal to the list by a test -->\n", "<!-- end of rules -->\n"
	raw, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	head, rest, found := strings.Cut(string(raw), from)
	table, tail, closed := strings.Cut(rest, to)
	if !found || !closed {
		t.Fatal("README lacks the marks around its table of rules")
	}
	want := ruleTable()
	if table == want {
		return
	}
	if *update {
		if err := os.WriteFile("../../README.md", []byte(head+from+want+to+tail), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	t.Errorf("README's table of rules is\n%s\nthe list gives\n%s", table, want)
}

func ruleTable() string {
	var b strings.Builder
	b.WriteString("| rule | family | asks |\n| --- | --- | --- |\n")
	for _, r := range rules.All {
		fmt.Fprintf(&b, "| `%s` | %s | %s |\n", r.Name, r.Family, r.Asks)
	}
	return b.String()
}
