package render

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// writeGitHub writes workflow commands, one a finding. Columns count code
// points.
func writeGitHub(w io.Writer, r *Report, _ Options) error {
	for _, f := range r.Files {
		path := filepath.ToSlash(f.Path)
		if f.Trouble != "" {
			fmt.Fprintf(w, "::error file=%s,title=%s::%s\n", property(path), "unreadable", data(f.Trouble))
		}
		for _, d := range f.Findings {
			word := [...]string{"notice", "warning", "error"}[d.Severity]
			text := message(d)
			if d.Overridden != "" {
				word, text = "notice", text+"\nOverridden: "+d.Overridden
			}
			p := f.locate(d.Span, source.CodePoints)
			at := fmt.Sprintf("file=%s,line=%d,endLine=%d", property(path), p.line, p.endLine)
			// A column is only allowed within one line.
			if p.endLine == p.line {
				at += fmt.Sprintf(",col=%d,endColumn=%d", p.column, max(p.column, p.endColumn-1))
			}
			fmt.Fprintf(w, "::%s %s,title=%s::%s\n", word, at, property(d.Rule), data(text))
		}
	}
	return nil
}

// data and property escape as the runner's own toolkit does.
func data(s string) string {
	return strings.NewReplacer("%", "%25", "\r", "%0D", "\n", "%0A").Replace(s)
}

func property(s string) string {
	return strings.NewReplacer("%", "%25", "\r", "%0D", "\n", "%0A", ":", "%3A", ",", "%2C").Replace(s)
}

type gitlabIssue struct {
	Description string         `json:"description"`
	Check       string         `json:"check_name"`
	Fingerprint string         `json:"fingerprint"`
	Severity    string         `json:"severity"`
	Location    gitlabLocation `json:"location"`
}

type gitlabLocation struct {
	Path  string      `json:"path"`
	Lines gitlabLines `json:"lines"`
}

type gitlabLines struct {
	Begin int `json:"begin"`
	End   int `json:"end"`
}

// writeGitLab writes a code-quality report: one JSON array.
func writeGitLab(w io.Writer, r *Report, _ Options) error {
	issues := []gitlabIssue{}
	for _, f := range r.Files {
		path := strings.TrimPrefix(filepath.ToSlash(f.Path), "./")
		if f.Trouble != "" {
			bare := &File{Path: f.Path, Findings: []diag.Finding{{Rule: "unreadable"}}}
			issues = append(issues, gitlabIssue{f.Trouble, "unreadable", fingerprints(bare)[0], "critical", gitlabLocation{path, gitlabLines{1, 1}}})
		}
		prints := fingerprints(f)
		for i, d := range f.Findings {
			word := [...]string{"info", "major", "critical"}[d.Severity]
			if d.Overridden != "" {
				word = "info"
			}
			p := f.locate(d.Span, source.CodePoints)
			issues = append(issues, gitlabIssue{d.Headline, d.Rule, prints[i], word, gitlabLocation{path, gitlabLines{p.line, p.endLine}}})
		}
	}
	return encode(w, issues)
}
