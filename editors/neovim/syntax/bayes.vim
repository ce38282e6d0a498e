" Made from the language's data; see grammar/highlight.
if exists('b:current_syntax')
  finish
endif
syntax case match
syntax iskeyword @,48-57,_,192-255
syntax keyword bayesModifier across agree as at average because before between by censored central chance constrained coverage every flat for from in jeffreys jointly left limited long lower lowest matching nature of on only outcome per posterior proportional rate reference relative right run sd separately shortest standard to truncated until upper weighted when where with within
syntax keyword bayesKind real location effect positive scale rate shape degrees probability correlation proportions covariance cutpoints count
syntax match bayesKeyword /^\s*\%(title\|note\|field\|matters\|given\|table\|unknown\|vary\|let\|observe\|prior\|rival\|rivals\|report\|conclude\|await\|suppose\|require\|accept\|override\)\>/
syntax match bayesFunction /\<\%(log-gamma\|distance\|previous\|cloglog\|between\|summary\|probit\|length\|linear\|logit\|expit\|atanh\|sqrt\|odds\|atan\|tanh\|mean\|log\|exp\|abs\|Phi\|sum\|min\|max\|det\|P\)\ze\s*(/
syntax match bayesDistribution /\c\<\%(generalized-extreme-value\|multivariate-Normal\|generalized-Pareto\|correlation-matrix\|negative-Binomial\|cumulative-probit\|multinomial-logit\|discrete-Uniform\|cumulative-logit\|inverse-Gaussian\|inverse-Wishart\|hypergeometric\|half-Student-t\|beta-Binomial\|inverse-Gamma\|Multinomial\|categorical\|skew-Normal\|Exponential\|half-Normal\|half-Cauchy\|log-Normal\|chi-square\|triangular\|Bernoulli\|geometric\|Student-t\|von-Mises\|Dirichlet\|Binomial\|logistic\|Poisson\|Laplace\|Weibull\|Uniform\|Wishart\|Mixture\|g-prior\|Normal\|Cauchy\|Gumbel\|Pareto\|Gamma\|Point\|Beta\|Cox\|AR1\)\ze\s*(/
syntax match bayesNumber /\<\d\+\%(\.\d\+\)\=\%([eE][-+]\=\d\+\)\=\>/
syntax region bayesString start=/"/ skip=/\\"/ end=/"/ oneline
syntax match bayesComment /#.*/
highlight default link bayesKeyword Statement
highlight default link bayesModifier Keyword
highlight default link bayesKind Type
highlight default link bayesFunction Function
highlight default link bayesDistribution Identifier
highlight default link bayesNumber Number
highlight default link bayesString String
highlight default link bayesComment Comment
let b:current_syntax = 'bayes'
