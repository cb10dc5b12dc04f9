package calibrate

import (
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"footing/rules"
	"footing/rules/numeric"
)

// block is how many tables are drawn from one random stream. Blocks have
// streams of their own, so that nothing depends on the number of cores.
const block = 64

// drawer draws tables of one design and computes the members' statistics.
type drawer struct {
	pass   *rules.Pass
	family *family
	name   string
	grid   float64 // step of a coarsely rounded response; 0 for none
	spread float64 // error SD with which rounded tables are drawn
}

func newDrawer(p *rules.Pass, f *family, name string) *drawer {
	d := &drawer{pass: p, family: f, name: name}
	if step, coarse := p.Fit.Grid(); coarse {
		s2 := p.Fit.SD * p.Fit.SD
		d.grid, d.spread = step, math.Sqrt(max(s2-step*step/12, s2/4))
	}
	return d
}

// observed gives the members' statistics of the table itself.
func (d *drawer) observed() []float64 {
	s := rules.NewSample(d.pass.Fit)
	copy(s.E, d.pass.Fit.Residual)
	s.Changed()
	row := make([]float64, d.family.members())
	for m, statistic := range d.statistics() {
		row[m] = orNothing(statistic(s))
	}
	return row
}

// orNothing takes a statistic that is not defined, as where all residuals have
// one size, for one that shows nothing: statistics are large when something is
// wrong, and none is below 0.
func orNothing(statistic float64) float64 {
	if math.IsNaN(statistic) {
		return 0
	}
	return statistic
}

// statistics makes the members' functions for one goroutine.
func (d *drawer) statistics() []func(*rules.Sample) float64 {
	var all []func(*rules.Sample) float64
	for _, c := range d.family.chances {
		for _, m := range c.Members {
			all = append(all, m.New())
		}
	}
	return all
}

// null draws sound tables.
func (d *drawer) null(tables int) [][]float64 {
	return d.draw(d.name+"null", tables, func() func(*rand.Rand, []float64) {
		return func(random *rand.Rand, z []float64) {
			for i := range z {
				z[i] = random.NormFloat64()
			}
		}
	})
}

// draw computes the statistics of the given number of tables, whose errors
// newErrors' functions draw.
func (d *drawer) draw(stream string, tables int, newErrors func() func(*rand.Rand, []float64)) [][]float64 {
	rows := make([][]float64, tables)
	flat := make([]float64, tables*d.family.members())
	for r := range rows {
		rows[r], flat = flat[:d.family.members()], flat[d.family.members():]
	}
	d.each(stream, tables, newErrors, func(w *worker, r int) {
		for m, statistic := range w.statistics {
			rows[r][m] = orNothing(statistic(w.sample))
		}
	})
	return rows
}

// each draws the given number of tables and visits every one once, with the
// worker whose sample holds it. Blocks are shared out among the cores, so visit
// must keep apart what it writes for each table.
func (d *drawer) each(stream string, tables int, newErrors func() func(*rand.Rand, []float64), visit func(w *worker, r int)) {
	blocks := make(chan int)
	var workers sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), (tables+block-1)/block) {
		workers.Go(func() {
			w := d.newWorker(newErrors())
			for b := range blocks {
				random := numeric.BlockStream(d.pass.Settings.Seed, stream, b)
				for r := b * block; r < min(tables, (b+1)*block); r++ {
					w.table(random)
					visit(w, r)
				}
			}
		})
	}
	for b := range (tables + block - 1) / block {
		blocks <- b
	}
	close(blocks)
	workers.Wait()
}

// Sound draws the residuals of sound tables of a pass's design from the named
// stream and hands them to each, one table after the other. The sample is
// overwritten by the next.
func Sound(p *rules.Pass, stream string, tables int, each func(*rules.Sample)) {
	d := newDrawer(p, &family{first: []int{0}}, "")
	var random *rand.Rand
	w := d.newWorker(func(random *rand.Rand, z []float64) {
		for i := range z {
			z[i] = random.NormFloat64()
		}
	})
	for r := range tables {
		if r%block == 0 {
			random = numeric.BlockStream(p.Settings.Seed, stream, r/block)
		}
		w.table(random)
		each(w.sample)
	}
}

// worker draws one table after the other with memory of its own.
type worker struct {
	d          *drawer
	errors     func(*rand.Rand, []float64)
	sample     *rules.Sample
	z          []float64
	statistics []func(*rules.Sample) float64
	least      float64 // response
}

func (d *drawer) newWorker(errors func(*rand.Rand, []float64)) *worker {
	w := &worker{
		d: d, errors: errors, sample: rules.NewSample(d.pass.Fit),
		z: make([]float64, d.pass.Fit.N()), statistics: d.statistics(), least: math.Inf(1),
	}
	for _, y := range d.pass.Design.Y {
		w.least = min(w.least, y)
	}
	return w
}

// table draws one table into the worker's sample.
func (w *worker) table(random *rand.Rand) {
	w.errors(random, w.z)
	if w.d.grid > 0 {
		w.round()
	}
	w.d.pass.Fit.Basis.ResidualOnce(w.sample.E, w.z)
	w.sample.Changed()
}

// round puts the errors on the fitted lines and rounds the responses as those
// of the table are rounded, since a coarse step is seen in the residuals' shape.
func (w *worker) round() {
	u := w.d.grid
	for i, fitted := range w.d.pass.Fit.Fitted {
		y := fitted + w.d.spread*w.z[i]
		w.z[i] = w.least + u*math.Round((y-w.least)/u) - fitted
	}
}
