package model

import "footing/rules/numeric"

// Part says what a column of the design matrix stands for.
type Part int

// The parts of a design matrix.
const (
	Level  Part = iota // the level of one group, at its own mean of the main predictor
	Slope              // the slope of one group
	Shared             // one slope for all groups
	Others             // a further predictor or a covariate
	Remedy             // a column that a remedy added
)

// Term is one column of the design matrix. Values are centred, which leaves
// every slope as it is and keeps the factorisation accurate; Centre is what
// was taken off.
type Term struct {
	Part   Part
	Name   string // of a slope its group; of a covariate's level "name: level"
	Group  int    // for Level and Slope
	Values []float64
	Centre float64
	Source string // the column that it comes from, in the words of the table
}

// terms lays out the design matrix: a level per group, then the slopes, then
// the further predictors, the covariates and what a remedy added. A group in
// which the main predictor takes fewer than two values keeps its level and has
// no slope.
func (d *Design) terms() []Term {
	var all []Term
	n := d.N()
	for g, label := range d.Groups {
		v := make([]float64, n)
		for i, code := range d.Group {
			if code == g {
				v[i] = 1
			}
		}
		all = append(all, Term{Part: Level, Name: label, Group: g, Values: v, Source: d.levelSource(g)})
	}
	all = append(all, d.slopeTerms()...)
	for k := 1; k < len(d.Predictors); k++ {
		col := d.Columns.Predictors[k]
		all = append(all, additive(col.Title(), d.Predictors[k]))
	}
	for _, c := range d.Covariates {
		all = append(all, c.terms()...)
	}
	return append(all, d.Added...)
}

func (d *Design) levelSource(g int) string {
	if d.HasGroup() {
		return d.Columns.Group.Title() + ": " + d.Groups[g]
	}
	return "the intercept"
}

func (d *Design) slopeTerms() []Term {
	x := d.X()
	if x == nil {
		return nil
	}
	name := d.Columns.Predictors[0].Title()
	if d.CommonSlope || !d.HasGroup() {
		t := additive(name, x)
		t.Part, t.Name, t.Source = Shared, "", name
		if numeric.Distinct(x) < 2 {
			return nil
		}
		return []Term{t}
	}
	var all []Term
	for g, label := range d.Groups {
		own := d.OfGroup(x, g)
		if numeric.Distinct(own) < 2 {
			continue
		}
		t := Term{Part: Slope, Name: label, Group: g, Values: make([]float64, d.N()), Centre: numeric.Mean(own), Source: name + " in " + label}
		for i, code := range d.Group {
			if code == g {
				t.Values[i] = x[i] - t.Centre
			}
		}
		all = append(all, t)
	}
	return all
}

// additive centres v on its mean.
func additive(name string, v []float64) Term {
	t := Term{Part: Others, Name: name, Source: name, Centre: numeric.Mean(v), Values: make([]float64, len(v))}
	for i := range v {
		t.Values[i] = v[i] - t.Centre
	}
	return t
}

// terms gives a column of numbers one term and a column of labels one for
// each level but the first.
func (c Covariate) terms() []Term {
	if c.Number != nil {
		return []Term{additive(c.Name(), c.Number)}
	}
	var all []Term
	for level := 1; level < len(c.Levels); level++ {
		v := make([]float64, len(c.Code))
		for i, code := range c.Code {
			if code == level {
				v[i] = 1
			}
		}
		all = append(all, additive(c.Name()+": "+c.Levels[level], v))
	}
	return all
}
