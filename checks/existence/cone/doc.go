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
// Medians of seven runs on two cores, Go 1.26, one thread, on a machine busy with
// other work (which slows both sides unevenly; load about 6 in the lower half);
// building the problem and the exact proof are included. HiGHS is SciPy
// 1.10's linprog, the call alone, given the same question as stated and in its dual
// form, once each, in the same run, stopped after 60 s. In milliseconds:
//
//	table     rows × columns     cone   stated     dual   stated/cone   better/cone
//	over          1,000 × 20        1.3       23        12          18            9
//	over          1,000 × 50        5.0       77        45          16            9
//	over         10,000 × 20        0.9      194       383         217          217
//	over         10,000 × 50        6.9      587     1,526          85           85
//	over        100,000 × 20        8.6    4,598    45,698         538          538
//	over        100,000 × 50       19.7   14,717  > 60,000         746          746
//	quasi         1,000 × 20        0.5       62       3.6         125            7
//	quasi         1,000 × 50        8.0      268        68          34            8
//	quasi        10,000 × 20        0.8      689       198         892          256
//	quasi        10,000 × 50       17.2    5,682     1,317         330           77
//	quasi       100,000 × 20       29.1    6,946       723         239           25
//	quasi       100,000 × 50       30.1   22,344     3,766         742          125
//	hid           1,000 × 20        1.0       29        21          30           21
//	hid           1,000 × 50       19.7      129        68           7            3
//	hid          10,000 × 20        3.2      364       756         114          114
//	hid          10,000 × 50       41.9    1,628     2,579          39           39
//	hid         100,000 × 20       39.0    7,330  > 60,000         188          188
//	hid         100,000 × 50       41.8   12,846  > 60,000         308          308
//	complete      1,000 × 20       14.8      167        88          11            6
//	complete      1,000 × 50       44.2      315       244           7            6
//	complete     10,000 × 20       57.6    1,391     1,819          24           24
//	complete     10,000 × 50       49.1    1,887     3,328          38           38
//	complete    100,000 × 20       55.0    3,464    46,036          63           63
//
// Here over is overlapped, quasi has a 3 % dummy of all ones, hid has a hidden
// direction over three columns of whole numbers, and complete is completely
// separated with a narrow gap. The command is
//
//	go run ./checks/existence/cone/peers
//
// with a python3 that has SciPy (or -python NAME). BenchmarkDecide measures this
// package alone. The exact method by itself takes about 10 to 60 ms for 10^4 rows
// and 20 columns, and about a second for 10^3 rows and 50 columns.
package cone
