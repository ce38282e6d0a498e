package existence

import (
	"os"
	"testing"
	"math/big"
	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
)

func TestDebug(t *testing.T) {
	b, _ := os.ReadFile("../../testdata/existence/weibull-flat-scale.bayes")
	m := read(t, string(b))
	g := split(m.Declared())[0]
	rows := g.merged(10)
	t.Log(len(rows), g.vars)
	env := kernel.NewEnv(func(v variable) order.Value {
		if v.Unknown.Name == "s" {
			return order.Recip(order.X())
		}
		return order.Some(0.05, 0.0500001)
	})
	t.Log(order.Try(func() { t.Log(order.Integrable(order.Add(g.logKernel(env, rows), order.Times(order.L(), r2(2))))) }))
	b, _ = os.ReadFile("../../testdata/existence/normal-rounded-all-in-one-cell-log-flat.bayes")
	m = read(t, string(b))
	g = split(m.Declared())[0]
	rows = g.merged(10)
	_, mid := g.dataScale(rows)
	env = kernel.NewEnv(func(v variable) order.Value {
		if v.Unknown.Name == "sigma" {
			return order.X()
		}
		return order.Some(mid, mid+.0000001)
	})
	t.Log(mid, order.Try(func() { t.Log(order.Integrable(g.logKernel(env, rows))) }))
}
func r2(n int64) *big.Rat { return big.NewRat(n,1) }
