// Package cone decides exactly whether a system of homogeneous linear
// inequalities and equations has a solution other than 0, for tables of 10^5 rows
// and more, and proves its answer.
//
// # What it is for
//
// Let the likelihood be a product of log-concave functions of linear forms x_i·β
// and the prior flat. The posterior exists exactly when the recession function of
// the log-likelihood is negative in every direction d ≠ 0 (Rockafellar 1970, §8;
// for binary regression Albert and Anderson 1984, Silvapulle 1981). Each
// observation contributes the directions along which it costs nothing, and they
// form a half-space or a hyperplane: x·d ≥ 0 for a binary response 1, x·d ≤ 0 for
// 0, x·d = 0 for a binomial count strictly between, x·d ≤ 0 for a Poisson count 0
// and x·d = 0 for a positive one, and so on. The posterior exists exactly when
// only d = 0 satisfies all rows.
//
// [Decide] gives one of three answers with a proof in integers, or says that its
// limit of work was reached:
//
//   - [RankDeficient]: a direction d ≠ 0 along which every row is 0. This is
//     looked at first.
//   - [Separated]: a direction d ≠ 0 that satisfies every row and is off 0 on one.
//     [Widest] extends it until the rows that still touch are 0 along every
//     solution, which tells complete from quasi-complete separation.
//   - [Overlapped]: weights, positive on inequalities, under which some of the
//     rows sum to 0, and those rows have full rank (Stiemke 1915). If d satisfies
//     every row then each of these rows is 0 along d, and d = 0 by the rank.
//
// Entries are exact decimals or rationals. A positive factor on a row, or on a
// column, changes nothing, so columns are scaled to integers. Offsets play no part.
// Coefficients with a light-tailed prior are left out with [Drop]; half-line
// supports are rows, see [Extend]. A subset of rows that overlaps with full rank
// proves the same of every larger set, whatever the other rows say.
//
// # How
//
// Rows that compare two unknowns each (paired comparisons, Rasch) are a graph, and
// the answer is whether it is strongly connected.
//
// Otherwise a working set of about ten rows per column is put to Newton's method
// for the logistic loss. With margins m_i = a_i·β, w_i = 1/(1 + exp(m_i)) and D the
// Newton step, the weights w_i(1 − (1 − w_i) a_i·D) are orthogonal to all columns at
// every step, converged or not. When all are positive they are rounded, those of
// a basis of rows are solved for exactly (Dixon 1982), and if these are positive
// too the overlap is proved. Otherwise rows with a_i·D near 0 are taken to be 0
// along a direction, which is made exact by the same solver, checked on the working
// set and then on all rows; rows that it violates join the working set. Columns of
// one sign are looked for before. Nothing found in floating point is believed:
// ranks are proved by a minor that is not 0 modulo 2^61 − 1, directions by the
// integer product with every row, weights by the integer system.
//
// When that gives no proof, the dual simplex method in integers does, with Bland's
// rule after a while, so that it ends. Its pivots need a pass over the rows, in which
// the leading 60 bits decide almost all signs exactly. Columns whose entries have
// more than about 18 digits go there at once.
//
// # Cost
//
// Medians of seven runs on two cores, Go 1.26, one thread, other work going on
// beside; building the problem and the exact proof are included. HiGHS is SciPy
// 1.10's linprog, the call alone, given the same question as stated and in its dual
// form, in the same run. In milliseconds:
//
//TABLE
//
// (over: overlapped; quasi: a 3 % dummy of all ones; hid: a hidden direction over
// three columns of whole numbers; complete: completely separated with a narrow
// gap.) The command is
//
//	go run ./checks/existence/cone/peers
//
// (with a python3 that has SciPy, or -python NAME); BenchmarkDecide measures this package alone. The exact method by itself takes
// about 10 to 60 ms for 10^4 rows and 20 columns, and seconds for 50 columns.
package cone
