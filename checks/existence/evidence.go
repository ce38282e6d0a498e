package existence

import "wellposed/checks/existence/certificate"

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
