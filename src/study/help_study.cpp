#include "rivalfold/study/help_study.hpp"

namespace rivalfold {

std::string_view help_study() {
    return R"(The study file: one YAML 1.2 document that says everything a contest needs.

Unknown keys, keys written twice and wrong types are errors that name file, line
and column. Keys marked * are required; the others have the default shown in
parentheses. Anchors, aliases, merge keys, tags and a second document are
errors. Limits: 4 MiB, 64 KiB a line, 64 levels, 200000 values, 10000 terms.

An example (invented):

    study: What carries a refit project to delivery
    data: {file: refits.csv, missing_codes: [-9], cluster: yard}
    constructs:
      planning: {indicators: [pln1, pln2], reversed: [pln2], range: [1, 7]}
      skill:    {indicators: [skl*], range: [1, 7]}
      delivery: {indicators: [dlv1, dlv2, dlv3], range: [1, 7]}
      sector:   {category: sector}
    target: delivery
    controls: [sector]
    theories:
      - name: additive
        claim: Each factor helps, whatever the other is.
        equations: {delivery: [planning, skill]}
      - name: scarcest factor
        equations: {delivery: [{minimum: [planning, skill]}]}
    trial: {folds: 10, repeats: 50, seed: 1}

THE STUDY
  study *        a title
  data *         where the rows are, see DATA
  constructs *   what is measured, see CONSTRUCTS; their order is free
  target *       the construct whose indicators every theory must predict
  controls       (none) list of constructs that enter the target's equation of
                 every theory; a theory does not list them again
  metric         (standard) the units in which terms are formed:
                 standard   scores with mean 0 and standard deviation 1
                 response   weighted means in the units of the answers
  theories *     list of two or more, see THEORIES
  trial          how rows are held out and judged, see TRIAL
  verdict        when a difference counts, see VERDICT

DATA
  file *         .csv, .tsv or .txt, relative to the study file's folder
  delimiter      (found by itself) one of "," ";" "|" tab
  missing_codes  (none) list of cells that mean "no answer", e.g. [-9, "NA"];
                 an empty cell always does
  rows           (drop) what happens to a row with a missing used cell:
                 drop       it leaves, once, for all theories
                 mean       the mean of the training rows fills the cell
                 regression not supported yet
  where          (all rows) keep rows with these values: {phase: closed}, or
                 {phase: [closed, open]} for any of them
  cluster        (none) a column; rows with the same value are never split
                 between training and held-out rows
  segment        (none) a column: the contest is repeated within the rows of
                 each of its values, 2 to 10 of them. Or a numeric column cut at
                 1 to 9 ascending numbers, {column: complexity, cuts: [4]}; rows
                 equal to a cut lie below it. Neither the cluster column nor an
                 indicator of the target
  holdout, order not supported yet

CONSTRUCTS
  Each is a name with either indicators or category.
  indicators     list of columns; * in a name stands for any characters, and a
                 name that begins with * must stand in quotes
  reversed       (none) those of the indicators, * allowed, whose value becomes
                 low + high - value; needs range
  range          (none) [low, high]; a value outside it is an error that names
                 row and column
  weights        (mode_a) how indicators are weighted into a score: mode_a,
                 mode_b, equal or principal
  category       a column of categories instead of indicators; each level but
                 the first becomes a 0/1 column. A category may stand alone, in
                 product and in crossed; it is never an outcome or the target

THEORIES
  name *         a name of its own; it may look like a number
  claim          (none) what the theory says, in a sentence
  equations *    outcome: [terms]. The target must have an equation, is never
                 an antecedent itself, and no outcome may lead back to itself
  constructs     (none) constructs that this theory measures its own way, or
                 alone uses; never the target

TERMS OF AN EQUATION
  name                              the construct's score
  {product: [a, b, ...]}            the product of the scores
  {crossed: [a, b, ...]}            short for each score and every product of
                                    two or more of them; at most 8 names
  {minimum: [a, b, ...]}            the smallest score
  {maximum: [a, b, ...]}            the largest score
  {square: a}                       the score squared
  {geometric_mean: [a, b, ...]}     needs metric: response and positive values
  product, minimum, maximum and geometric_mean take two or more names. A term
  that a crossed list also contains counts once.

TRIAL
  folds          (10) 2 up to the number of rows, which leaves out one at a time
  repeats        (50) 1 to 10000; or auto: at least 50, until the splits' Monte
                 Carlo error of every pair of theories is at most a tenth of its
                 standard error, at most 200
  seed           (1) 0 to 18446744073709551615; the same seed gives the same
                 splits on every machine
  folds_file     (none) a file with the columns row, repeat and fold, instead
                 of folds, repeats and seed
  loss           (squared) squared or absolute
  mediators      (measured) whether a construct with an equation enters the
                 target's equation measured, by its own held-out indicators, or
                 predicted from its antecedents

VERDICT
  level          (0.05) above 0 and below 0.5
  margin         (0.02) the smallest relative difference in loss worth claiming,
                 from 0 to below 1; with 0 no two theories are declared equal
  completeness   (false) true adds a flexible benchmark: how much of what can be
                 predicted a theory predicts, and how much it could have fitted

VALUES
  Numbers are plain decimals: 7, -9, 0.05, 1e-3. Truth is true or false. Text
  needs quotes where YAML would read something else: a leading * or @, a comma
  alone, null, or a colon followed by a space.

ROWS
  Rows are numbered from 1 in the order of the data file, the header not
  counted; every output that names a row uses that number. The rows used are the
  same for every theory: those complete on every column that any theory,
  control, cluster or segment uses.

A held-out comparison shows which theory predicts better in a survey like this
one. It is no experiment and shows no cause; decisions about individual people
need qualified review and the local rules.
)";
}

}  // namespace rivalfold
