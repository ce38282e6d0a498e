package objective

import (
	"fmt"
	"strings"
)

// Lines renders a derivation for people: the prior, the scales asked for, the
// derivation, what was assumed, the source. Lines have no ends.
func (d *Derived) Lines(scales ...string) []string {
	out := []string{"prior " + d.Prior.Text}
	if d.Expr == nil {
		out = append(out, "  kernel: "+d.Name+" (the language has no word for it, so the rule stays in the statement)")
	}
	if d.Error > 0 {
		out = append(out, fmt.Sprintf("  evaluated numerically; each information has an estimated relative error of %.0e", d.Error))
	}
	if !d.proper() && d.Kernel != nil && d.Prior.Dist == nil {
		out = append(out, "  up to a constant; as a kernel it need not have an integral")
	}
	for _, name := range scales {
		on, err := d.On(name)
		if err != nil {
			out = append(out, fmt.Sprintf("  on the scale %s: not given, %v", name, err))
			continue
		}
		out = append(out, fmt.Sprintf("  on the scale %s: %s", name, strings.ReplaceAll(on.Name, on.Symbol.Name, name)))
	}
	out = append(out, "derivation")
	for _, s := range d.Steps {
		out = append(out, "  "+s)
	}
	for _, a := range d.Assumed {
		out = append(out, "  assumed: "+a)
	}
	return append(out, "source", "  "+d.Source)
}

// proper reports whether the prior is a named law with an integral.
func (d *Derived) proper() bool { return d.Prior.Dist != nil }
