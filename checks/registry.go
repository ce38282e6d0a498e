package checks

import (
	"wellposed/checks/rule"
	boundsetstheanswer "wellposed/checks/rules/bound-sets-the-answer"
	categoriesoutweighcounts "wellposed/checks/rules/categories-outweigh-counts"
	collinearcolumns "wellposed/checks/rules/collinear-columns"
	coveragebelowpromise "wellposed/checks/rules/coverage-below-promise"
	defaultpriorsdisagree "wellposed/checks/rules/default-priors-disagree"
	defaultwithoutreason "wellposed/checks/rules/default-without-reason"
	deriveddefaultbreaks "wellposed/checks/rules/derived-default-breaks"
	existencenotdecided "wellposed/checks/rules/existence-not-decided"
	falseclaimrateabovepromise "wellposed/checks/rules/false-claim-rate-above-promise"
	flatdependsonscale "wellposed/checks/rules/flat-depends-on-scale"
	flatonunbounded "wellposed/checks/rules/flat-on-unbounded"
	inducedpriorpilesatlimits "wellposed/checks/rules/induced-prior-piles-at-limits"
	jeffreyssenseunstated "wellposed/checks/rules/jeffreys-sense-unstated"
	labelsinterchangeable "wellposed/checks/rules/labels-interchangeable"
	likelihoodplateauatinfinity "wellposed/checks/rules/likelihood-plateau-at-infinity"
	logflatspreadbetweengroups "wellposed/checks/rules/log-flat-spread-between-groups"
	manyflatcomponents "wellposed/checks/rules/many-flat-components"
	momentdoesnotexist "wellposed/checks/rules/moment-does-not-exist"
	norivaldeclared "wellposed/checks/rules/no-rival-declared"
	nothingbutlimits "wellposed/checks/rules/nothing-but-limits"
	nothingreported "wellposed/checks/rules/nothing-reported"
	observationoutsidesupport "wellposed/checks/rules/observation-outside-support"
	onlyacombinationisseen "wellposed/checks/rules/only-a-combination-is-seen"
	outcomebreaksanalysis "wellposed/checks/rules/outcome-breaks-analysis"
	planningandanalysispriormixed "wellposed/checks/rules/planning-and-analysis-prior-mixed"
	populationsizetail "wellposed/checks/rules/population-size-tail"
	posteriordoesnotexist "wellposed/checks/rules/posterior-does-not-exist"
	prioralreadyclaims "wellposed/checks/rules/prior-already-claims"
	priordataconflict "wellposed/checks/rules/prior-data-conflict"
	prioristheonlysource "wellposed/checks/rules/prior-is-the-only-source"
	prioroutweighsdata "wellposed/checks/rules/prior-outweighs-data"
	rivalisthesameprior "wellposed/checks/rules/rival-is-the-same-prior"
	separatedresponses "wellposed/checks/rules/separated-responses"
	spikeatzero "wellposed/checks/rules/spike-at-zero"
	spreadargumentunnamed "wellposed/checks/rules/spread-argument-unnamed"
	stoppingrulechangesdefault "wellposed/checks/rules/stopping-rule-changes-default"
	toofewfailuresforshape "wellposed/checks/rules/too-few-failures-for-shape"
	toofewgroupsforflatspread "wellposed/checks/rules/too-few-groups-for-flat-spread"
	toofewreadingsforscale "wellposed/checks/rules/too-few-readings-for-scale"
	vaguebutdecides "wellposed/checks/rules/vague-but-decides"
	zerocountwithopenendedprior "wellposed/checks/rules/zero-count-with-open-ended-prior"
)

// Rules lists every rule in the order of the rule list: group by group.
func Rules() []*rule.Rule { return registry }

var registry = []*rule.Rule{
	posteriordoesnotexist.Rule,
	zerocountwithopenendedprior.Rule,
	separatedresponses.Rule,
	logflatspreadbetweengroups.Rule,
	toofewgroupsforflatspread.Rule,
	toofewreadingsforscale.Rule,
	deriveddefaultbreaks.Rule,
	likelihoodplateauatinfinity.Rule,
	nothingbutlimits.Rule,
	toofewfailuresforshape.Rule,
	populationsizetail.Rule,
	momentdoesnotexist.Rule,
	existencenotdecided.Rule,
	collinearcolumns.Rule,
	onlyacombinationisseen.Rule,
	prioristheonlysource.Rule,
	labelsinterchangeable.Rule,
	spreadargumentunnamed.Rule,
	flatonunbounded.Rule,
	flatdependsonscale.Rule,
	inducedpriorpilesatlimits.Rule,
	jeffreyssenseunstated.Rule,
	stoppingrulechangesdefault.Rule,
	rivalisthesameprior.Rule,
	manyflatcomponents.Rule,
	vaguebutdecides.Rule,
	defaultpriorsdisagree.Rule,
	boundsetstheanswer.Rule,
	spikeatzero.Rule,
	prioroutweighsdata.Rule,
	categoriesoutweighcounts.Rule,
	priordataconflict.Rule,
	observationoutsidesupport.Rule,
	outcomebreaksanalysis.Rule,
	coveragebelowpromise.Rule,
	falseclaimrateabovepromise.Rule,
	prioralreadyclaims.Rule,
	planningandanalysispriormixed.Rule,
	defaultwithoutreason.Rule,
	norivaldeclared.Rule,
	nothingreported.Rule,
}

// Find returns the rule of that name, nil when there is none.
func Find(name string) *rule.Rule {
	for _, r := range registry {
		if r.Name == name {
			return r
		}
	}
	return nil
}
