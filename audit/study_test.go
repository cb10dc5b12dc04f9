package audit_test

import (
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"sync"
	"testing"
	"text/tabwriter"

	"footing/rules/numeric"
)

// extent says how much of the study is done. The short form runs with every
// test and catches a rule that is broken; the full form measures what README
// prints.
var extent = flag.String("study", "short", `how much of the study to do: "short" or "full"`)

// study measures how often the audit is wrong on data whose truth is known.
type study struct {
	full bool
	rows []measured
}

// measured is one line of the study's table. Shares are in percent.
type measured struct {
	number       string // of the line in the list of targets
	what, design string
	target, got  float64
	tolerance    float64
	atMost       bool // the target is a limit, not a value
	digits       int
}

func (m measured) ok() bool {
	if m.atMost {
		return m.got <= m.target+m.tolerance
	}
	return math.Abs(m.got-m.target) <= m.tolerance
}

func (m measured) line() string {
	sign, verdict := "", "ok"
	if m.atMost {
		sign = "<= "
	}
	if !m.ok() {
		verdict = "OFF"
	}
	return fmt.Sprintf("%s\t%s\t%s\t%s%.*f\t%.*f\t%.*f\t%s", m.number, m.what, m.design, sign, m.digits, m.target, m.digits+1, m.got, m.digits+1, m.tolerance, verdict)
}

// share adds a line for a share of tables, in percent: the target was measured
// on targetTables and is to be met within three standard errors of the
// difference. A share of all or of none could well be three tables less or
// more, and is given that much.
func (s *study) share(number, what, design string, target float64, targetTables int, got float64, tables int) {
	s.shareOver(number, what, design, target, targetTables, got, tables, 0, 0)
}

// nullSpread is the SD between the powers that two simulated nulls of 9,999
// tables give, over sqrt(p(1-p)): 1.0 to 1.6 points were measured at powers
// between a third and four fifths.
const nullSpread = 0.03

// powerShare is share for a power that was read off simulated nulls: that of
// the target off one.
func (s *study) powerShare(number, what, design string, target float64, targetTables int, got float64, tables int) {
	s.shareOver(number, what, design, target, targetTables, got, tables, 1, s.nulls())
}

// nulls is over how many nulls a power is averaged.
func (s *study) nulls() int { return s.pick(8, 1) }

func (s *study) shareOver(number, what, design string, target float64, targetTables int, got float64, tables, targetNulls, nulls int) {
	few := 3 / float64(targetTables)
	p := min(max(target/100, few), 1-few)
	each := 1/float64(targetTables) + 1/float64(tables)
	if nulls > 0 {
		each += nullSpread * nullSpread * (1/float64(targetNulls) + 1/float64(nulls))
	}
	s.rows = append(s.rows, measured{
		number: number, what: what, design: design, target: target, got: 100 * got,
		tolerance: 300*math.Sqrt(p*(1-p)*each) + rounding(target), digits: digitsOf(target),
	})
}

// digitsOf is how many decimals a target was given with.
func digitsOf(target float64) int {
	if target == math.Trunc(target) {
		return 0
	}
	return 1
}

// rounding is half a unit of a target's last digit: it may be that far from
// what was measured.
func rounding(target float64) float64 { return 0.5 * math.Pow(10, -float64(digitsOf(target))) }

// atMost adds a line for a share that must not exceed a limit.
func (s *study) atMost(number, what, design string, limit, got float64, tables int) {
	p := limit / 100
	s.rows = append(s.rows, measured{
		number: number, what: what, design: design, target: limit, got: 100 * got,
		tolerance: 300 * math.Sqrt(p*(1-p)/float64(tables)), atMost: true, digits: digitsOf(limit),
	})
}

// value adds a line for a figure with a tolerance of its own.
func (s *study) value(number, what, design string, target, got, tolerance float64, digits int) {
	s.rows = append(s.rows, measured{number: number, what: what, design: design, target: target, got: got, tolerance: tolerance, digits: digits})
}

// pick gives the number of tables: the first in the full form.
func (s *study) pick(full, short int) int {
	if s.full {
		return full
	}
	return short
}

func (s *study) table() string {
	var b strings.Builder
	w := tabwriter.NewWriter(&b, 0, 0, 2, ' ', 0)
	fmt.Fprintln(w, "#\twhat\tdesign\ttarget\tmeasured\ttolerance\t")
	for _, m := range s.rows {
		fmt.Fprintln(w, m.line())
	}
	w.Flush()
	return b.String()
}

// shares draws tables, each from a stream of its own, and gives the share of
// them in which each of what one returns is true. Tables are shared out among
// the cores.
func shares(stream string, tables int, one func(table int, random *rand.Rand) []bool) []float64 {
	results := make([][]bool, tables)
	next := make(chan int)
	var workers sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		workers.Go(func() {
			for i := range next {
				results[i] = one(i, numeric.BlockStream(1, "study/"+stream, i))
			}
		})
	}
	for i := range tables {
		next <- i
	}
	close(next)
	workers.Wait()
	share := make([]float64, len(results[0]))
	for _, r := range results {
		for k, yes := range r {
			if yes {
				share[k] += 1 / float64(tables)
			}
		}
	}
	return share
}

// TestStudy measures false alarms, power, coverage and the naming of causes.
// The targets were measured elsewhere, with another program.
func TestStudy(t *testing.T) {
	if *extent != "short" && *extent != "full" {
		t.Fatalf(`-study is %q; "short" and "full" are known`, *extent)
	}
	s := &study{full: *extent == "full"}
	for _, part := range []struct {
		name string
		run  func(*testing.T)
	}{
		{"sound", s.sound},
		{"critical", s.critical},
		{"linearity", s.linearity},
		{"normality", s.normality},
		{"constant-variance", s.constantVariance},
		{"outliers", s.outliers},
		{"influence", s.influence},
		{"unequal scatter", s.unequalScatter},
		{"order", s.order},
		{"root", s.root},
		{"closed", s.closed},
		{"levels", s.levels},
		{"rounded", s.rounded},
		{"exactness", s.exactness},
		{"whole audit", s.wholeAudit},
	} {
		t.Run(part.name, func(t *testing.T) {
			before := len(s.rows)
			part.run(t)
			if len(s.rows) == before && s.full {
				t.Error("nothing measured")
			}
			for _, m := range s.rows[before:] {
				t.Log(strings.ReplaceAll(m.line(), "\t", " | "))
				if !m.ok() {
					t.Errorf("%s, %s: %.2f, target %.2f within %.2f", m.what, m.design, m.got, m.target, m.tolerance)
				}
			}
		})
	}
	t.Log("\n" + s.table())
}
