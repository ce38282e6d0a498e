package family

import (
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// budget is the largest error allowed in a log probability, relative to the
// larger of 1 and its size.
const budget = 1e-10

func rows(t *testing.T, path string) (table [][]float64) {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range strings.Split(strings.TrimSpace(string(text)), "\n")[2:] {
		var row []float64
		for _, cell := range strings.Split(line, ",") {
			v, err := strconv.ParseFloat(cell, 64)
			if err != nil {
				t.Fatal(err)
			}
			row = append(row, v)
		}
		table = append(table, row)
	}
	return table
}

func TestTailsAgainstTruth(t *testing.T) {
	worst := map[string]float64{}
	compare := func(name string, row []float64, got, want float64) {
		e := math.Abs(got - want)
		if !(e <= budget*math.Max(1, math.Abs(want))) {
			t.Errorf("%s at %v: log %.17g, want %.17g", name, row, got, want)
		}
		worst[name] = math.Max(worst[name], e)
	}
	for _, r := range rows(t, "testdata/gamma.csv") {
		lower, upper := Gamma{r[0], 1}.LogTails(r[1])
		compare("gamma lower", r, lower, r[2])
		compare("gamma upper", r, upper, r[3])
	}
	for _, r := range rows(t, "testdata/beta.csv") {
		lower, upper := Beta{r[0], r[1]}.LogTails(r[2])
		compare("beta lower", r, lower, r[3])
		compare("beta upper", r, upper, r[4])
	}
	for _, name := range []string{"gamma lower", "gamma upper", "beta lower", "beta upper"} {
		t.Logf("%s: largest error of the logarithm %.2g", name, worst[name])
	}
}
