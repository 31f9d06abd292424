#include "cli/commands.hpp"

namespace rivalfold {

std::string_view help_losses() {
    return R"help(LOSSES: how far off each theory was on rows that it had not seen

The splits
   The rows are dealt into K folds of equal size (to within one row), R times
   over, from the seed: the same seed gives the same folds on every machine and
   for any number of threads, and every contestant gets the same folds. In each
   split one fold is held out and the other K - 1 train, so that each row is
   predicted R times, never by a fit that has seen it. With `cluster`, whole
   clusters are dealt. folds = rows is leave one out. `folds_file` takes the
   splits from a file; folds.csv records them.

Symbols
   i = 1..n   rows used              j = 1..q   items of the target
   r = 1..R   repeats                t          a theory or benchmark
   e_ij       actual minus predicted answer of row i on item j (repeat r)
   u_j        standard deviation (divisor n - 1) of target item j over all rows
              used: one fixed unit, the same for every contestant and fold

The loss of one row, and of a theory
   squared    L(t, r, i) = mean over j of (e_ij / u_j)^2
   absolute   L(t, r, i) = mean over j of |e_ij / u_j|
   L(t, i)    = mean of L(t, r, i) over the repeats r         -> losses.csv
   loss(t)    = mean of L(t, i) over the rows i: THE NUMBER THAT RANKS
   Smaller is better. With `squared`, 1.00 is about what the training mean
   loses; 0.75 means that a quarter of the items' variance was foreseen.

Shown beside it, whatever `loss` is
   rmse(t) = square root of the mean of (e/u)^2 over rows, repeats and items
   mae(t)  = mean of |e/u| over rows, repeats and items
   q2(t)   = 1 - SSE(t) / SSE(training mean), SSE = sum of (e/u)^2; 0 is the
             training mean, 1 is perfect, below 0 is worse than the mean
   For each item, in its own units (no division by u):
     rmse, mae, q2, and
     mape = 100 x mean of |e / actual| in percent; empty (null) if any actual
            value is 0
   Cautions on mape: it depends on where the scale has its zero, punishes
   predictions that are too high more than those that are too low, and means
   little for ratings. It is given because readers ask for it.

How much there is to predict: verdict: {completeness: true}
   flexible benchmark   kernel ridge regression (Gaussian kernel, no form
      assumed) on the linear benchmark's predictors, over the first repeat's
      folds. Length-scale (8, 4, 2, 1, 1/2 times the median distance of the
      training rows) and penalty (1e4 to 1e-4 in half decades) are chosen
      inside the training rows by their leave-one-out errors, in closed form.
      Above 1,000 training rows that choice is made on 1,000 of them; above
      5,000 rows the comparison is made on a seeded subsample; more than 20
      folds of more than 100 rows are joined to 20. The output says so.
   completeness(t)      (loss(mean) - loss(t)) / (loss(mean) - loss(flexible)):
      the share of what these items can tell that the theory tells. Its
      interval: 2000 resamples of rows, or of clusters. Above 1 where a theory
      predicts better than the flexible benchmark can with this many rows.
   restrictiveness(t)   mean squared error of the best fit of the theory's
      target equation to random outcomes, over that of their mean: 200 smooth
      functions of the antecedents' scores, drawn from a Gaussian process
      (controls left out of them; 1,500 rows at most). Near 0: the equation
      could fit anything, so fitting this earns it nothing; near 1: it could
      fit none of them. A good theory is complete and restrictive.

How to read them
   - rmse and mae can name different winners: rmse minds a few large misses
     more. `loss` says which one ranks, before the data is seen.
   - The target is a noisy report. Even the true theory cannot reach q2 = 1.
   - q2 belongs to this population and these items; two studies' q2 do not
     compare.
   - A held-out loss shows that a theory predicts. It shows neither that the
     arrows are causes, nor what would happen if somebody changed a factor.
   - mediators: measured uses the mediators' own held-out answers, predicted
     does not: losses under the two settings answer different questions.

SOURCES
   Allen, D. M. (1974). The relationship between variable selection and data
     augmentation and a method for prediction. Technometrics, 16(1), 125-127.
     [leave-one-out in closed form]
   Fudenberg, D., Gao, W. & Liang, A. (2023). How flexible is that functional
     form? Quantifying the restrictiveness of theories. Review of Economics and
     Statistics. [restrictiveness]
   Fudenberg, D., Kleinberg, J., Liang, A. & Mullainathan, S. (2022). Measuring
     the completeness of economic models. Journal of Political Economy, 130(4),
     956-990. [completeness]
   Geisser, S. (1975). The predictive sample reuse method with applications.
     Journal of the American Statistical Association, 70(350), 320-328.
   Stone, M. (1974). Cross-validatory choice and assessment of statistical
     predictions. Journal of the Royal Statistical Society, Series B, 36(2),
     111-147. [q2, held-out losses]
   Hyndman, R. J. & Koehler, A. B. (2006). Another look at measures of forecast
     accuracy. International Journal of Forecasting, 22(4), 679-688. [mape]
   Shmueli, G., Ray, S., Velasquez Estrada, J. M. & Chatla, S. B. (2016). The
     elephant in the room: predictive performance of PLS models. Journal of
     Business Research, 69(10), 4552-4564. [held-out items against benchmarks]
   Salmon, J. K., Moraes, M. A., Dror, R. O. & Shaw, D. E. (2011). Parallel
     random numbers: as easy as 1, 2, 3. Proceedings of SC11. New York: ACM.
     [folds]
   Dividing by one fixed u_j so that items of different units can be averaged:
     a convention of this program.
)help";
}

}  // namespace rivalfold
