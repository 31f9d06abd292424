// One finished run, whole: what every writer of the report is fed. Holds values only; makes and formats nothing.
#pragma once

#include "rivalfold/data/survey.hpp"
#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/study/study.hpp"
#include "rivalfold/trial/losses.hpp"
#include "rivalfold/verdict/completeness.hpp"
#include "rivalfold/verdict/verdict.hpp"

#include <memory>
#include <string>
#include <vector>

namespace rivalfold {

/// Cronbach's alpha of one construct as one theory (or every theory) measures it; NaN for a single indicator.
struct Reliability {
    std::string construct;
    std::string theory;  ///< empty: as every theory measures it
    int indicators = 0;
    double alpha = 0;
};

struct RunRecord {
    std::string version;
    std::string started;  ///< UTC, ISO 8601
    double seconds = 0;   ///< reading to verdict
    unsigned threads = 0;
    std::string study_sha256;  ///< of the study file
};

struct Outcome {
    Study study;
    Survey survey;                   ///< its matrix is released; Sample holds the numbers
    std::shared_ptr<Sample> sample;  ///< shared: the trial's contestants refer to it
    FoldPlan plan;
    std::vector<Reliability> reliabilities;
    Trial trial;
    Verdict verdict;
    CompletenessReport completeness;  ///< computed only with verdict: completeness
    std::vector<std::string> advice;
    std::string segment_name;       ///< empty for the whole sample
    std::vector<Outcome> segments;  ///< the contest within each segment; empty without `segment`
    std::vector<Reversal> reversals;
    RunRecord run;
};

}  // namespace rivalfold
