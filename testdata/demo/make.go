// Command make writes the demo: an invented survey of kelp growth against
// water temperature at a sheltered and an exposed site. No such survey was
// made.
//
//	go run ./testdata/demo/make.go testdata/demo
//
// kelp.csv is the sheet as it came from the shore, with a few honest troubles;
// kelp-clean.csv and kelp.xlsx are the same survey put right.
package main

import (
	"encoding/csv"
	"fmt"
	"log"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"

	"github.com/xuri/excelize/v2"
)

// reading is one plot, measured once.
type reading struct {
	order       int
	plot        string
	site        string
	temperature string // °C
	growth      string // mm/day
}

var header = []string{"order", "plot", "site", "temperature (°C)", "growth (mm/day)"}

func (r reading) fields() []string {
	return []string{strconv.Itoa(r.order), r.plot, r.site, r.temperature, r.growth}
}

// survey draws 30 plots at each site: growth falls with temperature, faster at
// the exposed site, with the same scatter everywhere.
func survey() []reading {
	random := rand.New(rand.NewPCG(20260401, 5))
	sites := []struct {
		name             string
		intercept, slope float64
	}{{"sheltered", 9.4, -0.24}, {"exposed", 10.6, -0.42}}
	var all []reading
	for _, s := range sites {
		for k := range 30 {
			t := 8 + 12*random.Float64()
			g := s.intercept + s.slope*t + 0.7*random.NormFloat64()
			all = append(all, reading{
				plot: fmt.Sprintf("%c%02d", s.name[0]-'a'+'A', k+1), site: s.name,
				temperature: strconv.FormatFloat(t, 'f', 1, 64), growth: strconv.FormatFloat(g, 'f', 2, 64),
			})
		}
	}
	random.Shuffle(len(all), func(i, j int) { all[i], all[j] = all[j], all[i] })
	for i := range all {
		all[i].order = i + 1
	}
	return all
}

// spoil puts in what sheets come with: a reading that was not taken, a code
// for another, a label with a capital, and a temperature mistyped by 20 °C.
func spoil(clean []reading) []reading {
	all := append([]reading{}, clean...)
	all[15].growth = ""
	all[28].growth = "-999"
	for i := range all {
		if i > 35 && all[i].site == "sheltered" {
			all[i].site = "Sheltered"
			break
		}
	}
	for i := range all {
		if i > 44 && all[i].site == "exposed" {
			t, err := strconv.ParseFloat(all[i].temperature, 64)
			if err != nil {
				log.Fatal(err)
			}
			all[i].temperature = strconv.FormatFloat(t+20, 'f', 1, 64)
			break
		}
	}
	return all
}

func writeCSV(path string, rows []reading) error {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	defer f.Close()
	w := csv.NewWriter(f)
	if err := w.Write(header); err != nil {
		return err
	}
	for _, r := range rows {
		if err := w.Write(r.fields()); err != nil {
			return err
		}
	}
	w.Flush()
	return w.Error()
}

func writeWorkbook(path string, rows []reading) error {
	f := excelize.NewFile()
	defer f.Close()
	const sheet = "survey"
	if err := f.SetSheetName("Sheet1", sheet); err != nil {
		return err
	}
	if err := f.SetSheetRow(sheet, "A1", &header); err != nil {
		return err
	}
	for i, r := range rows {
		cells := []any{r.order, r.plot, r.site}
		for _, s := range []string{r.temperature, r.growth} {
			v, err := strconv.ParseFloat(s, 64)
			if err != nil {
				return err
			}
			cells = append(cells, v)
		}
		if err := f.SetSheetRow(sheet, fmt.Sprintf("A%d", i+2), &cells); err != nil {
			return err
		}
	}
	return f.SaveAs(path)
}

func main() {
	if len(os.Args) != 2 {
		log.Fatal("usage: make FOLDER")
	}
	clean := survey()
	for _, err := range []error{
		writeCSV(filepath.Join(os.Args[1], "kelp.csv"), spoil(clean)),
		writeCSV(filepath.Join(os.Args[1], "kelp-clean.csv"), clean),
		writeWorkbook(filepath.Join(os.Args[1], "kelp.xlsx"), clean),
	} {
		if err != nil {
			log.Fatal(err)
		}
	}
}
