// The in-sample side of a theory as finished numbers: explanation, never prediction.
#pragma once

#include <string>
#include <vector>

namespace rivalfold {

/// One coefficient of an in-sample equation. Numbers that do not exist are NaN, and `reason` says why.
struct TermReport {
    std::string term;  ///< "1" is the intercept
    double coefficient = 0, se = 0, t = 0, p = 0;
    double f2 = 0;  ///< (R2 - R2 without the term) / (1 - R2) (Cohen 1988, Statistical Power Analysis, 2nd ed.); NaN
                    ///< for the intercept
    std::string reason;
};

/// Ordinary least squares of one equation on all rows used, in the study's metric.
struct EquationReport {
    std::string outcome;
    double r2 = 0;
    std::vector<TermReport> terms;
};

struct IndicatorWeight {
    std::string name;
    double weight = 0;   ///< on the standardised indicator, for a score of standard deviation 1
    double loading = 0;  ///< correlation of indicator and score
};

struct ConstructWeights {
    std::string construct;
    std::vector<IndicatorWeight> indicators;
};

/// The target's equation fitted to all rows used.
struct InSample {
    double r2 = 0, adjusted_r2 = 0;
    double sse = 0;  ///< target score in standard units
    int coefficients = 0;
    double f = 0, f_df1 = 0, f_df2 = 0, f_p = 0;
};

/// Of the target's equation fitted to all rows used, target score in standard units. p coefficients with the intercept.
/// AIC = n ln(SSE/n) + 2p (Akaike 1974); AICc = AIC + 2p(p+1)/(n-p-1) (Hurvich & Tsai 1989); BIC = n ln(SSE/n) + p ln n
/// (Schwarz 1978); HQ = n ln(SSE/n) + 2p ln ln n (Hannan & Quinn 1979); GM = SSE/MSE_F + p ln n (Geweke & Meese 1981).
struct Criteria {
    double aic = 0, aicc = 0, bic = 0, hq = 0, gm = 0, bic_weight = 0;
    std::string reason;  ///< why some are NaN
};

Criteria criteria_of(double sse, double n, double p, double mse_full);

}  // namespace rivalfold
