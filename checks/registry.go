package checks

import (
	"wellposed/checks/rule"
	"wellposed/parser/model"
)

// Rules lists every rule in the order of the rule list.
func Rules() []*rule.Rule { return registry }

var registry = []*rule.Rule{}

// problemRules are the names under which reading reports, with their pages
// beside the rules'.
var _ = model.Jeffreys
