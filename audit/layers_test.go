package audit

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// mayImport is the import plan: each package with the packages of ours that it
// may import. Data flows the other way.
var mayImport = map[string][]string{
	"cmd/footing":     {"audit", "audit/figure", "audit/report", "rules", "rules/model", "rules/wording", "readers"},
	"audit/report":    {"audit", "audit/figure", "rules", "rules/wording", "readers"},
	"audit/figure":    {"audit", "rules/wording"},
	"audit":           {"audit/calibrate", "rules", "rules/model", "rules/numeric", "rules/remedy", "rules/wording", "readers"},
	"audit/calibrate": {"rules", "rules/numeric"},
	"rules":           {"rules/model", "rules/numeric", "rules/remedy", "rules/wording", "readers"},
	"rules/remedy":    {"rules/model", "rules/numeric", "readers"},
	"rules/model":     {"rules/numeric", "readers"},
	"rules/numeric":   {},
	"rules/wording":   {},
	"readers":         {},
	"testdata/demo":   {},
	"testdata/broken": {},
}

// TestImportPlan holds every file, tests too, to the plan. A package that is
// not in it fails, and so does a line of the plan that nothing uses.
func TestImportPlan(t *testing.T) {
	const root = ".."
	used := map[string]map[string]bool{}
	err := filepath.WalkDir(root, func(path string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || !strings.HasSuffix(path, ".go") {
			return err
		}
		rel, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		pkg := filepath.ToSlash(rel)
		allowed, known := mayImport[pkg]
		if !known {
			t.Errorf("%s: package %s is not in the import plan", path, pkg)
			return nil
		}
		file, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		if used[pkg] == nil {
			used[pkg] = map[string]bool{}
		}
		for _, spec := range file.Imports {
			imported, err := strconv.Unquote(spec.Path.Value)
			if err != nil {
				return err
			}
			ours, inside := strings.CutPrefix(imported, "footing/")
			if !inside || ours == pkg {
				continue
			}
			used[pkg][ours] = true
			if !slices.Contains(allowed, ours) {
				t.Errorf("%s imports %s, which the plan does not allow", path, ours)
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for pkg, allowed := range mayImport {
		for _, other := range allowed {
			if !used[pkg][other] {
				t.Errorf("the plan lets %s import %s, and nothing there does", pkg, other)
			}
		}
	}
}
