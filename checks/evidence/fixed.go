package evidence

// cautions are the fixed words at the end of every page.
var cautions = []string{
	"This page examines what the choice of priors does under the stated model. It does not examine whether the model fits reality, whether the data are sound, or whether the answer is fit for a decision.",
	"It is no approval and no certificate. The responsible, qualified and, where the law asks for it, licensed person decides and answers for the decision.",
	"Local codes, the protocol or analysis plan, and the regulator's current guidance come before anything that stands here. Drafts of guidance change; look at the edition in force.",
	"No prior is recommended. Standard choices are listed with their sources and what each does with these data.",
	"Long-run coverage says how a procedure behaves over repeated data under the model. It is not the probability that one interval holds the true value.",
	"“Proved” means that the conditions of a theorem were checked exactly on these data; “bounded” that verified numerical bounds decide; “indicated” that there is numerical evidence only; “not decided” that neither was found. What is not decided is open, not sound.",
}

// checklist are items that reviewers ask for, in our words, with the part of the
// page that answers them; an empty part is filled in by what the file holds.
var checklist = []Item{
	{"Seven items for reporting a Bayesian analysis (J. Clin. Epidemiol., 2005; wording ours)", "Prior distributions are specified", "4 Priors"},
	{"", "The choice of priors is justified", "4 Priors, reason and source"},
	{"", "Sensitivity of the answer to the priors is shown", "6 Rivals and reports"},
	{"", "The statistical model is stated", "2 Model"},
	{"", "The technique of computation is stated", "10 Methods and error bounds"},
	{"", "A central value is reported", "6 Rivals and reports"},
	{"", "Its uncertainty is reported", "6 Rivals and reports"},
	{"Bayesian analysis reporting guidelines (2021; wording ours)", "Goals and data are explained", "title and notes; 3 Data, in summary only"},
	{"", "Likelihood and parameters are explained", "2 Model"},
	{"", "A prior predictive check is shown", "4 Priors, on the reported scale; not on the scale of the data"},
	{"", "A posterior predictive check is shown", "not covered"},
	{"", "Convergence of a sampler is shown", "10 Methods and error bounds, where sampling was used"},
	{"", "Sensitivity analysis", "6 Rivals and reports"},
	{"Guidance for Bayesian statistics in device trials (2010; wording ours)", "Operating characteristics of the design", "8 Before the data"},
	{"Parameter estimation for probabilistic risk assessment (NUREG/CR-6823, 2003; wording ours)", "Consistency of data and prior is examined", "9 Findings, where a rule speaks"},
	{"Measurement uncertainty (JCGM 101:2008; wording ours)", "The distribution of every input is stated", "4 Priors"},
	{"", "A coverage interval is stated, and the standard uncertainty only where it exists", "6 Rivals and reports; 9 Findings"},
	{"Software used for calculations", "The program is tested against published examples", "11 Self-test"},
}
