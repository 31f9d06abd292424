#include "cli/commands.hpp"

namespace rivalfold {

std::string_view help_outputs() {
    return R"help(OUTPUTS: the results folder and every field of results.json

`rivalfold run STUDY` writes STUDY.results (or the folder given with -o). It is
written beside its place and renamed into it at the end: a crash or Ctrl-C
leaves the old folder or the new one, never half of one.

Files
   results.json    everything below, at full double precision (17 digits)
   ranking.csv     the ranked table, one contestant a line; kind: theory or
                   benchmark; p_set_range, p_set_max: its confidence_set
   pairs.csv       one pair of contestants a line, with both tests; rows_ and
                   corrected_ stand before the fields of either; a_knows_more_p,
                   b_knows_more_p, extra_terms_p: p of encompassing and nested
   indicators.csv  held-out errors of each target item, one contestant and item
                   a line, in the item's own units
   losses.csv      row, then one column per contestant: L(t, i), the row's loss
                   averaged over repeats (in units u_j; see help losses)
   folds.csv       row, repeat, fold: the splits that were used. Give it back as
                   trial: {folds_file: ...} here or feed it to another program
   segment_losses.csv, segment_folds.csv   with `segment`: the same for the
                   contest within each segment, the segment's name first
   disagreements.csv  the two best-ranked theories row by row (10,000 rows at
                   most), largest difference of losses first: actual and
                   predicted means of the target's items in their own units,
                   both losses, and the antecedents' scores (standard units)
   table.md        the ranked table with its notes, in Markdown
   study.yaml      the study as run, byte for byte
   manifest.json   version, SHA-256 of study and data, seed, times, thread count

Rows are numbered from 1 in the order of the data file, the header not counted.
A value that is not defined is null in results.json, with a `reason` beside it,
and an empty cell in the csv files. Header names of the csv files are the field
names below.

results.json (schema 1)
   rivalfold         the program's version
   schema            1: the version of this list
   study             the title
   data
     file            the data file, as the study names it
     sha256          SHA-256 of its bytes, hexadecimal
     rows_read       rows in the file
     rows_used       rows in the contest, the same for every theory
     dropped         list of: reason (text), rows (list of row numbers)
     filled          with rows: mean: name of a column, cells filled
   trial
     folds, repeats  counts; with repeats: auto also auto_repeats: true
     seed            the number that the splits were dealt from; null where a
                     folds_file was given
     loss            "squared" or "absolute"
     mediators       "measured" or "predicted"
     metric          "standard" or "response"
   theories          a list in the order of the study file; a theory that could
                     not be fitted has `failed` with the reason
     name, claim     as in the study
     rank            1 is the smallest held-out loss; null for a failed theory
     heldout         from rows that were not trained on
       loss          the number that ranks; mean of (e/u)^2, or of |e/u|
       rmse, mae     in units of the items' standard deviations u
       q2            share, 1 - SSE / SSE of the training mean; may be negative
       indicators    for each target item: name; rmse and mae in the item's own
                     units; mape in percent; q2 as a share
     fitted          IN-SAMPLE: the target's equation fitted to all rows used
       r2, adjusted_r2      shares
       sse                  in squared standard units of the target's score
       coefficients_count   p, the intercept counted
       f, f_df, f_p         F, its two degrees of freedom, its p
     criteria        smaller is better; only differences count
       aic, aicc, bic, hq, gm     without unit
       bic_weight                 share; they add up to 1 over the theories
     equations       IN-SAMPLE, for each outcome: outcome, r2, and terms:
       term          as text; "1" is the intercept
       coefficient   outcome units per unit of the term (standard deviations
                     with metric: standard, the items' units with metric:
                     response)
       se, t, p      standard error (units of the coefficient), t, two-sided p
       f2            Cohen's f2: (R2 - R2 without the term) / (1 - R2)
     weights         for each construct: construct, and indicators:
       name          the item
       weight        of the standardised item; the score has standard deviation
                     1
       loading       correlation of the item with the score, all rows used
     explained       IN-SAMPLE counterpart of q2: share of the items' variance
                     that the same predictions explain in the rows fitted
     first_share     share of the repeats in which it had the smallest loss
     confidence_set  p_range, p_max: its p in the model confidence set by
                     either statistic; shortlisted: p_max > level
     optimism        explained beside q2, in words
     verdict         the theory's place in words
   benchmarks        "training mean" and "linear benchmark": name, heldout
   pairs             every pair of contestants in table order, benchmarks
                     included
     a, b            the two names
     difference      loss(a) - loss(b), mean over rows; negative: a lost less
     relative        difference / loss(b), a share
     rows            the row test (help tests)
     corrected       the corrected repeated k-fold test; both have:
       se            standard error of the difference, in units of the loss
       t, df, p      t, its degrees of freedom, two-sided p
       p_holm        p adjusted over the pairs of theories (Holm); null for a
                     pair with a benchmark
       low, high     ends of the 1 - level interval of the difference
       relative_low, relative_high     the same ends as shares of b's loss
     both            the two tests taken together: p, the larger of the two;
                     p_holm, that p adjusted; low, high, the wider interval
     monte_carlo_se  how far another set of splits would move the difference:
                     the spread of the repeats' means over sqrt(repeats); null
                     with one repeat
     encompassing    for theories: a_knows_more, b_knows_more, each with t, df,
                     p (one-sided): does a (b) hold something that the other
                     lacks?
     nested          for nested pairs: inner, the theory with fewer terms;
                     extra_terms, the Clark-West test: t, df ("normal"), p;
                     words
     verdict         first predicts better, second predicts better,
                     practically equal, or unresolved
   confidence_set    resamples of its bootstrap; grouped: above 20,000 rows they
                     were first summed in 5,000 groups dealt at random
   stack             null with fewer than two theories that did not fail;
                     the stacked combination of theories: loss; weights (name,
                     weight: means over splits); difference and relative to the
                     best-ranked theory; rows, corrected: the two tests;
                     complementary: better by both and by more than `margin`;
                     words
   disagreement      where the two best-ranked theories part (a reason where
                     they make the same predictions): first, second, their
                     names; thirds: along (an antecedent, or their spread),
                     third (1
                     lowest .. 3 highest), from, to (standard units), rows,
                     difference (loss of first minus loss of second), se
   completeness      with verdict: {completeness: true}: rows (of the
                     comparison), subsample, loss_mean, loss_flexible,
                     q2_flexible (share), antecedents (of the random outcomes),
                     and for each of theories: completeness with low and high,
                     the ends of its interval, restrictiveness with
                     restrictiveness_se, its Monte Carlo error (shares); reason:
                     what was done on fewer rows
   winner            the theory that beats every rival, or null
   segments          with `segment`: this whole object again for each, with
                     segment, its name
   reversals         with `segment`: for every pair of theories a, b and of
                     segments first, second: difference_first,
                     difference_second (L(a) - L(b) within each), difference of
                     the two, se, t, df, p, p_holm, low, high
   verdict           the headline of the whole contest, one sentence
   methods           what was done, in sentences with the published sources
   advice            list of sentences, as printed on standard error
   caution           what the contest cannot show

Exit statuses
   0 done   1 the study or the data is wrong (message on standard error, nothing
   written)   2 the command line is wrong   3 a fault inside the program
Results go to standard output and to the folder; progress and advice go to
standard error. NO_COLOR, or an output that is no terminal, gets no colour.

CAUTION
   losses.csv and folds.csv name the rows of your data by number: treat them as
   you treat the data. What a row lost measures the theories, never the person.
)help";
}

}  // namespace rivalfold
