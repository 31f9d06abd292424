#include "cli/commands.hpp"

namespace rivalfold {

std::string_view help_criteria() {
    return R"help(CRITERIA: what each theory explains in the rows that it was fitted to

These numbers come from ONE fit to all rows used. They are in-sample: they show
how the fitted equations look, not how well they predict. The ranking does not
use them.

Symbols
   n      rows used
   p      coefficients of the target's equation, the intercept counted (the
          error variance is not)
   SSE    sum of squared errors of the target's equation, target score in
          standard units
   SST    sum of squared deviations of the outcome's score from its mean
   full model   the theory's own target score regressed on every distinct term
          that any theory has in its target equation (the controls included).
          Two terms are the same if kind, members and the members' measurement
          agree; the values come from the first theory, in file order, that has
          the term. p_F is the rank of that design, SSE_F its sum of squared
          errors, MSE_F = SSE_F / (n - p_F).

Explanation, for each equation
   R2           = 1 - SSE / SST
   adjusted R2  = 1 - (1 - R2) (n - 1) / (n - p)
   F            = (R2 / (p - 1)) / ((1 - R2) / (n - p)), with p - 1 and n - p
                  degrees of freedom, and its p
   each term    coefficient, standard error, t, p: ordinary least squares given
                the scores
   f2           = (R2 - R2 without the term) / (1 - R2)            (Cohen 1988)
   Caution: standard errors, t and p take the scores as given. They leave out
   that the weights were estimated from the same rows, and that rows of one
   cluster resemble each other: they are too optimistic. f2 of a score whose
   product is also in the equation means little by itself.

Criteria: smaller is better; only differences between theories count
   AIC   = n ln(SSE / n) + 2 p                        (Akaike 1974)
   AICc  = AIC + 2 p (p + 1) / (n - p - 1)            (Hurvich & Tsai 1989)
   BIC   = n ln(SSE / n) + p ln n                     (Schwarz 1978)
   HQ    = n ln(SSE / n) + 2 p ln ln n                (Hannan & Quinn 1979)
   GM    = SSE / MSE_F + p ln n                       (Geweke & Meese 1981)
   BIC weight = exp(-d / 2) / sum of exp(-d / 2) over the theories,
           d = BIC - smallest BIC: the share of belief that each theory would
           get if one of them were true and all were equally credible before
           (Raftery 1995; Wagenmakers & Farrell 2004).
   GM equals Mallows' Cp + n + p (ln n - 2), Cp from the same full model
   (Mallows 1973).

When not to read them
   - Theories that weight the target's items differently have different target
     scores, so their SSE are errors of different things. Mode A and mode B
     weights of the target depend on the theory: the table then says so in
     words. weights: equal for the target makes the criteria comparable.
   - The number of weights is not counted in p: a theory with many items or
     mode_b weights looks thriftier than it is. Held-out losses do not have
     this fault.
   - BIC weights near 1 mean "best of these", never "true".
   - n - p - 1 <= 0, or n <= p_F: the number is not defined and shown as empty.

SOURCES
   Akaike, H. (1974). A new look at the statistical model identification. IEEE
     Transactions on Automatic Control, 19(6), 716-723.
   Cohen, J. (1988). Statistical Power Analysis for the Behavioral Sciences, 2nd
     ed. Hillsdale: Erlbaum.
   Geweke, J. & Meese, R. (1981). Estimating regression models of finite but
     unknown order. International Economic Review, 22(1), 55-70.
   Hannan, E. J. & Quinn, B. G. (1979). The determination of the order of an
     autoregression. Journal of the Royal Statistical Society, Series B, 41(2),
     190-195.
   Hurvich, C. M. & Tsai, C.-L. (1989). Regression and time series model
     selection in small samples. Biometrika, 76(2), 297-307. [their count
     includes the error variance; the form above, with p as said, is the one
     computed here]
   Mallows, C. L. (1973). Some comments on Cp. Technometrics, 15(4), 661-675.
   Raftery, A. E. (1995). Bayesian model selection in social research.
     Sociological Methodology, 25, 111-163.
   Schwarz, G. (1978). Estimating the dimension of a model. Annals of
     Statistics, 6(2), 461-464.
   Wagenmakers, E.-J. & Farrell, S. (2004). AIC model selection using Akaike
     weights. Psychonomic Bulletin & Review, 11(1), 192-196.
)help";
}

}  // namespace rivalfold
