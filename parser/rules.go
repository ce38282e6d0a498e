package parser

// The names of the findings of reading.
const (
	RuleStatement  = "unreadable-statement"
	RuleKeyword    = "unknown-keyword"
	RuleCharacter  = "unreadable-character"
	RuleText       = "unclosed-text"
	RuleEncoding   = "invalid-utf-8"
	RuleRow        = "row-without-table"
	RuleFile       = "text-too-large"
	RuleLong       = "statement-too-long"
	RuleStatements = "too-many-statements"
)

// RuleDoc is one line about a finding of reading.
type RuleDoc struct{ Name, Doc string }

// Rules lists the findings of reading.
var Rules = []RuleDoc{
	{RuleStatement, "A statement begins with its keyword but does not go on in one of the ways that it can be written. The other statements are read all the same."},
	{RuleKeyword, "A line begins with a word that begins no statement."},
	{RuleCharacter, "A character has no meaning in the language, or a number runs into letters."},
	{RuleText, "A text has no closing quote before its line ends."},
	{RuleEncoding, "The file holds bytes that are not UTF-8. The rest is read."},
	{RuleRow, "A line begins with | but stands under no `table NAME`."},
	{RuleFile, "The file is larger than a model file may be, so it is not read."},
	{RuleLong, "A statement is longer than a statement may be, so it is not read."},
	{RuleStatements, "The file has more statements than are read; the rest is left out."},
}
