package grammar

// StatementSpec is what there is to say about one kind of statement.
type StatementSpec struct {
	Keyword string
	// Noun names the statement in a sentence: "a prior".
	Noun string
	// Forms are the ways to write it; words in capitals stand for something.
	Forms []string
	Doc   string
}

// Statements lists the statements in the order of Keywords.
var Statements = []*StatementSpec{
	{Keyword: "title", Noun: "a title", Doc: "names the analysis",
		Forms: []string{`title "TEXT"`}},
	{Keyword: "note", Noun: "a note", Doc: "is printed in the evidence page",
		Forms: []string{`note "TEXT"`}},
	{Keyword: "field", Noun: "a field", Doc: "chooses the words of a trade",
		Forms: []string{`field "NAME"`}},
	{Keyword: "matters", Noun: "a threshold", Doc: "says which share of the reference interval's width counts as a shift",
		Forms: []string{"matters SHARE"}},
	{Keyword: "given", Noun: "a known number", Doc: "gives known numbers and vectors a name",
		Forms: []string{"given NAME = NUMBER", "given NAME = [NUMBER, NUMBER]", "given NAME = NUMBER, NAME = NUMBER"}},
	{Keyword: "table", Noun: "a table", Doc: "reads data from a file, or from the rows below it",
		Forms: []string{`table NAME from "FILE"`, "table NAME"}},
	{Keyword: "unknown", Noun: "an unknown", Doc: "declares what is to be learnt, and of what kind it is",
		Forms: []string{"unknown NAME : KIND", "unknown NAME per COLUMN : KIND", "unknown NAME per (COLUMN, COLUMN) : KIND",
			`unknown NAME per COLUMN relative to "LEVEL" : KIND`, "unknown NAME for (COLUMN, COLUMN) : KIND",
			"unknown NAME : KIND in (LOW, HIGH)", "unknown NAME : KIND limited to CONDITION by nature"}},
	{Keyword: "vary", Noun: "a varying effect", Doc: "declares an unknown per level and the population it comes from",
		Forms: []string{"vary NAME across COLUMN as DISTRIBUTION"}},
	{Keyword: "let", Noun: "a definition", Doc: "gives an expression a name",
		Forms: []string{"let NAME = EXPRESSION"}},
	{Keyword: "observe", Noun: "an observation", Doc: "says how data arise",
		Forms: []string{"observe DATA as DISTRIBUTION", "observe COUNT of TRIALS with probability EXPRESSION",
			"observe COUNT in EXPOSURE at rate EXPRESSION", "observe between(LOW, HIGH) as DISTRIBUTION"}},
	{Keyword: "prior", Noun: "a prior", Doc: "says what is assumed of an unknown before the data",
		Forms: []string{"prior NAME as DISTRIBUTION", "prior NAME flat", "prior NAME ∝ EXPRESSION", "prior NAME jeffreys",
			"prior (NAME, NAME) jeffreys jointly", "prior (NAME, NAME) jeffreys separately",
			"prior (NAME, NAME) reference NAME before NAME"}},
	{Keyword: "rival", Noun: "a rival", Doc: "names another prior for the sensitivity table",
		Forms: []string{`rival "NAME": NAME as DISTRIBUTION`, `rival "NAME": NAME as DISTRIBUTION; NAME flat`}},
	{Keyword: "rivals", Noun: "a standard set of rivals", Doc: "adds the standard set of priors for this likelihood",
		Forms: []string{"rivals for NAME: standard"}},
	{Keyword: "report", Noun: "a report", Doc: "says which quantity is quoted, and how",
		Forms: []string{"report NAME", "report NAME = EXPRESSION", "report NAME, central 95%", "report NAME, upper 95%",
			"report NAME, shortest 95%", "report NAME, mean"}},
	{Keyword: "conclude", Noun: "a conclusion", Doc: "says when a conclusion will be drawn",
		Forms: []string{`conclude "TEXT" when P(CONDITION) >= LEVEL`}},
	{Keyword: "await", Noun: "awaited data", Doc: "names data that are not observed yet",
		Forms: []string{"await NAME", "await NAME, NAME"}},
	{Keyword: "suppose", Noun: "a planning value", Doc: "gives values of an unknown to plan with",
		Forms: []string{"suppose NAME in VALUE, VALUE", "suppose NAME from VALUE to VALUE", "suppose NAME as DISTRIBUTION"}},
	{Keyword: "require", Noun: "a promise", Doc: "promises something about the analysis",
		Forms: []string{"require a posterior for every outcome", "require a posterior with probability >= SHARE",
			"require long-run coverage of NAME: lowest >= SHARE, average >= SHARE, NAME from VALUE to VALUE",
			`require chance of "CONCLUSION" <= SHARE when NAME = VALUE`, "require rivals agree on NAME within SHARE"}},
	{Keyword: "accept", Noun: "an acceptance", Doc: "accepts a finding, with a reason",
		Forms: []string{`accept RULE for NAME because "REASON" by "WHO" until YEAR-MONTH-DAY`}},
	{Keyword: "override", Noun: "an override", Doc: "goes on in spite of a finding that can't be accepted away; it stays visible",
		Forms: []string{`override RULE for NAME because "REASON" by "WHO" until YEAR-MONTH-DAY`}},
}

// FindStatement looks a statement up by its keyword; nil when there is none.
func FindStatement(keyword string) *StatementSpec {
	for _, s := range Statements {
		if s.Keyword == keyword {
			return s
		}
	}
	return nil
}
