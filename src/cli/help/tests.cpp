#include "cli/commands.hpp"

namespace rivalfold {

std::string_view help_tests() {
    return R"help(TESTS: is the difference between two contestants more than luck?

Two contestants a and b were judged on the same rows and the same splits, so
their losses are compared in pairs. Two tests ask the same question and fail in
different places. One theory of a pair is said to predict better only if BOTH
reject.

Row test
   d_i = L(a, i) - L(b, i), i = 1..n, each first averaged over the repeats
   D   = mean of the d_i (negative: a lost less)
   se  = sd(d) / sqrt(n);  t = D / se, with n - 1 degrees of freedom
   With `cluster`, G clusters:
   se  = sqrt( G/(G-1) x sum over clusters of c^2 ) / n, with G - 1 degrees of
         freedom; c = the cluster's sum of d_i - D
   It is the paired t test of Student (1908); on squared errors, the comparison
   of forecasts by Diebold & Mariano (1995) with the small-sample factor of
   Harvey, Leybourne & Newbold (1997). Clusters: Liang & Zeger (1986).

Corrected repeated k-fold test
   s_rk = mean loss of a minus mean loss of b in split (r, k)
   t    = mean(s) / ( sd(s) sqrt( 1/(RK) + 1/(K-1) ) ), with K folds, R repeats
          and RK - 1 degrees of freedom
   The term 1/(K-1) makes up for training sets that overlap (Nadeau & Bengio
   2003; Bouckaert & Frank 2004).

Interval   D -+ (t quantile at 1 - level/2) x standard error, for each test; the
           one to read is the wider of the two. Also as a share of b's loss
           (relative).
Holm       p_holm runs over the pairs of theories (Holm 1979); pairs with a
           benchmark are not part of it and have none.
Verdict    of a pair, in this order:
           practically equal, if the 1 - 2 x level interval of the difference,
           the wider of the two tests', lies within +-margin of the smaller
           loss (two one-sided tests, Schuirmann 1987);
           the first (the second) predicts better, if the larger of the two
           tests' p, adjusted by Holm over the pairs of theories, is below
           `level`; a pair with a benchmark is not adjusted;
           otherwise unresolved.
Winner     over all: the best-ranked theory, if it beats every rival, each with
           the larger of its two unadjusted p below `level`. No Holm is needed:
           all must reject at once (intersection-union test, Berger 1982).
           Otherwise there is no winner, whatever the order of the table, but
           a shortlist.
           Testing the best against the second alone, as a ranking invites,
           named a false winner in up to 9% of simulated samples.
Shortlist  where there is no winner: the model confidence set (Hansen, Lunde &
           Nason 2011), theories that may still be the best. From a bootstrap
           of the rows (with `cluster`, of the clusters), 2000 resamples:
           D_a. = mean loss of a minus mean loss of the set, v_a. = its
           bootstrap variance, T_max = max D_a. / sqrt(v_a.); its p is the
           share of resamples in which max (D*_a. - D_a.) / sqrt(v_a.) is as
           large. While p is small the theory with the largest statistic
           leaves. A theory's p is the largest p met up to its leaving; the
           shortlist are those with p above `level`. T_R = max |D_ab| /
           sqrt(v_ab) over pairs is in results.json too; it keeps all of
           several tied nested theories in only 57-67% of samples, T_max in
           97-98%.
Repeats    monte_carlo_se: standard deviation over repeats of the pair's mean
           difference, over sqrt(R): the part of the uncertainty that another
           seed would change. `repeats: auto` adds repeats until it is at most
           a tenth of the rows' standard error for every pair, at most 200.
Nested     Theory 1 is nested in theory 2 if all its terms are among those of
           2. Then the Clark-West test: f_i = e1^2 - e2^2 + (p1 - p2)^2 for
           errors e and predictions p, t = mean f / se, one-sided, normal
           (Clark & West 2007). It asks whether the extra terms carry
           information, not whether they predict better with this many rows.
Knows more Encompassing: does 1 contain all that 2 knows of new rows? d_i =
           e1 (e1 - e2), t = mean d / se, one-sided; a small p: 2 holds
           something that 1 lacks (Harvey, Leybourne & Newbold 1998).
Stack      The mixture of theories with non-negative weights that sum to 1 and
           the smallest squared error (Breiman 1996). The weights used on a
           fold come from the held-out errors of the other folds, so its loss
           is held out too. If it beats the best theory by both tests and by
           more than `margin`, the theories are complementary.
Segments   reversal: D_s - D_s' between two segments over sqrt(se_s^2 +
           se_s'^2), each se the larger of the two tests' standard errors,
           Welch's degrees of freedom (Welch 1947), Holm over all pairs of
           theories and of segments.
With loss: absolute the Clark-West and encompassing tests and the weights of the
stack still come from squared errors, as published; only the stack's own loss is
absolute.
All of these, for a target with several items, are means over the items in units
u_j, averaged over repeats row by row, with variances by cluster where set.
Identical theories: every d_i is the same number; t and p are empty, with the
reason.

Why both: rates of a FALSE winner, nominal 5%
   Simulated with known truth: seven-point items, three per construct, 10 x 10
   folds, n = 60, 100, 200, 500; 2000 to 4000 samples a cell (error about 0.4
   points); two theories of equal expected held-out loss.

   truth                                      row test   corrected  both
   ------------------------------------------ ---------- ---------- ----------
   two exchangeable theories, not nested      3.8 - 5.4  2.9 - 4.5  2.7 - 4.0 %
     (also heavy tails, skew, unequal spread)
   nested, one weak extra term                17 - 22    3.1 - 5.3  3.0 - 5.3 %
   nested, three weak extra terms             9 - 10     4.7 - 6.1  4.5 - 6.1 %
   clusters of 10 (intraclass correlation     13 - 17    11 - 14    2 - 5 % (1)
     .5), folds that split clusters
   the same, whole clusters held out          18 - 28    3 - 6 (2)  3 - 5 % (1)
   ------------------------------------------ ---------- ---------- ----------
   (1) row test by cluster, as this program does with `cluster`
   (2) but 24% with 6 clusters
   Over four theories, two to four of them tied, the winner rule named a false
   winner in at most 4% of samples.

When each test fails
   nested theories   Additive against amplifying is a nested pair. The row test
                     alone then names a false winner in a fifth of samples.
   few clusters      The corrected test fails with 6 clusters (24%); fewer than
                     10 clusters is an advice line. Rows that belong to yards,
                     classes or firms need `cluster`: without it all rates above
                     5% in the table's lower half are yours.
   small samples     With a true interaction and n <= 100, the 95% intervals
                     hold the truth in 85 - 88% of samples (93 - 99% in the
                     table's cases). With 100 rows equality can almost never be
                     shown.
   one repeat        The corrected test has 3% power with 1 repeat where it has
                     59% with 10 and 62% with 50 (.5 against .3, n = 500).
                     Another seed changes the verdict in 26% of samples with 1
                     repeat, 14% with 10, 7% with 50 (the worst cell).
   leave one out     Each split holds one row: K = n, R = 1, and the corrected
                     test's training sets overlap almost wholly. Its formula is
                     applied as it stands (1/n + 1/(n-1)), so its t is near the
                     row test's divided by sqrt(2). Prefer 10 folds and 50
                     repeats.
   price             Asking for both costs power: 59% instead of 65% at n = 500
                     for a standardised loss difference of .067.

"Unresolved" is not "equal", and a contest is not a test of an extra term
   At n = 200, with a true interaction that explains 4%, the verdict above names
   the multiplicative theory in 2.4% of samples. The term is real; with 200 rows
   it costs about as much to estimate as it brings. Whether the term carries
   information is another question, with another test (Clark & West 2007), which
   found it in 56% of the same samples (and in 4 - 8% where it was noise).

CAUTION
   Prediction is not causation, and a survey is not an experiment. The p values
   hold for theories that were written down before the losses were seen:
   changing theories until one wins voids them. A better prediction on average
   says little about any one person; decisions about people need qualified
   review and local rules.

SOURCES
   Berger, R. L. (1982). Multiparameter hypothesis testing and acceptance
     sampling. Technometrics, 24(4), 295-300.
   Bouckaert, R. R. & Frank, E. (2004). Evaluating the replicability of
     significance tests for comparing learning algorithms. Advances in Knowledge
     Discovery and Data Mining, LNCS 3056, 3-12. Berlin: Springer.
   Breiman, L. (1996). Stacked regressions. Machine Learning, 24(1), 49-64.
   Clark, T. E. & West, K. D. (2007). Approximately normal tests for equal
     predictive accuracy in nested models. Journal of Econometrics, 138(1),
     291-311.
   Diebold, F. X. & Mariano, R. S. (1995). Comparing predictive accuracy.
     Journal of Business & Economic Statistics, 13(3), 253-263.
   Hansen, P. R., Lunde, A. & Nason, J. M. (2011). The model confidence set.
     Econometrica, 79(2), 453-497.
   Harvey, D., Leybourne, S. & Newbold, P. (1997). Testing the equality of
     prediction mean squared errors. International Journal of Forecasting,
     13(2), 281-291.
   Harvey, D., Leybourne, S. & Newbold, P. (1998). Tests for forecast
     encompassing. Journal of Business & Economic Statistics, 16(2), 254-259.
   Holm, S. (1979). A simple sequentially rejective multiple test procedure.
     Scandinavian Journal of Statistics, 6(2), 65-70.
   Liang, K.-Y. & Zeger, S. L. (1986). Longitudinal data analysis using
     generalized linear models. Biometrika, 73(1), 13-22.
   Nadeau, C. & Bengio, Y. (2003). Inference for the generalization error.
     Machine Learning, 52(3), 239-281.
   Schuirmann, D. J. (1987). A comparison of the two one-sided tests procedure
     and the power approach for assessing the equivalence of average
     bioavailability. Journal of Pharmacokinetics and Biopharmaceutics, 15(6),
     657-680.
   Student (1908). The probable error of a mean. Biometrika, 6(1), 1-25.
   Welch, B. L. (1947). The generalization of Student's problem when several
     different population variances are involved. Biometrika, 34(1-2), 28-35.
   The simulated rates: this project's own simulations, as described above the
   table.
)help";
}

}  // namespace rivalfold
