// Command make writes the data of the harbour example. Everything in them is invented: there is no such product, lot,
// laboratory or test. The truth is known, because it stands here.
//
//	go run ./examples/harbour/make          # from the top of the repository
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
	folder := "examples/harbour"
	switch {
	case len(os.Args) == 2:
		folder = os.Args[1]
	case len(os.Args) > 2:
		log.Fatal("too many arguments; name one folder to write to, or none for " + folder)
	}
	strips, pouches := tables()
	for _, file := range []struct {
		name    string
		content []byte
	}{{"strips.csv", strips}, {"pouches.csv", pouches}} {
		if err := os.WriteFile(filepath.Join(folder, file.name), file.content, 0o666); err != nil {
			log.Fatal(err)
		}
	}
}

// The invented truth. The strength of a strip, in N per 15 mm, is
//
//	level(age) · lot · e^(−P) · e^(−S) · corner
//
// P is drawn once for a pouch and S once for a strip, both from a Weibull law: most seals lie near the level, and a few
// fall far short of it, so the tail is to the left. P and S spread alike: within a lot, readings of one pouch are
// correlated by about a half. Chevron corners sealed on S2 are 4 % weaker. The instrument reads in steps of 0.05.
const (
	seed        = 71 // chosen before any data were made: the number of the study, and never changed
	resolution  = 0.05
	pouchScale  = 0.084
	stripScale  = 0.080
	weibull     = 1.2 // shape of both laws; 1 would be exponential, 3.6 nearly symmetric
	weakCorner  = 0.96
	tearShare   = 0.06 // of strips that tear and do not peel
	perLot      = 10   // pouches of one lot at one age
	slipDivisor = 3    // a grip that slips shows about a third of the strength
)

var (
	lots = []struct {
		name   string
		factor float64
	}{{"L1", 1.03}, {"L2", 1.00}, {"L3", 0.97}}
	ages = []struct {
		name, weeks string
		level       float64
	}{{"fresh", "0", 2.20}, {"6 weeks", "6", 2.11}, {"12 weeks", "12", 2.024}} // 8 % are lost in 12 weeks
	positions = []string{"left", "right", "chevron left", "chevron right"}
)

// voids are the strips whose test was not valid, by pouch and position, with the reason that the laboratory gave. Two
// pouches at 12 weeks have no valid strip at all. They belong to the design, like the numbers above.
var voids = map[string]string{
	"P008/right":         slipped,
	"P017/left":          slipped,
	"P041/chevron left":  "cut not square",
	"P066/left":          torn,
	"P066/right":         torn,
	"P066/chevron left":  torn,
	"P066/chevron right": torn,
	"P079/left":          torn,
	"P079/right":         torn,
	"P079/chevron left":  torn,
	"P079/chevron right": torn,
	"P083/chevron right": slipped,
}

const (
	slipped = "grip slipped"
	torn    = "pouch torn when opened"
)

// A source draws from the laws above. The integers come from PCG, and exp and log from the program's own functions, so
// the numbers have the same bits on every machine.
type source struct{ random *rand.Rand }

func newSource(seed uint64) source { return source{rand.New(rand.NewPCG(seed, seed))} }

// uniform returns a number strictly between 0 and 1.
func (s source) uniform() float64 { return (float64(s.random.Uint64()>>11) + 0.5) / (1 << 53) }

// share returns e^(−w), with w = scale · (−ln u)^(1/shape) of a Weibull law.
func (s source) share(scale float64) float64 {
	w := float64(scale * numeric.Exp(numeric.Log(-numeric.Log(s.uniform()))/weibull))
	return numeric.Exp(-w)
}

// pouch returns the strengths of the four strips of a pouch, in steps of the instrument.
func (s source) pouch(level, lot float64, sealer string) []int {
	centre := float64(level*lot) * s.share(pouchScale)
	steps := make([]int, len(positions))
	for p := range steps {
		strength := float64(centre * s.share(stripScale))
		if sealer == "S2" && p >= 2 {
			strength = float64(strength * weakCorner)
		}
		steps[p] = int(strength/resolution + 0.5)
	}
	return steps
}

// reading writes a number of steps as the instrument shows it.
func reading(steps int) string { return strconv.FormatFloat(float64(5*steps)/100, 'f', 2, 64) }

// tables returns the two files.
func tables() (strips, pouches []byte) {
	random := newSource(seed)
	stripTable := [][]string{{"strip", "pouch", "lot", "age", "position", "sealer", "strength", "failure_mode", "status",
		"void_reason"}}
	pouchTable := [][]string{{"pouch", "lot", "age", "weeks", "valid_strips", "weakest"}}
	number := 0
	for _, age := range ages {
		for _, lot := range lots {
			for range perLot {
				number++
				pouch := fmt.Sprintf("P%03d", number)
				sealer := "S1"
				if number%2 == 0 {
					sealer = "S2"
				}
				valid, weakest := 0, 0
				for p, steps := range random.pouch(age.level, lot.factor, sealer) {
					strength, mode, status := reading(steps), "peel", "valid"
					if random.uniform() < tearShare {
						mode = "tear"
					}
					reason, void := voids[pouch+"/"+positions[p]]
					switch {
					case void:
						strength, mode, status = "", "", "void"
						if reason == slipped {
							strength = reading(steps / slipDivisor)
						}
					case valid == 0 || steps < weakest:
						weakest = steps
						fallthrough
					default:
						valid++
					}
					stripTable = append(stripTable, []string{strconv.Itoa(len(stripTable)), pouch, lot.name, age.name,
						positions[p], sealer, strength, mode, status, reason})
				}
				least := ""
				if valid > 0 {
					least = reading(weakest)
				}
				pouchTable = append(pouchTable, []string{pouch, lot.name, age.name, age.weeks, strconv.Itoa(valid), least})
			}
		}
	}
	return text(stripTable), text(pouchTable)
}

func text(table [][]string) []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	if err := w.WriteAll(table); err != nil {
		log.Fatal(err) // a buffer takes everything
	}
	return b.Bytes()
}
