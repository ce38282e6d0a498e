package parser

import (
	"fmt"
	"strings"

	"wellposed/grammar"
)

// undotted refuses a point in a name that is being declared.
func undotted(s grammar.Statement) error {
	var names []*grammar.Name
	switch s := s.(type) {
	case *grammar.Given:
		for _, b := range s.Bindings {
			names = append(names, b.Name)
		}
	case *grammar.Table:
		names = append(names, s.Name)
	case *grammar.Unknown:
		for _, d := range s.Declared {
			names = append(names, d.Name)
		}
	case *grammar.Vary:
		names = append(names, s.Name)
	case *grammar.Let:
		names = append(names, s.Name)
	}
	for _, n := range names {
		if n != nil && strings.Contains(n.Text, ".") {
			return &fault{rule: RuleStatement, start: n.Pos.Offset, end: n.EndPos.Offset,
				headline: fmt.Sprintf("%s can't be declared: a name has no point in it.", code(n.Text)),
				notes:    []string{"`table.column` names a column where it is used. Words of a name are joined with `_`."}}
		}
	}
	return nil
}
