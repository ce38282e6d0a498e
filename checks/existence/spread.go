package existence

import (
	"context"
	"fmt"
	"strings"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/law"
	"wellposed/checks/existence/order"
)

// spreadVerdict studies the integrated kernel in the one spread that is left.
func (b *gaussBlock) spreadVerdict(ctx context.Context, e *echelon) *Verdict {
	g, v := b.g, b.rest[0]
	marginal := b.marginal(e)
	if marginal == nil {
		return g.undecided("too many different spreads to integrate the means out")
	}
	lo, hi := g.support(v)
	l := line{lo: lo, hi: hi, kernel: func(x order.Value) order.Value {
		env := kernel.NewEnv(only(v, x))
		return order.Add(b.others(env), marginal(env))
	}}
	if v.Unknown.Kind != nil && v.Unknown.Kind.Discrete {
		return nil
	}
	o := l.study(ctx)
	r := g.fromLine(o, v)
	r.Observation = b.obs
	if r.Status == NotDecided {
		return r
	}
	b.explain(r, o, e)
	return r
}

// only binds one variable and refuses every other.
func only(v variable, x order.Value) func(variable) order.Value {
	return func(w variable) order.Value {
		if w != v {
			panic(&order.Unknown{Reason: w.Name() + " enters another factor"})
		}
		return x
	}
}

// readings counts the data.
func (b *gaussBlock) readings() int64 {
	n := int64(0)
	for _, t := range b.terms {
		if !t.fresh {
			n += t.times
		}
	}
	return n
}

// explain words the verdict as the field does: readings and coefficients
// against the power of the spread.
func (b *gaussBlock) explain(r *Verdict, o outcome, e *echelon) {
	v := b.rest[0]
	name := v.Name()
	k := len(b.beta)
	r.Theorem = "integrated likelihood of the spread in a normal linear model"
	r.Source = "Box & Tiao 1973; derivation"
	n := b.readings()
	b.hier = b.hier || b.staysAtZero()
	atZero, atInf := false, false
	for _, x := range o.bad {
		atZero = atZero || x.at != nil
		atInf = atInf || x.at == nil
	}
	if b.hier {
		r.Source = "Gelman 2006; derivation"
		groups := int64(0)
		for _, t := range b.terms {
			if t.fresh && t.class != "" && !strings.HasPrefix(t.class, "known") {
				groups += t.times
			}
		}
		effects := groups
		if groups == 0 {
			groups = n
		}
		switch {
		case r.Status == Exists:
			r.Code = SpreadAtInfinity
			r.Claim = fmt.Sprintf("with %s the integrated likelihood falls fast enough in %s, and the prior is integrable at 0", count(groups, "group"), name)
		case atZero:
			r.Code = SpreadAtZero
			r.Claim = fmt.Sprintf("the likelihood tends to a positive constant as %s → 0, where the prior of %s is not integrable", name, name)
			r.Repairs = []string{"a prior on " + name + " that is integrable at 0, whatever the number of groups"}
		case atInf:
			r.Code = SpreadAtInfinity
			r.Claim = fmt.Sprintf("with %s and %s the integrated likelihood falls too slowly as %s → ∞: the kernel %s", count(groups, "group"), count(int64(k)-effects, "flat coefficient"), name, orderText(name, o.bad[0]))
			r.Repairs = []string{"more groups", "a proper prior on " + name}
		}
		return
	}
	spread := len(b.order) == 1
	r.Code = ScaleReadings
	if spread && !e.inconsistent && r.Status == DoesNotExist && atZero {
		r.Code = EqualReadings
		r.Claim = fmt.Sprintf("all %d readings are fitted exactly, so the likelihood grows without bound as %s → 0: the kernel %s", n, name, orderText(name, o.bad[0]))
		r.Repairs = []string{"a reading that differs", "a prior on " + name + " that vanishes at 0", "the resolution of the readings as between(low, high)"}
		if n <= int64(k) {
			r.Code = ScaleReadings
			r.Claim = fmt.Sprintf("%s for %s leave nothing to see %s with: the kernel %s", count(n, "reading"), count(int64(k), "unknown mean"), name, orderText(name, o.bad[0]))
			r.Repairs = []string{"more readings than unknown means", "a proper prior on " + name}
		}
		return
	}
	switch {
	case r.Status == Exists:
		r.Claim = fmt.Sprintf("%s, %s: the integrated likelihood is integrable in %s at both ends", count(n, "reading"), count(int64(k), "unknown mean"), name)
	case atInf:
		r.Claim = fmt.Sprintf("%s for %s are too few for this power of %s: the integrated kernel %s", count(n, "reading"), count(int64(k), "unknown mean"), name, orderText(name, o.bad[0]))
		r.Repairs = []string{"more readings", "a proper prior on " + name}
	}
}

// count writes "1 reading", "3 readings".
func count(n int64, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// staysAtZero reports spreads that tend to positive constants as the unknown
// spread goes to 0: known standard errors beside it.
func (b *gaussBlock) staysAtZero() bool {
	stays := false
	order.Try(func() {
		env := kernel.NewEnv(func(variable) order.Value { return order.X() })
		for _, key := range b.order {
			if c := b.classes[key]; c.known == nil {
				stays = order.Tends(law.Spread(args(env, c))) == 1
				return
			}
		}
	})
	return stays
}
