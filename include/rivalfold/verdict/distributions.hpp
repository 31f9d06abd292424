// Tail areas and quantiles of the reference distributions, from Boost.Math (relative accuracy about 1e-14).
#pragma once

namespace rivalfold {

/// P(|T| >= |t|) for Student's t with df > 0 degrees of freedom.
double student_two_sided(double t, double df);
/// The value that Student's t exceeds with probability `upper`, 0 < upper < 1.
double student_quantile(double upper, double df);
/// P(F >= f) for Snedecor's F with a and b degrees of freedom.
double f_upper(double f, double a, double b);
/// P(Z >= z) for the standard normal distribution.
double normal_upper(double z);

}  // namespace rivalfold
