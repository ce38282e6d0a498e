package highlight

import (
	"fmt"
	"strings"

	"wellposed/grammar"
)

// Vim is a syntax file for Vim and Neovim.
func Vim() string {
	var b strings.Builder
	b.WriteString(`" Made from the language's data; see grammar/highlight.
if exists('b:current_syntax')
  finish
endif
syntax case match
syntax iskeyword @,48-57,_,192-255
`)
	words := func(group string, list []string) {
		var plain []string
		for _, w := range list {
			if !strings.Contains(w, "-") {
				plain = append(plain, w)
			}
		}
		fmt.Fprintf(&b, "syntax keyword %s %s\n", group, strings.Join(plain, " "))
	}
	words("bayesModifier", modifiers)
	words("bayesKind", kinds())
	fmt.Fprintf(&b, "syntax match bayesKeyword /^\\s*\\%%(%s\\)\\>/\n", strings.Join(grammar.Keywords, "\\|"))
	fmt.Fprintf(&b, "syntax match bayesFunction /\\<\\%%(%s\\)\\ze\\s*(/\n", strings.Join(functions(), "\\|"))
	fmt.Fprintf(&b, "syntax match bayesDistribution /\\c\\<\\%%(%s\\)\\ze\\s*(/\n", strings.Join(distributions(), "\\|"))
	b.WriteString(`syntax match bayesNumber /\<\d\+\%(\.\d\+\)\=\%([eE][-+]\=\d\+\)\=\>/
syntax region bayesString start=/"/ skip=/\\"/ end=/"/ oneline
syntax match bayesComment /#.*/
highlight default link bayesKeyword Statement
highlight default link bayesModifier Keyword
highlight default link bayesKind Type
highlight default link bayesFunction Function
highlight default link bayesDistribution Identifier
highlight default link bayesNumber Number
highlight default link bayesString String
highlight default link bayesComment Comment
let b:current_syntax = 'bayes'
`)
	return b.String()
}

// Emacs is a file of word lists for wellposed.el.
func Emacs() string {
	var b strings.Builder
	b.WriteString(";;; wellposed-words.el --- Words of the model language -*- lexical-binding: t; -*-\n\n;; Made from the language's data; see grammar/highlight.\n\n")
	for _, l := range []struct {
		name, doc string
		words     []string
	}{
		{"keywords", "Words that lead statements.", grammar.Keywords},
		{"kinds", "Kinds of unknowns.", kinds()},
		{"distributions", "Distributions.", distributions()},
		{"functions", "Functions.", functions()},
	} {
		fmt.Fprintf(&b, "(defconst wellposed-%s\n  '(", l.name)
		for i, w := range l.words {
			if i > 0 {
				b.WriteString("\n    ")
			}
			fmt.Fprintf(&b, "%q", w)
		}
		fmt.Fprintf(&b, ")\n  %q)\n\n", l.doc)
	}
	b.WriteString(";;; wellposed-words.el ends here\n")
	return b.String()
}
