// Command make writes the data of the harbour example. Everything in them is invented: there is no such product, lot,
// laboratory or test. The truth is known, because it stands here.
//
//	go run ./examples/harbour/make examples/harbour
package main

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"log"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"

	"lotproof/runner/numeric"
)

func main() {
	log.SetFlags(0)
	if len(os.Args) != 2 {
		log.Fatal("name the folder to write to")
	}
	strips, pouches := tables()
	for name, content := range map[string][]byte{"strips.csv": strips, "pouches.csv": pouches} {
		if err := os.WriteFile(filepath.Join(os.Args[1], name), content, 0o666); err != nil {
			log.Fatal(err)
		}
	}
}

// The invented truth. Strength of a strip in N per 15 mm:
//
//	level(age) · lot · pouch · strip · position
//
// Lots differ by 3 % (one standard deviation), pouches by 6 %, strips within a pouch by 6 %, so that readings of one
// pouch are correlated by about a half. The strip factor is e^(−w) with w of a Weibull law: a long tail to the left.
// Chevron corners of sealer S2 are 4 % weaker. The instrument reads in steps of 0.05.
const (
	seed       = 7_1
	resolution = 0.05
	lotSD      = 0.03
	pouchSD    = 0.06
	stripScale = 0.10
	chevronS2  = 0.96
)

var (
	lots      = []string{"L1", "L2", "L3"}
	positions = []string{"left", "right", "chevron left", "chevron right"}
	ages      = []struct {
		name, weeks string
		level       float64 // of the strongest strips; 8 % are lost in 12 weeks
	}{{"fresh", "0", 2.10}, {"6 weeks", "6", 2.01}, {"12 weeks", "12", 1.93}}
	perLot = 10
)

// voids are the strips whose test was not valid, by pouch and position, with the reason that the laboratory gave. Two
// pouches at 12 weeks have no valid strip at all.
var voids = map[string]string{
	"P008/right":         "grip slipped",
	"P017/left":          "grip slipped",
	"P041/chevron left":  "cut not square",
	"P066/left":          "pouch torn when opened",
	"P066/right":         "pouch torn when opened",
	"P066/chevron left":  "pouch torn when opened",
	"P066/chevron right": "pouch torn when opened",
	"P079/left":          "pouch torn when opened",
	"P079/right":         "pouch torn when opened",
	"P079/chevron left":  "pouch torn when opened",
	"P079/chevron right": "pouch torn when opened",
	"P083/chevron right": "grip slipped",
}

// tables returns the two files. The random numbers come from PCG, and exp and log from the program's own functions, so
// the bytes are the same on every machine.
func tables() (strips, pouches []byte) {
	random := rand.New(rand.NewPCG(seed, seed))
	uniform := func() float64 { return (float64(random.Uint64()>>11) + 0.5) / (1 << 53) }
	normal := func() float64 { return numeric.NormalQuantile(uniform()) }

	lotFactor := make([]float64, len(lots))
	for i := range lotFactor {
		lotFactor[i] = 1 + float64(lotSD*normal())
	}
	var stripTable, pouchTable [][]string
	stripTable = append(stripTable, []string{"strip", "pouch", "lot", "age", "position", "sealer", "strength", "failure_mode",
		"status", "void_reason"})
	pouchTable = append(pouchTable, []string{"pouch", "lot", "age", "weeks", "valid_strips", "weakest"})
	row, number := 0, 0
	for _, age := range ages {
		for l, lot := range lots {
			for range perLot {
				number++
				pouch := fmt.Sprintf("P%03d", number)
				sealer := "S1"
				if number%2 == 0 {
					sealer = "S2"
				}
				centre := float64(age.level*lotFactor[l]) * (1 + float64(pouchSD*normal()))
				valid, weakest := 0, 0.0
				for p, position := range positions {
					row++
					// e^(−w), w Weibull with shape 1.4: w = scale · (−ln u)^(1/1.4)
					w := float64(stripScale * numeric.Exp(numeric.Log(-numeric.Log(uniform()))/1.4))
					strength := float64(centre * numeric.Exp(-w))
					if sealer == "S2" && p >= 2 {
						strength = float64(strength * chevronS2)
					}
					steps := int(strength/resolution + 0.5)
					mode := "peel"
					if uniform() < 0.06 {
						mode = "tear"
					}
					text := strconv.FormatFloat(float64(5*steps)/100, 'f', 2, 64)
					status, reason := "valid", ""
					if r, void := voids[pouch+"/"+position]; void {
						status, reason, mode, text = "void", r, "", ""
						if r == "grip slipped" {
							text = strconv.FormatFloat(float64(5*(steps/3))/100, 'f', 2, 64) // the reading when it slipped
						}
					} else {
						if read := float64(5*steps) / 100; valid == 0 || read < weakest {
							weakest = read
						}
						valid++
					}
					stripTable = append(stripTable, []string{strconv.Itoa(row), pouch, lot, age.name, position, sealer, text, mode,
						status, reason})
				}
				least := ""
				if valid > 0 {
					least = strconv.FormatFloat(weakest, 'f', 2, 64)
				}
				pouchTable = append(pouchTable, []string{pouch, lot, age.name, age.weeks, strconv.Itoa(valid), least})
			}
		}
	}
	return write(stripTable), write(pouchTable)
}

func write(table [][]string) []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	if err := w.WriteAll(table); err != nil {
		log.Fatal(err) // a buffer takes everything
	}
	return b.Bytes()
}
