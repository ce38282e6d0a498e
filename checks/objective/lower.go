package objective

import (
	"errors"
	"fmt"
	"math/big"
	"strings"

	"wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// errShape marks a part of the language that has no single value here.
var errShape = errors.New("has no single value")

// Parameter is one coordinate of a kernel: a component of an unknown.
type Parameter struct {
	Symbol    *symbolic.Symbol
	Unknown   *model.Unknown
	Component int
}

// space holds the symbols of a model's unknowns and data.
type space struct {
	a *model.Analysis
	// parameters of each unknown, by component; nil for the fixed component.
	parameters map[*model.Unknown][]*Parameter
	columns    map[*model.Column]*symbolic.Symbol
	byData     map[string]*model.Column
	givens     map[*model.Given]*symbolic.Symbol
	depth      int
	// watch names the parameters whose information is asked.
	watch map[string]bool
	// cells and distinct keep what was read from the tables.
	cells    map[*model.Column][]*big.Rat
	whole    map[*model.Column]wholeColumn
	distinct map[string]distinctRows
	// functions counts the sums over rows made so far.
	functions int
}

func newSpace(a *model.Analysis) *space {
	s := &space{a: a, parameters: map[*model.Unknown][]*Parameter{}, columns: map[*model.Column]*symbolic.Symbol{},
		byData: map[string]*model.Column{}, givens: map[*model.Given]*symbolic.Symbol{},
		cells: map[*model.Column][]*big.Rat{}, distinct: map[string]distinctRows{}, whole: map[*model.Column]wholeColumn{}}
	for _, u := range a.Unknowns {
		s.parameters[u] = parametersOf(u)
	}
	for _, o := range a.Observations {
		s.narrow(o)
	}
	return s
}

// narrow restricts a shape of the extreme value laws to above −1/2, where their
// information exists.
func (s *space) narrow(o *model.Observation) {
	if name := o.Dist.Spec.Name; name != "generalized-Pareto" && name != "generalized-extreme-value" {
		return
	}
	ref, ok := o.Dist.Args["shape"].(*model.UnknownRef)
	if !ok || !ref.Unknown.Scalar() {
		return
	}
	x := s.parameters[ref.Unknown][0].Symbol
	if half := big.NewRat(-1, 2); x.Low == nil || x.Low.Cmp(half) < 0 {
		x.Low = half
	}
}

// parametersOf makes a symbol for each component. Those of proportions and
// covariances are elements; a covariance has none here.
func parametersOf(u *model.Unknown) []*Parameter {
	n := u.Components()
	low, high := u.Support.Low, u.Support.High
	switch u.Kind.Name {
	case "proportions":
		n, low, high = u.Size, new(big.Rat), big.NewRat(1, 1)
	case "cutpoints":
		n = u.Size
	case "covariance":
		return nil
	}
	if u.Scalar() {
		n = 1
	}
	ps := make([]*Parameter, n)
	for i := range ps {
		if i == u.Relative && !u.Scalar() && u.Size == 0 {
			continue
		}
		ps[i] = &Parameter{&symbolic.Symbol{Name: componentName(u, i), Low: low, High: high}, u, i}
	}
	return ps
}

// componentName is the name of a component in the language.
func componentName(u *model.Unknown, i int) string {
	if u.Scalar() {
		return u.Name
	}
	label := fmt.Sprint(i + 1)
	if i < len(u.Levels) && u.Levels[i] != "" {
		label = u.Levels[i]
	}
	if model.ParseDecimal(label) == nil && u.Size == 0 {
		label = fmt.Sprintf("%q", label)
	}
	return u.Name + "[" + label + "]"
}

// free are the parameters that move freely: the last of proportions is 1 minus
// the others.
func (s *space) free(u *model.Unknown) []*Parameter {
	ps := s.parameters[u]
	if u.Kind.Name == "proportions" {
		ps = ps[:len(ps)-1]
	}
	var out []*Parameter
	for _, p := range ps {
		if p != nil {
			out = append(out, p)
		}
	}
	return out
}

// component is a component as an expression of the free ones.
func (s *space) component(u *model.Unknown, i int) (symbolic.Expr, error) {
	ps := s.parameters[u]
	if i < 0 || i >= len(ps) {
		return nil, fmt.Errorf("%s has no component %d", u.Name, i+1)
	}
	if ps[i] == nil {
		return symbolic.Zero, nil
	}
	if u.Kind.Name == "proportions" && i == len(ps)-1 {
		rest := symbolic.One
		for _, p := range ps[:i] {
			rest = symbolic.Sub(rest, symbolic.Sym(p.Symbol))
		}
		return rest, nil
	}
	return symbolic.Sym(ps[i].Symbol), nil
}

// column is the value of a column in the row at hand.
func (s *space) column(c *model.Column) symbolic.Expr {
	sym := s.columns[c]
	if sym == nil {
		name := "row." + c.Name
		if c.Table != nil {
			name = c.Table.Name + "." + c.Name
		}
		sym = &symbolic.Symbol{Name: name, Data: true}
		if !c.Awaited && len(c.Texts) > 0 {
			low := s.exact(c, 0)
			for i := range c.Texts {
				x := s.exact(c, i)
				if x == nil {
					low = nil
					break
				}
				if x.Cmp(low) < 0 {
					low = x
				}
			}
			if low != nil && low.Sign() >= 0 {
				sym.Low = new(big.Rat)
			}
		}
		s.columns[c] = sym
		s.byData[name] = c
	}
	return symbolic.Sym(sym)
}

// lower turns an expression of the model into a symbolic one. Columns become
// data symbols; row finds the component of a reference by row.
func (s *space) lower(e model.Expr, row int) (symbolic.Expr, error) {
	v, err := s.lowerVector(e, row)
	if err != nil {
		return nil, err
	}
	if len(v) != 1 {
		return nil, fmt.Errorf("a vector %w", errShape)
	}
	return v[0], nil
}

// lowerVector lowers an expression that may have several items.
func (s *space) lowerVector(e model.Expr, row int) ([]symbolic.Expr, error) {
	s.depth++
	defer func() { s.depth-- }()
	if s.depth > 200 {
		return nil, errors.New("the expression is nested too deeply")
	}
	one := func(x symbolic.Expr, err error) ([]symbolic.Expr, error) {
		if err != nil {
			return nil, err
		}
		return []symbolic.Expr{x}, nil
	}
	switch e := e.(type) {
	case *model.Number:
		return one(symbolic.Rat(e.Value), nil)
	case *model.Constant:
		if e.Name == "pi" {
			return one(symbolic.Pi(), nil)
		}
		return nil, fmt.Errorf("%s is no number", e.Name)
	case *model.GivenRef:
		if e.Given.Value != nil {
			return one(symbolic.Rat(e.Given.Value), nil)
		}
		sym := s.givens[e.Given]
		if sym == nil {
			sym = &symbolic.Symbol{Name: e.Given.Name, Data: true}
			s.givens[e.Given] = sym
		}
		return one(symbolic.Sym(sym), nil)
	case *model.ColumnRef:
		return one(s.column(e.Column), nil)
	case *model.LetRef:
		return s.lowerVector(e.Let.Value, row)
	case *model.UnknownRef:
		return s.lowerUnknown(e, row)
	case *model.Vector:
		var out []symbolic.Expr
		for _, item := range e.Items {
			v, err := s.lowerVector(item, row)
			if err != nil {
				return nil, err
			}
			out = append(out, v...)
		}
		return out, nil
	case *model.Op:
		return s.lowerOp(e, row)
	case *model.Call:
		return s.lowerCall(e, row)
	}
	return nil, fmt.Errorf("this part of the expression %w", errShape)
}

func (s *space) lowerUnknown(e *model.UnknownRef, row int) ([]symbolic.Expr, error) {
	u := e.Unknown
	if u.Kind.Discrete {
		return nil, fmt.Errorf("%s is a whole number: a likelihood has no slope along it, so Fisher information is not defined", u.Name)
	}
	if u.Kind.Name == "covariance" {
		return nil, fmt.Errorf("the covariance %s %w", u.Name, errShape)
	}
	pick := func(i int) ([]symbolic.Expr, error) {
		x, err := s.component(u, i)
		return []symbolic.Expr{x}, err
	}
	switch e.Which {
	case model.Fixed:
		return pick(e.Component)
	case model.ByRow:
		i, err := componentOfRow(e, row)
		if err != nil {
			return nil, err
		}
		return pick(i)
	}
	if u.Scalar() {
		return pick(0)
	}
	var out []symbolic.Expr
	for i := range s.parameters[u] {
		x, err := s.component(u, i)
		if err != nil {
			return nil, err
		}
		out = append(out, x)
	}
	return out, nil
}

// componentOfRow is the component that a reference by row means.
func componentOfRow(e *model.UnknownRef, row int) (int, error) {
	texts := make([]string, len(e.By))
	for i, c := range e.By {
		if row < 0 || row >= len(c.Texts) {
			return 0, fmt.Errorf("%s has no row %d", c.Name, row+1)
		}
		texts[i] = c.Texts[row]
	}
	label := strings.Join(texts, " / ")
	for i, l := range e.Unknown.Levels {
		if l == label {
			return i, nil
		}
	}
	return 0, fmt.Errorf("%s has no component %q", e.Unknown.Name, label)
}

func (s *space) lowerOp(e *model.Op, row int) ([]symbolic.Expr, error) {
	args := make([][]symbolic.Expr, len(e.Args))
	width := 1
	for i, a := range e.Args {
		v, err := s.lowerVector(a, row)
		if err != nil {
			return nil, err
		}
		args[i] = v
		if len(v) > 1 {
			if width > 1 && len(v) != width {
				return nil, errors.New("vectors of different lengths")
			}
			width = len(v)
		}
	}
	out := make([]symbolic.Expr, width)
	at := func(i, k int) symbolic.Expr {
		if len(args[i]) == 1 {
			return args[i][0]
		}
		return args[i][k]
	}
	for k := range out {
		switch e.Op {
		case "neg":
			out[k] = symbolic.Neg(at(0, k))
		case "+":
			out[k] = symbolic.Zero
			for i := range args {
				out[k] = symbolic.Add(out[k], at(i, k))
			}
		case "-":
			if len(args) == 1 {
				out[k] = symbolic.Neg(at(0, k))
			} else {
				out[k] = symbolic.Sub(at(0, k), at(1, k))
			}
		case "*":
			out[k] = symbolic.One
			for i := range args {
				out[k] = symbolic.Mul(out[k], at(i, k))
			}
		case "/":
			if n := symbolic.Number(at(1, k)); n != nil && n.Sign() == 0 {
				return nil, errors.New("division by zero")
			}
			out[k] = symbolic.Div(at(0, k), at(1, k))
		case "^":
			q := symbolic.Number(at(1, k))
			switch {
			case q != nil && (q.Num().BitLen() > 12 || q.Denom().BitLen() > 6):
				return nil, errors.New("the power is too large")
			case q != nil:
				if n := symbolic.Number(at(0, k)); n != nil && n.Sign() == 0 && q.Sign() <= 0 {
					return nil, errors.New("division by zero")
				}
				out[k] = symbolic.Pow(at(0, k), q)
			default:
				out[k] = symbolic.Exp(symbolic.Mul(at(1, k), symbolic.Log(at(0, k))))
			}
		default:
			return nil, fmt.Errorf("%q is a condition, not a number", e.Op)
		}
	}
	return out, nil
}

// elementwise are the functions of one number.
var elementwise = map[string]func(symbolic.Expr) symbolic.Expr{
	"log": symbolic.Log, "exp": symbolic.Exp, "sqrt": symbolic.Sqrt, "abs": symbolic.Abs,
	"logit": symbolic.Logit, "expit": symbolic.Expit, "probit": symbolic.Probit, "Phi": symbolic.Phi,
	"cloglog": symbolic.Cloglog, "odds": symbolic.Odds, "atan": symbolic.Atan, "tanh": symbolic.Tanh,
	"atanh": symbolic.Atanh, "log-gamma": symbolic.LogGamma,
}

func (s *space) lowerCall(e *model.Call, row int) ([]symbolic.Expr, error) {
	if f, ok := elementwise[e.Func]; ok && len(e.Args) == 1 {
		v, err := s.lowerVector(e.Args[0], row)
		if err != nil {
			return nil, err
		}
		out := make([]symbolic.Expr, len(v))
		for i, x := range v {
			out[i] = f(x)
		}
		return out, nil
	}
	switch e.Func {
	case "linear":
		ref, ok := e.Args[0].(*model.UnknownRef)
		if !ok || len(ref.Unknown.For) == 0 {
			return nil, errors.New("linear() needs coefficients for columns")
		}
		total := symbolic.Zero
		for i, c := range ref.Unknown.For {
			x, err := s.component(ref.Unknown, i)
			if err != nil {
				return nil, err
			}
			total = symbolic.Add(total, symbolic.Mul(x, s.column(c)))
		}
		return []symbolic.Expr{total}, nil
	case "sum", "mean":
		if usesColumns(e.Args[0]) {
			return nil, fmt.Errorf("%s() over rows %w", e.Func, errShape)
		}
		v, err := s.lowerVector(e.Args[0], row)
		if err != nil {
			return nil, err
		}
		total := symbolic.Add(v...)
		if e.Func == "mean" {
			total = symbolic.Mul(total, symbolic.Frac(1, int64(len(v))))
		}
		return []symbolic.Expr{total}, nil
	}
	return nil, fmt.Errorf("%s() is not followed here", e.Func)
}

// usesColumns reports whether an expression runs over rows.
func usesColumns(e model.Expr) bool {
	found := false
	visit(e, func(x model.Expr) {
		switch x.(type) {
		case *model.ColumnRef:
			found = true
		}
	})
	return found
}

// visit calls f for an expression and everything in it, lets included.
func visit(e model.Expr, f func(model.Expr)) {
	if e == nil {
		return
	}
	f(e)
	switch e := e.(type) {
	case *model.LetRef:
		visit(e.Let.Value, f)
	case *model.Vector:
		for _, x := range e.Items {
			visit(x, f)
		}
	case *model.Op:
		for _, x := range e.Args {
			visit(x, f)
		}
	case *model.Call:
		for _, x := range e.Args {
			visit(x, f)
		}
	}
}

// visitDist calls f for every expression in a distribution.
func visitDist(d *model.Dist, f func(model.Expr)) {
	if d == nil {
		return
	}
	for _, p := range d.Spec.Forms[min(d.Form, len(d.Spec.Forms)-1)] {
		if a := d.Args[p.Label]; a != nil {
			visit(a, f)
		}
	}
	for _, part := range d.Parts {
		visit(part.Weight, f)
		visitDist(part.Dist, f)
	}
}

// unknownsOf lists the unknowns of a distribution, in order of appearance.
func unknownsOf(d *model.Dist) []*model.Unknown {
	var out []*model.Unknown
	seen := map[*model.Unknown]bool{}
	visitDist(d, func(e model.Expr) {
		if r, ok := e.(*model.UnknownRef); ok && !seen[r.Unknown] {
			seen[r.Unknown] = true
			out = append(out, r.Unknown)
		}
	})
	return out
}
