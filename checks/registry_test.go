package checks

import (
	"os"
	"regexp"
	"strings"
	"testing"

	"wellposed/checks/rule"
	"wellposed/parser/diag"
)

var (
	legalName = regexp.MustCompile(`^[a-z]+(-[a-z]+)*$`)
	// groupOrder is the order of the rule list.
	groupOrder = []rule.Group{rule.Existence, rule.Identification, rule.Scale, rule.Influence, rule.Mismatch, rule.Design, rule.Reporting}
	// cures are words that would make a name an instruction.
	cures = []string{"use", "prefer", "avoid", "should", "must", "fix", "add", "dont", "do"}
)

// refusals says what keeps a rule out of the registry.
func refusals(r *rule.Rule) []string {
	var why []string
	refuse := func(bad bool, text string) {
		if bad {
			why = append(why, text)
		}
	}
	refuse(!legalName.MatchString(r.Name), "the name is not kebab-case")
	for _, word := range strings.Split(r.Name, "-") {
		for _, c := range cures {
			refuse(word == c, "the name tells what to do (\""+word+"\") and not what is there")
		}
	}
	refuse(r.Severity < diag.Note || r.Severity > diag.Stop, "the severity is none of the three")
	refuse(rank(r.Group) < 0, "the group is not in the list")
	refuse(!strings.HasSuffix(r.Brief, "."), "the brief is no sentence")
	refuse(len(r.Sources) == 0, "there is no source")
	refuse(r.Check == nil, "there is no check")
	refuse(!strings.HasPrefix(r.Doc, "# "+r.Name+"\n\n"), "the page does not begin with the name")
	at := 0
	for _, h := range rule.Headings {
		i := strings.Index(r.Doc[at:], "\n## "+h+"\n\n")
		if i < 0 {
			why = append(why, "the page has no part \""+h+"\" in its place")
			continue
		}
		at += i
		body := r.Doc[at+len(h)+6:]
		if j := strings.Index(body, "\n## "); j >= 0 {
			body = body[:j]
		}
		refuse(strings.TrimSpace(body) == "", "the part \""+h+"\" is empty")
	}
	flagged, clean := 0, 0
	for _, e := range rule.Examples(r.Doc) {
		switch {
		case !e.Flagged:
			clean++
		case strings.TrimSpace(e.Says) == "":
			why = append(why, "a flagged example does not show what is said")
		default:
			flagged++
		}
	}
	refuse(flagged == 0, "the page has no flagged example")
	refuse(clean == 0, "the page has no clean example")
	return why
}

func rank(g rule.Group) int {
	for i, h := range groupOrder {
		if g == h {
			return i
		}
	}
	return -1
}

func TestEveryRuleIsAdmissible(t *testing.T) {
	seen := map[string]bool{}
	last := -1
	for _, r := range Rules() {
		for _, why := range refusals(r) {
			t.Errorf("%s: %s", r.Name, why)
		}
		if seen[r.Name] {
			t.Errorf("%s is listed twice", r.Name)
		}
		seen[r.Name] = true
		if at := rank(r.Group); at < last {
			t.Errorf("%s stands outside its group", r.Name)
		} else {
			last = at
		}
	}
	for _, p := range Problems() {
		if seen[p.Name] {
			t.Errorf("%s names a rule and a problem of reading", p.Name)
		}
		if p.Doc == "" || p.Brief == "" {
			t.Errorf("%s has no page", p.Name)
		}
	}
}

// Every room under rules is listed, and every listed rule has its room.
func TestEveryRoomIsListed(t *testing.T) {
	entries, err := os.ReadDir("rules")
	if err != nil {
		t.Fatal(err)
	}
	rooms := map[string]bool{}
	for _, e := range entries {
		if !e.IsDir() || e.Name() == "ruletest" {
			continue
		}
		rooms[e.Name()] = true
		if Find(e.Name()) == nil {
			t.Errorf("checks/rules/%s is not in the registry", e.Name())
		}
		for _, part := range []string{"rule.go", "doc.md", "rule_test.go"} {
			if _, err := os.Stat("rules/" + e.Name() + "/" + part); err != nil {
				t.Errorf("checks/rules/%s has no %s", e.Name(), part)
			}
		}
	}
	for _, r := range Rules() {
		if !rooms[r.Name] {
			t.Errorf("%s has no room under checks/rules", r.Name)
		}
	}
}

// The registry must refuse what lacks any of its furniture.
func TestRefusals(t *testing.T) {
	good := *Find("nothing-reported")
	if why := refusals(&good); len(why) > 0 {
		t.Fatal(why)
	}
	for name, spoil := range map[string]func(*rule.Rule){
		"name":     func(r *rule.Rule) { r.Name = "Nothing_Reported" },
		"cure":     func(r *rule.Rule) { r.Name = "use-a-report" },
		"page":     func(r *rule.Rule) { r.Doc = "" },
		"source":   func(r *rule.Rule) { r.Sources = nil },
		"flagged":  func(r *rule.Rule) { r.Doc = strings.ReplaceAll(r.Doc, "bayes flagged", "bayes") },
		"clean":    func(r *rule.Rule) { r.Doc = strings.ReplaceAll(r.Doc, "bayes clean", "bayes") },
		"said":     func(r *rule.Rule) { r.Doc = strings.ReplaceAll(r.Doc, "```says", "```") },
		"part":     func(r *rule.Rule) { r.Doc = strings.ReplaceAll(r.Doc, "## Mathematics", "## Formulas") },
		"check":    func(r *rule.Rule) { r.Check = nil },
		"severity": func(r *rule.Rule) { r.Severity = 7 },
		"group":    func(r *rule.Rule) { r.Group = "misc" },
		"brief":    func(r *rule.Rule) { r.Brief = "" },
	} {
		r := good
		spoil(&r)
		if len(refusals(&r)) == 0 {
			t.Errorf("a rule without a sound %s is let in", name)
		}
	}
}
