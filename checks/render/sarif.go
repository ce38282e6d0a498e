package render

import (
	"io"
	"net/url"
	"path/filepath"
	"strings"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// The parts of SARIF 2.1.0 (OASIS, 2020, errata 01) that are used.
type sarifLog struct {
	Schema  string     `json:"$schema"`
	Version string     `json:"version"`
	Runs    []sarifRun `json:"runs"`
}

type sarifRun struct {
	Tool        sarifTool         `json:"tool"`
	ColumnKind  string            `json:"columnKind"`
	Invocations []sarifInvocation `json:"invocations"`
	Results     []sarifResult     `json:"results"`
}

type sarifInvocation struct {
	Successful    bool                `json:"executionSuccessful"`
	Notifications []sarifNotification `json:"toolExecutionNotifications,omitempty"`
}

type sarifNotification struct {
	Level     string          `json:"level"`
	Message   sarifMessage    `json:"message"`
	Locations []sarifLocation `json:"locations"`
}

type sarifTool struct {
	Driver sarifDriver `json:"driver"`
}

type sarifDriver struct {
	Name    string      `json:"name"`
	Version string      `json:"version,omitempty"`
	Rules   []sarifRule `json:"rules"`
}

type sarifRule struct {
	ID      string             `json:"id"`
	Short   sarifMultiformat   `json:"shortDescription"`
	Help    *sarifMultiformat  `json:"help,omitempty"`
	Default sarifConfiguration `json:"defaultConfiguration"`
}

type sarifMultiformat struct {
	Text     string `json:"text"`
	Markdown string `json:"markdown,omitempty"`
}

type sarifConfiguration struct {
	Level string `json:"level"`
}

type sarifMessage struct {
	Text string `json:"text"`
}

type sarifResult struct {
	RuleID       string             `json:"ruleId"`
	RuleIndex    int                `json:"ruleIndex"`
	Level        string             `json:"level"`
	Message      sarifMessage       `json:"message"`
	Locations    []sarifLocation    `json:"locations"`
	Related      []sarifLocation    `json:"relatedLocations,omitempty"`
	Prints       map[string]string  `json:"partialFingerprints"`
	Fixes        []sarifFix         `json:"fixes,omitempty"`
	Suppressions []sarifSuppression `json:"suppressions,omitempty"`
	Properties   map[string]any     `json:"properties,omitempty"`
}

type sarifSuppression struct {
	Kind          string `json:"kind"`
	Justification string `json:"justification,omitempty"`
}

type sarifLocation struct {
	ID       int            `json:"id,omitempty"`
	Physical *sarifPhysical `json:"physicalLocation,omitempty"`
	Message  *sarifMessage  `json:"message,omitempty"`
}

type sarifPhysical struct {
	Artifact sarifArtifact `json:"artifactLocation"`
	Region   *sarifRegion  `json:"region,omitempty"`
}

type sarifArtifact struct {
	URI string `json:"uri"`
}

type sarifRegion struct {
	StartLine   int           `json:"startLine"`
	StartColumn int           `json:"startColumn,omitempty"`
	EndLine     int           `json:"endLine,omitempty"`
	EndColumn   int           `json:"endColumn,omitempty"`
	Snippet     *sarifMessage `json:"snippet,omitempty"`
}

type sarifFix struct {
	Description sarifMessage  `json:"description"`
	Changes     []sarifChange `json:"artifactChanges"`
}

type sarifChange struct {
	Artifact     sarifArtifact      `json:"artifactLocation"`
	Replacements []sarifReplacement `json:"replacements"`
}

type sarifReplacement struct {
	Deleted  sarifRegion   `json:"deletedRegion"`
	Inserted *sarifMessage `json:"insertedContent,omitempty"`
}

// sarifLevel maps our severities to SARIF's levels.
func sarifLevel(s diag.Severity) string { return [...]string{"note", "warning", "error"}[s] }

// uri is a path as a relative or file URI reference.
func uri(path string) string {
	slashed := filepath.ToSlash(path)
	if filepath.IsAbs(path) {
		if !strings.HasPrefix(slashed, "/") {
			slashed = "/" + slashed
		}
		return (&url.URL{Scheme: "file", Path: slashed}).String()
	}
	escaped := (&url.URL{Path: strings.TrimPrefix(slashed, "./")}).EscapedPath()
	// A colon in the first segment would read as a scheme.
	if first, _, _ := strings.Cut(escaped, "/"); strings.Contains(first, ":") {
		escaped = "./" + escaped
	}
	return escaped
}

func (f *File) sarifRegion(s source.Span) *sarifRegion {
	p := f.locate(s, source.CodePoints)
	return &sarifRegion{StartLine: p.line, StartColumn: p.column, EndLine: p.endLine, EndColumn: p.endColumn}
}

func writeSARIF(w io.Writer, r *Report, _ Options) error {
	run := sarifRun{
		Tool: sarifTool{sarifDriver{Name: "wellposed", Version: r.Version, Rules: []sarifRule{}}},
		// Columns of the regions count Unicode code points.
		ColumnKind: "unicodeCodePoints", Results: []sarifResult{},
	}
	index := map[string]int{}
	for _, k := range r.rulesUsed() {
		index[k.Name] = len(run.Tool.Driver.Rules)
		rule := sarifRule{ID: k.Name, Short: sarifMultiformat{Text: k.Brief}, Default: sarifConfiguration{sarifLevel(k.Severity)}}
		if k.Page != "" {
			rule.Help = &sarifMultiformat{Text: k.Page, Markdown: k.Page}
		}
		run.Tool.Driver.Rules = append(run.Tool.Driver.Rules, rule)
	}
	ended := sarifInvocation{Successful: true}
	for _, f := range r.Files {
		here := sarifArtifact{uri(f.Path)}
		if f.Trouble != "" {
			ended.Notifications = append(ended.Notifications, sarifNotification{
				"error", sarifMessage{f.Trouble}, []sarifLocation{{Physical: &sarifPhysical{Artifact: here}}}})
		}
		prints := fingerprints(f)
		for i, d := range f.Findings {
			result := sarifResult{
				RuleID: d.Rule, RuleIndex: index[d.Rule], Level: sarifLevel(d.Severity), Message: sarifMessage{message(d)},
				Locations: []sarifLocation{{Physical: &sarifPhysical{Artifact: here, Region: f.sarifRegion(d.Span)}}},
				Prints:    map[string]string{"wellposed/v1": prints[i]},
			}
			for n, rel := range d.Related {
				result.Related = append(result.Related, f.sarifRelated(n+1, rel))
			}
			for _, x := range d.Fixes {
				if fixed, ok := f.sarifFix(x); ok {
					result.Fixes = append(result.Fixes, fixed)
				}
			}
			if d.Overridden != "" {
				result.Suppressions = []sarifSuppression{{"inSource", d.Overridden}}
			}
			if len(d.Evidence) > 0 {
				finding := f.jsonFinding(d, prints[i])
				result.Properties = map[string]any{"evidence": finding.Evidence}
			}
			run.Results = append(run.Results, result)
		}
	}
	run.Invocations = []sarifInvocation{ended}
	return encode(w, sarifLog{"https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json", "2.1.0", []sarifRun{run}})
}

// rulesUsed are the rules that some finding names, in the order of the rule
// list, then those that the list does not know.
func (r *Report) rulesUsed() []Rule {
	used := map[string]bool{}
	var order []string
	for _, f := range r.Files {
		for _, d := range f.Findings {
			if !used[d.Rule] {
				used[d.Rule] = true
				order = append(order, d.Rule)
			}
		}
	}
	var out []Rule
	known := map[string]bool{}
	for _, k := range r.Rules {
		known[k.Name] = true
		if used[k.Name] {
			out = append(out, k)
		}
	}
	for _, name := range order {
		if !known[name] {
			out = append(out, r.rule(name))
		}
	}
	return out
}

// message is the headline with the notes, in plain text.
func message(d diag.Finding) string {
	return strings.Join(append([]string{d.Headline}, d.Notes...), "\n")
}

func (f *File) sarifRelated(id int, r diag.Related) sarifLocation {
	path := r.Path
	if path == "" {
		path = f.Path
	}
	at := &sarifPhysical{Artifact: sarifArtifact{uri(path)}}
	switch {
	case r.Row > 0:
		at.Region = &sarifRegion{StartLine: r.Row}
	case path == f.Path:
		at.Region = f.sarifRegion(r.Span)
	}
	return sarifLocation{ID: id, Physical: at, Message: &sarifMessage{r.Message}}
}

func (f *File) sarifFix(x diag.Fix) (sarifFix, bool) {
	text := x.Title
	if x.Consequence != "" {
		text += ": " + x.Consequence
	}
	out := sarifFix{Description: sarifMessage{text}}
	var change sarifChange
	change.Artifact = sarifArtifact{uri(f.Path)}
	for _, e := range x.Edits {
		if e.Path != "" && e.Path != f.Path {
			return out, false
		}
		replacement := sarifReplacement{Deleted: *f.sarifRegion(e.Span)}
		if e.Text != "" {
			replacement.Inserted = &sarifMessage{e.Text}
		}
		change.Replacements = append(change.Replacements, replacement)
	}
	if len(change.Replacements) == 0 {
		return out, false
	}
	out.Changes = []sarifChange{change}
	return out, true
}
