package audit_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"testing"

	"footing/audit"
	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
)

// soundSheet draws a table of two groups: x at fixed places, normal errors.
func soundSheet(t *testing.T, n int, random *rand.Rand) *readers.Table {
	t.Helper()
	var b strings.Builder
	b.WriteString("g,x,no,y\n")
	for i := range n {
		x := float64((i*5)%n) + float64((i*i)%3)
		fmt.Fprintf(&b, "%c,%g,%d,%.17g\n", 'a'+i%2, x, i, 2+0.3*x+random.NormFloat64())
	}
	table, err := readers.Read("sound.csv", strings.NewReader(b.String()), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return table
}

var soundRoles = model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g", Order: "no"}

// TestJointPIsExact draws sound tables of one small design, each judged against
// a null of its own, and counts: any rule's joint p at most alpha in alpha of
// them, and each rule's own p likewise. With few replicates ties make both a
// little rarer, so below there is one point of slack.
func TestJointPIsExact(t *testing.T) {
	const tables = 1500
	random := rand.New(rand.NewPCG(11, 12))
	any := 0
	own := map[string]int{}
	for k := range tables {
		p := passOf(t, soundSheet(t, 14, random), soundRoles)
		p.Settings.Replicates, p.Settings.Seed = 199, uint64(k)
		alarm := false
		for name, j := range calibrate.Judge(rules.All, p, calibrate.Options{}) {
			if !j.Asked {
				continue
			}
			if j.P <= 0.05 {
				own[name]++
			}
			alarm = alarm || j.PJoint <= 0.05
		}
		if alarm {
			any++
		}
	}
	slack := 3 * math.Sqrt(0.05*0.95/tables)
	if share := float64(any) / tables; share > 0.05+slack || share < 0.05-slack-0.01 {
		t.Errorf("an alarm in %.4f of sound tables, want 0.05 ± %.4f", share, slack)
	}
	if len(own) < 5 {
		t.Errorf("only %d rules were asked", len(own))
	}
	for name, count := range own {
		if share := float64(count) / tables; share > 0.05+slack+0.005 || share < 0.05-slack-0.01 { // one of six may pass three standard errors
			t.Errorf("%s: p at most 0.05 in %.4f of sound tables, want 0.05 ± %.4f", name, share, slack)
		}
	}
}

// TestNullOfOneDesign: one null, and fresh sound tables judged by it. Both have
// their chance in them.
func TestNullOfOneDesign(t *testing.T) {
	const tables, replicates = 6000, 3999
	p := passOf(t, soundSheet(t, 20, rand.New(rand.NewPCG(3, 4))), soundRoles)
	p.Settings.Replicates = replicates
	null := calibrate.Simulate(rules.All, p)
	rates := null.Rates("test", tables, func() func(*rand.Rand, []float64) {
		return func(random *rand.Rand, z []float64) {
			for i := range z {
				z[i] = random.NormFloat64()
			}
		}
	})
	slack := 3 * math.Sqrt(0.05*0.95*(1.0/tables+1.0/replicates))
	if math.Abs(rates.Any-0.05) > slack {
		t.Errorf("an alarm in %.4f of sound tables, want 0.05 ± %.4f", rates.Any, slack)
	}
	for name, share := range rates.Own {
		if math.Abs(share-0.05) > slack*4/3 { // six rules at once
			t.Errorf("%s: %.4f of sound tables, want 0.05 ± %.4f", name, share, slack)
		}
	}
}

// TestNothingDependsOnTheCores compares whole results, to the last digit.
func TestNothingDependsOnTheCores(t *testing.T) {
	before := runtime.GOMAXPROCS(0)
	defer runtime.GOMAXPROCS(before)
	random := rand.New(rand.NewPCG(5, 6))
	table := soundSheet(t, 40, random)
	var first string
	for _, cores := range []int{1, 2, 8} {
		runtime.GOMAXPROCS(cores)
		r, err := audit.Table(table, audit.Request{Roles: soundRoles, Settings: settings(), PerRow: true})
		if err != nil {
			t.Fatal(err)
		}
		raw, err := json.Marshal(r)
		if err != nil {
			t.Fatal(err)
		}
		if first == "" {
			first = string(raw)
			continue
		}
		if string(raw) != first {
			t.Errorf("%d cores give another result than one", cores)
		}
	}
}

// TestSeedDecidesTheNull: another seed draws other tables, the same seed the
// same.
func TestSeedDecidesTheNull(t *testing.T) {
	p := passOf(t, soundSheet(t, 30, rand.New(rand.NewPCG(7, 8))), soundRoles)
	ps := func(seed uint64) string {
		p.Settings.Seed = seed
		var all []string
		for _, r := range rules.All {
			if r.Chance == nil {
				continue
			}
			all = append(all, fmt.Sprint(r.Name, calibrate.Judge(rules.All, p, calibrate.Options{})[r.Name].P))
		}
		return strings.Join(all, " ")
	}
	if one, again := ps(1), ps(1); one != again {
		t.Errorf("one seed gives %s and %s", one, again)
	}
	if one, other := ps(1), ps(2); one == other {
		t.Errorf("two seeds give the same: %s", one)
	}
}
