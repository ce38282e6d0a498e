package evidence

import (
	"context"
	"fmt"
	"math"
	"strconv"

	"wellposed/checks/posterior"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// published are numbers that others printed, each with a model that must give
// them to the printed digits. Numbers marked "from memory" were not looked up.
var published = []struct {
	name, source, model string
	// what is "mean", "sd", "low" or "high" of the first report.
	what    string
	printed string
	within  float64
}{
	{"Failure to start: Beta(4.2, 153.1), 1 failure in 8 demands, mean", "NUREG/CR-6823 (2003)", "unknown p : probability\nobserve 1 of 8 with probability p\nprior p as Beta(4.2, 153.1)\nreport p, upper 95%\n", "mean", "0.0315", 5e-5},
	{"the same, standard deviation", "NUREG/CR-6823 (2003)", "unknown p : probability\nobserve 1 of 8 with probability p\nprior p as Beta(4.2, 153.1)\nreport p, upper 95%\n", "sd", "0.0135", 5e-5},
	{"Jeffreys, 10 events in 6 years, upper end of the 90 % interval", "NUREG/CR-6823 (2003), from memory", "unknown r : rate\nobserve 10 in 6 at rate r\nprior r as Gamma(shape = 1/2, rate = 1/1000000000000)\nreport r, central 90%\n", "high", "2.72", 5e-3},
	{"437 girls in 980 births, uniform, lower end of the 95 % interval", "textbook example, from memory", "unknown p : probability\nobserve 437 of 980 with probability p\nprior p as Beta(1, 1)\nreport p, central 95%\n", "low", "0.415", 5e-4},
	{"0 of 10, Jeffreys, upper end of the 95 % interval", "Brown, Cai and DasGupta (2001), from memory", "unknown p : probability\nobserve 0 of 10 with probability p\nprior p as Beta(1/2, 1/2)\nreport p, central 95%\n", "high", "0.217", 5e-4},
	{"No event, flat rate, 95 % limit on the mean count", "Particle physics tables, from memory", "unknown m : rate\nobserve 0 in 1 at rate m\nprior m flat\nreport m, upper 95%\n", "high", "2.996", 5e-4},
	{"No event, flat rate, 90 % limit on the mean count", "Particle physics tables, from memory", "unknown m : rate\nobserve 0 in 1 at rate m\nprior m flat\nreport m, upper 90%\n", "high", "2.303", 5e-4},
}

// SelfTest computes published examples at once, on this machine.
func SelfTest(ctx context.Context) []Example {
	var out []Example
	for _, p := range published {
		e := Example{Name: p.name, Source: p.source, Published: p.printed, Computed: "not computed"}
		m := model.Build(ctx, source.NewFile("example.bayes", p.model), model.Options{})
		if len(m.Reports) == 1 {
			if s, err := posterior.Summarize(ctx, m.Declared(), m.Reports[0]); err == nil {
				n := map[string]posterior.Number{"mean": s.Mean, "sd": s.SD, "low": s.Intervals[0].Low, "high": s.Intervals[0].High}[p.what]
				e.Computed = diag.Figure(n.Value, n.Error, 5)
				value, _ := strconv.ParseFloat(p.printed, 64)
				e.Agrees = math.Abs(n.Value-value) <= p.within+n.Error
			}
		}
		out = append(out, e)
	}
	for _, r := range []struct {
		name         string
		limit, level float64
		want         int
	}{{"Success run, 95 % reliability at 95 % confidence", 0.05, 0.95, 59}, {"Success run, 99 % reliability at 95 % confidence", 0.01, 0.95, 299}, {"Success run, 90 % reliability at 90 % confidence", 0.1, 0.9, 22}} {
		n := longrun.ClassicalRun(r.limit, r.level)
		out = append(out, Example{r.name, "ln(1 − C) / ln R, common practice", fmt.Sprint(r.want), fmt.Sprint(n), n == r.want})
	}
	return out
}
