package existence

import (
	"math/big"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
)

// endsCertificate records the order of the kernel at every end.
func endsCertificate(name string, o outcome, finite bool) *certificate.Certificate {
	c := &certificate.Ends{Unknown: name, Finite: finite}
	for _, e := range o.ends {
		r := certificate.End{At: e.name(), Side: e.side, Rapid: e.order.Rapid, Finite: e.order.Finite}
		if e.order.Rapid == 0 {
			if e.order.Exact {
				r.Power = e.order.Power.RatString()
				if e.order.LogPower != nil {
					r.LogPower = e.order.LogPower.RatString()
				}
			} else {
				r.PowerLow, r.PowerHigh = e.order.Low, e.order.High
			}
		}
		c.Ends = append(c.Ends, r)
	}
	return &certificate.Certificate{Kind: certificate.KindEnds, Ends: c}
}

func nowhereCertificate(name string) *certificate.Certificate {
	return &certificate.Certificate{Kind: certificate.KindNowhere, Nowhere: &certificate.Nowhere{Unknown: name}}
}

func properCertificate(g *group) *certificate.Certificate {
	c := &certificate.Conditions{Theorem: "proper prior, bounded likelihood", Finite: true}
	for _, v := range g.vars {
		c.List = append(c.List, certificate.Condition{Text: "prior mass of " + v.Name() + " is 1", Terms: []string{"1"}, Holds: true})
		if len(c.List) == 50 {
			break
		}
	}
	return &certificate.Certificate{Kind: certificate.KindConditions, Conditions: c}
}

// parts splits the exponent at each end into those of the prior, the likelihood
// and the change of variable.
func (g *group) parts(c *certificate.Ends, o outcome, rows []rowFactor, _, _ *big.Rat) {
	for i, e := range o.ends {
		if e.order.Rapid != 0 || !e.order.Exact {
			continue
		}
		power := func(priors []priorFactor, pops []populationFactor, rows []rowFactor) *big.Rat {
			h := group{analysis: g.analysis, priors: priors, pops: pops}
			l := line{kernel: func(x order.Value) order.Value {
				return h.logKernel(kernel.NewEnv(func(variable) order.Value { return x }), rows)
			}}
			r, ok := l.tryEnd(e)
			if !ok || r.Rapid != 0 || !r.Exact {
				return nil
			}
			if e.at == nil {
				return new(big.Rat).Add(r.Power, big.NewRat(2, 1))
			}
			return r.Power
		}
		a, b := power(g.priors, g.pops, nil), power(nil, nil, rows)
		if a == nil || b == nil {
			continue
		}
		list := []certificate.Part{{From: "prior", Power: a.RatString()}, {From: "likelihood", Power: b.RatString()}}
		sum := new(big.Rat).Add(a, b)
		if e.at == nil {
			list = append(list, certificate.Part{From: "change of variable", Power: "-2"})
			sum.Sub(sum, big.NewRat(2, 1))
		}
		if sum.Cmp(e.order.Power) == 0 {
			c.Ends[i].Parts = list
		}
	}
}
