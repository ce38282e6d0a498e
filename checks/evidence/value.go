// Package evidence collects what the page for the file shows: one value, from
// which the page, its Markdown and its JSON are made, so that they can't disagree.
//
// It holds summaries of the data and never a row. It looks at no clock: a date
// stands on the page only when it was given.
package evidence

import "wellposed/checks/posterior/longrun"

// Schema names the version of the JSON form. A change that a reader can notice,
// other than an added field, gets another number.
const Schema = "wellposed/evidence/1"

// Evidence is everything that the page shows.
type Evidence struct {
	Schema   string   `json:"schema"`
	Title    string   `json:"title"`
	Notes    []string `json:"notes,omitempty"`
	File     string   `json:"file"`
	FileHash string   `json:"fileSHA256"`
	Version  string   `json:"version"`
	Date     string   `json:"date,omitempty"`
	Matters  string   `json:"matters"`
	// Answer is the paragraph at the head, sentence by sentence.
	Answer []string `json:"answer"`
	// Alarm is set when the answer reports a failure or an open question.
	Alarm bool `json:"alarm"`

	Unknowns []Unknown `json:"unknowns"`
	Formulas []Formula `json:"formulas"`
	Data     []Datum   `json:"data"`
	Tables   []Table   `json:"tables,omitempty"`

	Priors      []Prior      `json:"priors"`
	Verdicts    []Verdict    `json:"existence"`
	Ranges      []Ranges     `json:"widerAndWider,omitempty"`
	Reports     []Report     `json:"reports"`
	Conclusions []Conclusion `json:"conclusions,omitempty"`
	Derived     []Derived    `json:"derived,omitempty"`
	Design      *Design      `json:"design,omitempty"`
	Promises    []Promise    `json:"promises,omitempty"`
	Acceptances []Acceptance `json:"acceptances,omitempty"`
	Findings    []Finding    `json:"findings"`
	Methods     []string     `json:"methods"`
	SelfTest    []Example    `json:"selfTest"`
	Checklist   []Item       `json:"checklist"`
	Cautions    []string     `json:"cautions"`
}

// Unknown is a declared unknown in words.
type Unknown struct {
	Name       string `json:"name"`
	Label      string `json:"label,omitempty"`
	Kind       string `json:"kind"`
	Support    string `json:"support,omitempty"`
	Components int    `json:"components"`
}

// Formula is one statement of the model: its words and its formula.
type Formula struct {
	Words   string `json:"words"`
	Formula string `json:"formula"`
}

// Datum says in a few words what an observation holds.
type Datum struct {
	What    string `json:"what"`
	Summary string `json:"summary"`
}

// Table summarises a data table.
type Table struct {
	Name    string   `json:"name"`
	Path    string   `json:"path,omitempty"`
	Hash    string   `json:"sha256,omitempty"`
	Rows    int      `json:"rows"`
	Columns []Column `json:"columns"`
}

// Column summarises a column, without its cells.
type Column struct {
	Name    string `json:"name"`
	Summary string `json:"summary"`
}

// Prior is a prior in force under an analysis.
type Prior struct {
	Analysis string `json:"analysis"`
	Text     string `json:"text"`
	Meaning  string `json:"meaning,omitempty"`
	Proper   string `json:"proper"`
	Because  string `json:"because,omitempty"`
	From     string `json:"from,omitempty"`
}

// Verdict says whether the posterior of a group of unknowns exists.
type Verdict struct {
	Analysis   string      `json:"analysis"`
	Unknowns   []string    `json:"unknowns"`
	Status     string      `json:"status"`
	How        string      `json:"how"`
	Claim      string      `json:"claim,omitempty"`
	Theorem    string      `json:"theorem,omitempty"`
	Source     string      `json:"source,omitempty"`
	Conditions []Condition `json:"conditions,omitempty"`
	Repairs    []string    `json:"repairs,omitempty"`
}

// Condition is a condition and the numbers put into it.
type Condition struct {
	Text   string `json:"text"`
	Filled string `json:"filled"`
	Holds  bool   `json:"holds"`
}

// Ranges shows what becomes of a bound when an improper prior is cut off further
// and further out: it follows the cut.
type Ranges struct {
	Analysis string `json:"analysis"`
	Prior    string `json:"prior"`
	Toward   string `json:"toward"`
	Quantity string `json:"quantity"`
	Steps    []Step `json:"steps"`
}

// Step is one cut and the number that it leads to.
type Step struct {
	Cut    string `json:"cut"`
	Number Number `json:"number"`
}

// Number is a value with how it was made. Value is nil where there is none.
type Number struct {
	Text   string   `json:"text"`
	Value  *float64 `json:"value"`
	Error  float64  `json:"error,omitempty"`
	How    string   `json:"how,omitempty"`
	Method string   `json:"method,omitempty"`
}

// Report is a reported quantity under every analysis.
type Report struct {
	Name    string `json:"name"`
	Formula string `json:"formula"`
	Asked   string `json:"asked"`
	// Mark is a number that a conclusion compares the quantity with.
	Mark *float64 `json:"mark,omitempty"`
	Rows []Row    `json:"rows"`
}

// Row is one analysis of a report.
type Row struct {
	Analysis string     `json:"analysis"`
	Priors   string     `json:"priors"`
	Median   Number     `json:"median"`
	Spans    []Interval `json:"intervals,omitempty"`
	Law      string     `json:"law,omitempty"`
	// Shift is the largest move of an end against the declared analysis, in
	// widths of its interval.
	Shift Number `json:"shift"`
	// None says why there are no numbers.
	None string `json:"none,omitempty"`
	// Prior and Posterior are curves of the density, scaled to a height of 1.
	Prior     []longrun.Point `json:"priorCurve,omitempty"`
	Posterior []longrun.Point `json:"posteriorCurve,omitempty"`
}

// Interval is one that was asked for.
type Interval struct {
	Kind  string `json:"kind"`
	Level string `json:"level"`
	Low   Number `json:"low"`
	High  Number `json:"high"`
}

// Conclusion is a conclusion under every analysis.
type Conclusion struct {
	Name string     `json:"name"`
	Rule string     `json:"rule"`
	Rows []Decision `json:"rows"`
	// Flips is set when the analyses that have an answer do not agree.
	Flips bool `json:"flips"`
}

// Decision is a conclusion under one analysis.
type Decision struct {
	Analysis string `json:"analysis"`
	Chance   Number `json:"chance"`
	// Drawn is "yes", "no", or "–" where nothing can be said.
	Drawn string `json:"drawn"`
	None  string `json:"none,omitempty"`
}

// Derived is a default that a rule gives for this likelihood.
type Derived struct {
	Rule     string   `json:"rule"`
	About    string   `json:"about"`
	Name     string   `json:"name,omitempty"`
	Steps    []string `json:"steps,omitempty"`
	Assumed  []string `json:"assumed,omitempty"`
	Source   string   `json:"source,omitempty"`
	Verdict  string   `json:"posterior"`
	Trouble  string   `json:"trouble,omitempty"`
	Declared bool     `json:"declared"`
}

// Design is the stage before the data.
type Design struct {
	// Hindsight is set when nothing is awaited and the plan that was carried out
	// is examined.
	Hindsight bool `json:"hindsight"`
	// Counts names the counts of the plan.
	Counts  []string       `json:"counts"`
	Trouble string         `json:"trouble,omitempty"`
	Breaks  []DesignBreaks `json:"breaks,omitempty"`
	Chances []DesignChance `json:"chances,omitempty"`
	Curves  []Curve        `json:"coverage,omitempty"`
	Sizes   *Sizes         `json:"sizes,omitempty"`
}

// DesignBreaks are the outcomes that leave no posterior under one analysis.
type DesignBreaks struct {
	Analysis string   `json:"analysis"`
	Text     string   `json:"outcomes"`
	Plans    []string `json:"plans,omitempty"`
	Chances  []Number `json:"chances,omitempty"`
}

// DesignChance is how often a conclusion is drawn.
type DesignChance struct {
	Analysis   string   `json:"analysis"`
	Conclusion string   `json:"conclusion"`
	Plans      []string `json:"plans"`
	Chances    []Number `json:"chances"`
}

// Curve is the long-run coverage of a report under one analysis.
type Curve struct {
	Analysis string          `json:"analysis"`
	Report   string          `json:"report"`
	Interval string          `json:"interval"`
	Over     string          `json:"over"`
	From     float64         `json:"from"`
	To       float64         `json:"to"`
	Nominal  float64         `json:"nominal"`
	Lowest   Number          `json:"lowest"`
	LowestAt string          `json:"lowestAt"`
	Average  Number          `json:"average"`
	Points   []longrun.Point `json:"points"`
}

// Sizes are smallest sample sizes of a demonstration without failure.
type Sizes struct {
	Claim string    `json:"claim"`
	Rows  []SizeRow `json:"rows"`
}

// SizeRow is the size under one prior.
type SizeRow struct {
	Analysis string `json:"analysis"`
	Trials   string `json:"trials"`
	// Risk is how often a product exactly at the limit passes.
	Risk Number `json:"risk"`
}

// Promise is a `require` statement and how it came out.
type Promise struct {
	Text     string `json:"text"`
	Outcome  string `json:"outcome"`
	Distance string `json:"distance,omitempty"`
	Why      string `json:"why,omitempty"`
}

// Acceptance is an `accept` or `override` statement.
type Acceptance struct {
	Kind    string `json:"kind"`
	Rule    string `json:"rule"`
	For     string `json:"for,omitempty"`
	Because string `json:"because,omitempty"`
	By      string `json:"by,omitempty"`
	Until   string `json:"until,omitempty"`
}

// Finding is a finding of the rules.
type Finding struct {
	Rule       string   `json:"rule"`
	Severity   string   `json:"severity"`
	Line       int      `json:"line"`
	Headline   string   `json:"headline"`
	Notes      []string `json:"notes,omitempty"`
	Overridden string   `json:"overridden,omitempty"`
}

// Example is a published number and what this program makes of it.
type Example struct {
	Name      string `json:"name"`
	Source    string `json:"source"`
	Published string `json:"published"`
	Computed  string `json:"computed"`
	Agrees    bool   `json:"agrees"`
}

// Item is an item of a checklist and where it is answered.
type Item struct {
	List  string `json:"list"`
	Item  string `json:"item"`
	Where string `json:"where"`
}
