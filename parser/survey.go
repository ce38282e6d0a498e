package parser

import (
	"wellposed/grammar"
)

// surveyed is what the tree knows about the tokens of a statement, by offset.
type surveyed struct {
	// spelled holds the names that are written in one piece, by their start.
	spelled map[int]spelling
	// opens holds the ends of names that a bracket follows closely.
	opens map[int]bool
	// binary holds the starts of operators with a left side.
	binary map[int]bool
	// fraction holds the strokes of 1/2 and 1/sigma.
	fraction map[int]bool
}

type spelling struct {
	text string
	end  int
}

func survey(s grammar.Statement) *surveyed {
	look := &surveyed{map[int]spelling{}, map[int]bool{}, map[int]bool{}, map[int]bool{}}
	grammar.Walk(s, func(node any) bool {
		switch n := node.(type) {
		case *grammar.Dist:
			name := n.Name
			if d := grammar.FindDistribution(name); d != nil {
				name = d.Name
			}
			look.spelled[n.Pos.Offset] = spelling{name, n.NameEnd.Offset}
			look.opens[n.NameEnd.Offset] = true
		case *grammar.Call:
			look.opens[n.NameEnd.Offset] = true
		case *grammar.Index:
			look.opens[n.Of.EndPos.Offset] = true
		case *grammar.Binary:
			look.binary[n.OpPos.Offset] = true
			look.fraction[n.OpPos.Offset] = isFraction(n)
		}
		return true
	})
	words := func(w *grammar.Words) {
		if w != nil {
			look.spelled[w.Pos.Offset] = spelling{join(w.Parts), w.EndPos.Offset}
		}
	}
	date := func(d *grammar.Date) {
		if d != nil {
			look.spelled[d.Pos.Offset] = spelling{d.Parts[0] + "-" + d.Parts[1] + "-" + d.Parts[2], d.EndPos.Offset}
		}
	}
	rule := func(spec *grammar.PriorSpec) {
		if spec != nil && spec.Rule != nil && spec.Rule.Jeffreys {
			at := spec.Rule.Pos.Offset
			look.spelled[at] = spelling{"jeffreys", at + len("jeffreys")}
		}
	}
	switch s := s.(type) {
	case *grammar.Unknown:
		if s.Kind.Size != nil {
			look.opens[s.Kind.Pos.Offset+len(s.Kind.Name)] = true
		}
	case *grammar.Accept:
		words(s.Rule)
		date(s.Until)
	case *grammar.Override:
		words(s.Rule)
		date(s.Until)
	case *grammar.Prior:
		rule(s.Spec)
	case *grammar.Rival:
		for _, spec := range s.Specs {
			rule(spec)
		}
	}
	return look
}

func join(parts []string) string {
	s := ""
	for _, p := range parts {
		s += p
	}
	return s
}
