package parser

import (
	"reflect"
	"regexp"
	"sync"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"

	"wellposed/grammar"
)

// form reads one kind of statement with its own small participle parser, which
// is built when the first such statement is met.
type form struct {
	read func(*lexer.PeekingLexer) (grammar.Statement, error)
	// rules is the form's grammar, as participle prints it.
	rules func() string
	// words are the literal words of the form, for "did you mean".
	words func() []string
}

// forms has one entry for each keyword.
var forms = map[string]*form{
	"title":    reading[grammar.Title](readExpr),
	"note":     reading[grammar.Note](readExpr),
	"field":    reading[grammar.Field](readExpr),
	"matters":  reading[grammar.Matters](readArithmetic),
	"given":    reading[grammar.Given](readArithmetic),
	"table":    reading[grammar.Table](readExpr),
	"unknown":  reading[grammar.Unknown](readExpr),
	"vary":     reading[grammar.Vary](readExpr),
	"let":      reading[grammar.Let](readExpr),
	"observe":  reading[grammar.Observe](readExpr),
	"prior":    reading[grammar.Prior](readExpr),
	"rival":    reading[grammar.Rival](readExpr),
	"rivals":   reading[grammar.Rivals](readExpr),
	"report":   reading[grammar.Report](readExpr),
	"conclude": reading[grammar.Conclude](readExpr),
	"await":    reading[grammar.Await](readExpr),
	"suppose":  reading[grammar.Suppose](readArithmetic),
	"require":  reading[grammar.Require](readArithmetic, participle.UseLookahead(3)),
	"accept":   reading[grammar.Accept](readExpr),
	"override": reading[grammar.Override](readExpr),
}

func reading[T any, P interface {
	*T
	grammar.Statement
}](expr func(*lexer.PeekingLexer) (grammar.Expr, error), options ...participle.Option) *form {
	build := sync.OnceValue(func() *participle.Parser[T] {
		return participle.MustBuild[T](append([]participle.Option{
			participle.Lexer(definition{}),
			participle.Elide("Space"),
			participle.ParseTypeWith(expr),
			participle.ParseTypeWith(readDist),
		}, options...)...)
	})
	rules := sync.OnceValue(func() string { return build().String() })
	return &form{
		read: func(lex *lexer.PeekingLexer) (grammar.Statement, error) {
			v, err := build().ParseFromLexer(lex)
			if v == nil {
				return nil, err
			}
			settle(P(v))
			return P(v), err
		},
		rules: rules,
		words: sync.OnceValue(func() []string { return literals(rules()) }),
	}
}

var literal = regexp.MustCompile(`"([a-zA-Z]+)"`)

func literals(rules string) []string {
	var words []string
	seen := map[string]bool{}
	for _, m := range literal.FindAllStringSubmatch(rules, -1) {
		if !seen[m[1]] {
			seen[m[1]] = true
			words = append(words, m[1])
		}
	}
	return words
}

// settle puts the distributions that the operator-precedence parser read in
// their places.
func settle(s grammar.Statement) {
	switch s := s.(type) {
	case *grammar.Vary:
		s.Dist = settled(s.Dist)
	case *grammar.Observe:
		s.Dist = settled(s.Dist)
	case *grammar.Suppose:
		s.Dist = settled(s.Dist)
	case *grammar.Prior:
		if s.Spec != nil {
			s.Spec.Dist = settled(s.Spec.Dist)
		}
	case *grammar.Rival:
		for _, spec := range s.Specs {
			spec.Dist = settled(spec.Dist)
		}
	}
}

func settled(d *grammar.Dist) *grammar.Dist {
	if d == nil {
		return nil
	}
	read, _ := d.Law.(*grammar.Dist)
	return read
}

// isNil reports whether a statement is an empty shell.
func isNil(s grammar.Statement) bool { return s == nil || reflect.ValueOf(s).IsNil() }
