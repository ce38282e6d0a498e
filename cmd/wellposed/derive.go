package main

import (
	"context"
	"flag"
	"fmt"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/objective"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

func init() {
	addVerb(verb{
		name: "derive", brief: "derive default priors by rule from the likelihood", usage: "[--rule RULE] [--scale SCALE] FILE [UNKNOWN …]",
		more: `Derives each prior that the file gives by a rule (jeffreys, reference, …), or the
prior of the named unknowns by the rule asked for; several names go together, for a
reference prior in the order of interest. Prints the kernel, the law it is where it
is one, the derivation in a few lines, what is assumed about the sampling plan, the
source, and whether the posterior would exist with these data.

  wellposed derive relay.bayes
  wellposed derive relay.bayes p --scale odds
  wellposed derive gauge.bayes mu sigma --rule reference

No prior is recommended: a rule is listed with what it gives.
Exit code 1 when a rule gives no prior or its posterior does not exist.`,
		setup: func(set *flag.FlagSet) func(*call) int {
			scale := set.String("scale", "", "also print the kernel on this `SCALE`: "+strings.Join(objective.TransformNames(), ", "))
			rule := oneOf(set, "rule", "", "the rule for the named unknowns; jeffreys for one and separately for several when left out", ruleWords...)
			return func(c *call) int { return derive(c, rule.value, *scale) }
		},
	})
}

// ruleWords are the values of --rule.
var ruleWords = []string{"jeffreys", "jointly", "separately", "reference", "matching", "maximal-data-information"}

// asked is one derivation to make.
type asked struct {
	rule  *model.RulePrior
	about []*model.Unknown
	prior *model.Prior // set when the file states it
}

func derive(c *call, rule, scale string) int {
	if len(c.args) == 0 {
		return c.misuse("name a model file")
	}
	var scales []string
	if scale != "" {
		if objective.FindTransform(scale) == nil {
			return c.misuse("there is no scale %q%s", scale, near.Suggest(scale, objective.TransformNames()))
		}
		scales = []string{scale}
	}
	raw, name, err := readModel(c.stdin, c.args[0], "")
	if err != nil {
		c.complain("%s: %v", name, err)
		return exitUnreadable
	}
	ctx := context.Background()
	m := model.Build(ctx, source.NewFile(name, string(raw)), model.Options{})
	for _, p := range m.Problems {
		if p.Severity == diag.Stop {
			c.complain("%s: %s (wellposed lint shows all)", name, p.Headline)
			return exitUnreadable
		}
	}
	list, complaint := wanted(m, rule, c.args[1:])
	if complaint != "" {
		return c.misuse("%s", complaint)
	}
	if len(list) == 0 {
		c.complain("%s states no prior by a rule; name the unknown to derive one for", name)
		return exitUsage
	}
	code := exitClean
	f := facts.New(ctx, m)
	for i, w := range list {
		if i > 0 {
			fmt.Fprintln(c.stdout)
		}
		if !deriveOne(c, f, w, scales) {
			code = exitFindings
		}
	}
	return code
}

// wanted are the derivations that a command line asks for.
func wanted(m *model.Model, rule string, unknowns []string) (list []asked, complaint string) {
	if len(unknowns) == 0 {
		if rule != "" {
			return nil, "--rule needs the unknowns that it is for"
		}
		for _, p := range m.Priors {
			if p.Form == model.ByRule {
				list = append(list, asked{p.Rule, p.About, p})
			}
		}
		return list, ""
	}
	var about []*model.Unknown
	var all []string
	for _, u := range m.Unknowns {
		all = append(all, u.Name)
	}
	for _, name := range unknowns {
		var found *model.Unknown
		for _, u := range m.Unknowns {
			if u.Name == name {
				found = u
			}
		}
		if found == nil {
			return nil, fmt.Sprintf("there is no unknown %q%s", name, near.Suggest(name, all))
		}
		about = append(about, found)
	}
	if rule == "" && len(about) == 1 {
		for _, p := range m.Priors {
			if p.Form == model.ByRule && len(p.About) == 1 && p.About[0] == about[0] {
				return []asked{{p.Rule, p.About, p}}, ""
			}
		}
	}
	r := &model.RulePrior{}
	switch rule {
	case "":
		if r.Name = model.Jeffreys; len(about) > 1 {
			r.Name = model.JeffreysSeparately
		}
	case "jeffreys":
		if r.Name = model.Jeffreys; len(about) > 1 {
			return nil, "for several unknowns Jeffreys' rule has more than one sense: ask for jointly or separately"
		}
	case "jointly":
		r.Name = model.JeffreysJointly
	case "separately":
		r.Name = model.JeffreysSeparately
	case "reference":
		r.Name = model.ReferencePrior
		for _, u := range about {
			r.Order = append(r.Order, []*model.Unknown{u})
		}
	case "matching":
		r.Name = model.MatchingPrior
	case "maximal-data-information":
		r.Name = model.MaximalData
	}
	return []asked{{r, about, nil}}, ""
}

// deriveOne prints one derivation; it is false when there is no prior or no
// posterior.
func deriveOne(c *call, f *facts.Facts, w asked, scales []string) bool {
	a := f.Model.Declared()
	var d facts.Derivation
	if w.prior != nil {
		d = f.Derived(a, w.prior)
	} else {
		d = f.DerivedBy(a, w.rule, w.about)
	}
	if d.Err != nil {
		var names []string
		for _, u := range w.about {
			names = append(names, u.Name)
		}
		fmt.Fprintf(c.stdout, "no prior for %s by the rule %s: %v\n", strings.Join(names, ", "), w.rule.Name, d.Err)
		return false
	}
	for _, line := range d.Lines(scales...) {
		fmt.Fprintln(c.stdout, line)
	}
	with := a.With("by rule: "+d.Prior.Text, d.Prior)
	good := true
	fmt.Fprintln(c.stdout, "posterior with these data")
	for _, u := range f.Model.Unknowns {
		if u.Population == nil && with.PriorOf(u) == nil {
			fmt.Fprintf(c.stdout, "  not examined: with this prior in its place, %s has none\n", u.Name)
			return true
		}
	}
	for _, v := range f.Existence(with).Verdicts {
		touches := false
		var names []string
		for _, u := range v.Unknowns {
			names = append(names, u.Name)
			for _, x := range w.about {
				touches = touches || u == x
			}
		}
		if !touches {
			continue
		}
		fmt.Fprintf(c.stdout, "  of %s: %s (%s)\n", strings.Join(names, ", "), v.Status, v.How)
		if v.Claim != "" {
			fmt.Fprintf(c.stdout, "  %s\n", v.Claim)
		}
		good = good && v.Status != existence.DoesNotExist
	}
	return good
}
