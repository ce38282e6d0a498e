package render

import (
	_ "embed"
	"encoding/json"
	"io"
	"math"
	"path/filepath"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Schema is the JSON Schema of the json format.
//
//go:embed findings.schema.json
var Schema string

// SchemaName names the version of the json format. A change that a reader can
// notice, other than an added field, gets another number.
const SchemaName = "wellposed/findings/1"

type jsonReport struct {
	Schema     string      `json:"schema"`
	Version    string      `json:"version"`
	ColumnUnit string      `json:"columnUnit"`
	Level      string      `json:"level"`
	Files      []jsonFile  `json:"files"`
	Summary    jsonSummary `json:"summary"`
}

type jsonSummary struct {
	Files      int `json:"files"`
	Unreadable int `json:"unreadable"`
	Stop       int `json:"stop"`
	Warn       int `json:"warn"`
	Note       int `json:"note"`
	Overridden int `json:"overridden"`
	NotDecided int `json:"notDecided"`
	Broken     int `json:"brokenPromises"`
}

type jsonFile struct {
	Path     string        `json:"path"`
	Trouble  string        `json:"trouble,omitempty"`
	Findings []jsonFinding `json:"findings"`
	Verdicts []Verdict     `json:"verdicts"`
	Promises []jsonPromise `json:"promises,omitempty"`
}

type jsonPoint struct {
	Offset int `json:"offset"`
	Line   int `json:"line"`
	Column int `json:"column"`
}

type jsonRange struct {
	Start jsonPoint `json:"start"`
	End   jsonPoint `json:"end"`
}

type jsonFinding struct {
	Rule        string         `json:"rule"`
	Severity    string         `json:"severity"`
	Range       jsonRange      `json:"range"`
	Target      string         `json:"target,omitempty"`
	Headline    string         `json:"headline"`
	Notes       []string       `json:"notes,omitempty"`
	Evidence    []jsonEvidence `json:"evidence,omitempty"`
	Sketch      string         `json:"sketch,omitempty"`
	Related     []jsonRelated  `json:"related,omitempty"`
	Fixes       []jsonFix      `json:"fixes,omitempty"`
	Overridden  string         `json:"overridden,omitempty"`
	Fingerprint string         `json:"fingerprint"`
}

type jsonEvidence struct {
	Name   string   `json:"name"`
	About  string   `json:"about,omitempty"`
	Text   string   `json:"text,omitempty"`
	Value  *float64 `json:"value"`
	Error  *float64 `json:"error"`
	How    string   `json:"how"`
	Method string   `json:"method,omitempty"`
}

type jsonRelated struct {
	Path    string     `json:"path"`
	Range   *jsonRange `json:"range,omitempty"`
	Row     int        `json:"row,omitempty"`
	Column  int        `json:"column,omitempty"`
	Message string     `json:"message"`
}

type jsonFix struct {
	Title       string     `json:"title"`
	Grade       string     `json:"grade"`
	Consequence string     `json:"consequence,omitempty"`
	Edits       []jsonEdit `json:"edits"`
}

type jsonEdit struct {
	Path  string    `json:"path"`
	Range jsonRange `json:"range"`
	Text  string    `json:"text"`
}

type jsonPromise struct {
	Text     string    `json:"text"`
	Range    jsonRange `json:"range"`
	Outcome  string    `json:"outcome"`
	Distance string    `json:"distance,omitempty"`
}

// finite is nil for a number that JSON can't hold.
func finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}

func (f *File) jsonRange(s source.Span) jsonRange {
	p := f.locate(s, source.Characters)
	return jsonRange{jsonPoint{s.Start, p.line, p.column}, jsonPoint{max(s.Start, s.End), p.endLine, p.endColumn}}
}

func writeJSON(w io.Writer, r *Report, _ Options) error {
	c := r.Tally()
	out := jsonReport{
		Schema: SchemaName, Version: r.Version, ColumnUnit: "character", Level: r.Level.String(), Files: []jsonFile{},
		Summary: jsonSummary{c.Files, c.Unreadable, c.Stop, c.Warn, c.Note, c.Overridden, c.NotDecided, c.Broken},
	}
	for _, f := range r.Files {
		file := jsonFile{Path: filepath.ToSlash(f.Path), Trouble: f.Trouble, Findings: []jsonFinding{}, Verdicts: f.Verdicts}
		if file.Verdicts == nil {
			file.Verdicts = []Verdict{}
		}
		prints := fingerprints(f)
		for i, d := range f.Findings {
			file.Findings = append(file.Findings, f.jsonFinding(d, prints[i]))
		}
		for _, p := range f.Promises {
			file.Promises = append(file.Promises, jsonPromise{p.Text, f.jsonRange(p.Span), p.Outcome, p.Distance})
		}
		out.Files = append(out.Files, file)
	}
	return encode(w, out)
}

func (f *File) jsonFinding(d diag.Finding, fingerprint string) jsonFinding {
	out := jsonFinding{
		Rule: d.Rule, Severity: d.Severity.String(), Range: f.jsonRange(d.Span), Target: d.Target, Headline: d.Headline,
		Notes: d.Notes, Sketch: d.Sketch, Overridden: d.Overridden, Fingerprint: fingerprint,
	}
	for _, e := range d.Evidence {
		out.Evidence = append(out.Evidence, jsonEvidence{e.Name, e.About, e.Text, finite(e.Value), finite(e.Error), string(e.How), e.Method})
	}
	for _, r := range d.Related {
		j := jsonRelated{Path: filepath.ToSlash(r.Path), Row: r.Row, Column: r.Column, Message: r.Message}
		if r.Path == "" {
			j.Path = filepath.ToSlash(f.Path)
		}
		if r.Row == 0 && (r.Path == "" || r.Path == f.Path) {
			at := f.jsonRange(r.Span)
			j.Range = &at
		}
		out.Related = append(out.Related, j)
	}
	for _, x := range d.Fixes {
		j := jsonFix{Title: x.Title, Grade: x.Grade.String(), Consequence: x.Consequence, Edits: []jsonEdit{}}
		for _, e := range x.Edits {
			path := e.Path
			if path == "" {
				path = f.Path
			}
			j.Edits = append(j.Edits, jsonEdit{filepath.ToSlash(path), f.jsonRange(e.Span), e.Text})
		}
		out.Fixes = append(out.Fixes, j)
	}
	return out
}

// encode writes indented JSON with its characters as they are.
func encode(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(v)
}
