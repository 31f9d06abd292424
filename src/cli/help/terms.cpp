#include "cli/commands.hpp"

namespace rivalfold {

std::string_view help_terms() {
    return R"help(TERMS, WEIGHTS AND EQUATIONS: how a theory turns answers into a prediction

Everything here is computed from training rows alone, once per fold: means,
standard deviations, weights, loadings, filled-in values, category levels and
coefficients. Nothing of a held-out row reaches the fit that predicts it.

1. Items
   A reversed item becomes low + high - value (its range is [low, high]).
   Each item h is standardised with the training rows' mean m_h and standard
   deviation s_h (divisor n - 1):  z_h = (x_h - m_h) / s_h.

2. Weights: how the items of one construct become its score
   A score is the weighted sum of the z_h, scaled to standard deviation 1.
   R is the correlation matrix of the construct's own items.

   mode_a     the covariance of each item with the inner proxy (below)
   mode_b     R^-1 times those covariances: the regression of the proxy on the
              items; for items that are parts of a whole rather than signs of it
   equal      all weights equal: nothing to estimate
   principal  the first eigenvector of R: what the items share most

   mode_a and mode_b are found in rounds. Start from equal weights. The inner
   proxy of a construct is the sum of
     - over the constructs that point at it: multiple-regression coefficient
       times their score, and
     - over the constructs that it points at: correlation times their score
   (the path weighting scheme). New weights, rescaled, until the largest change
   of a weight is below 1e-10; after 3000 rounds the theory is shown as failed,
   with the fold. A construct with one item has weight 1. The sign is such that
   the loadings of a construct add up to a positive number.
   A nonlinear term counts here as a path from each of its members (two-stage
   approach): the weights come first, the products from the finished scores.

3. Scores: the metric
   standard   the standardised composite (mean 0, standard deviation 1)
   response   the weighted mean of the raw (reversed) items, in their own units:
              weights w_h / s_h, rescaled to add up to 1. They must all have one
              sign; otherwise it is an error.

4. Terms: one number for each row
   name                          the construct's score
   {product: [a, b, ...]}        a x b x ...
   {crossed: [a, b, ...]}        short for each score and every product of two
                                 or more of them
   {minimum: [a, b, ...]}        the smallest of the scores
   {maximum: [a, b, ...]}        the largest of the scores
   {square: a}                   a x a
   {geometric_mean: [a, b, ...]} (a x b x ...)^(1 / how many); needs
                                 metric: response and positive scores
   A category construct is one 0/1 column for each level but the first (numbers
   sorted by value, text by name), not standardised. It may stand alone, be a
   control, or be a member of product and crossed; never an outcome, nor a
   member of another term. Levels come from the training rows; a held-out row of
   a level unseen there has zeros, and an advice line says so.

5. Equations
   Each outcome is regressed on its terms by ordinary least squares with an
   intercept. The controls enter the target's equation of every theory. If
   terms repeat each other exactly (a design of deficient rank), the solution
   with the smallest norm is taken and an advice line says so.

6. Prediction of a held-out row
   Its scores are formed with the training rows' means, deviations and weights.
     mediators: measured   every antecedent in the target's equation is scored
                           from its own held-out items
     mediators: predicted  an antecedent that has an equation is predicted from
                           its own antecedents, and so on down the chain
   Predicted item j of the target =
     m_j + s_j x loading_j x (predicted target score, in standard units),
   loading_j = training correlation of item j with the target's score.

7. Benchmarks, in every contest, never a theory
   training mean      each target item's mean over the training rows
   linear benchmark   each target item regressed (least squares) on every
                      predictor item that any theory or control uses
   A theory that loses to the training mean has found nothing. One that loses
   to the linear benchmark leaves something out that its own items hold.

CAUTION: the interval-scale problem
   A rating has no natural zero. Multiply two ratings that run from 1 to 7, or
   the same two coded 0 to 6, and the products rank the rows differently: a
   product WITHOUT its members in the equation can win or lose by that choice
   alone (Schmidt 1973; Evans 1991). With the members beside it ({crossed:
   [...]}) the fit no longer depends on the zero (Aiken & West 1991).
   A minimum or maximum compares scores, so its members must be on one scale:
   with metric: standard it compares how unusual the scores are in this sample,
   with metric: response the answers themselves. A better-predicting term is
   not shown to be a cause.

SOURCES
   Aiken, L. S. & West, S. G. (1991). Multiple Regression: Testing and
     Interpreting Interactions. Newbury Park: Sage.
   Chin, W. W., Marcolin, B. L. & Newsted, P. R. (2003). A partial least squares
     latent variable modeling approach for measuring interaction effects.
     Information Systems Research, 14(2), 189-217. [two-stage idea]
   Dawes, R. M. (1979). The robust beauty of improper linear models in decision
     making. American Psychologist, 34(7), 571-582. [equal weights]
   Evans, M. G. (1991). The problem of analyzing multiplicative composites:
     interactions revisited. American Psychologist, 46(1), 6-15.
   Henseler, J. & Chin, W. W. (2010). A comparison of approaches for the
     analysis of interaction effects between latent variables using partial
     least squares path modeling. Structural Equation Modeling, 17(1), 82-109.
     [two stages]
   Hotelling, H. (1933). Analysis of a complex of statistical variables into
     principal components. Journal of Educational Psychology, 24, 417-441.
   Lohmöller, J.-B. (1989). Latent Variable Path Modeling with Partial Least
     Squares. Heidelberg: Physica, ch. 2. [modes A and B, path weighting]
   Schmidt, F. L. (1973). Implications of a measurement problem for expectancy
     theory research. Organizational Behavior and Human Performance, 10(2),
     243-251.
   Shmueli, G., Ray, S., Velasquez Estrada, J. M. & Chatla, S. B. (2016). The
     elephant in the room: predictive performance of PLS models. Journal of
     Business Research, 69(10), 4552-4564. [predicting items; linear benchmark]
   Wold, H. (1982). Soft modeling: the basic design and some extensions. In K.
     G. Jöreskog & H. Wold (eds.), Systems under Indirect Observation, Part II,
     1-54. Amsterdam: North-Holland.
)help";
}

}  // namespace rivalfold
