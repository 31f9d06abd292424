#include "rivalfold/verdict/distributions.hpp"

#include <boost/math/distributions/fisher_f.hpp>
#include <boost/math/distributions/normal.hpp>
#include <boost/math/distributions/students_t.hpp>

#include <cmath>

namespace rivalfold {

double student_two_sided(double t, double df) {
    return 2 * boost::math::cdf(boost::math::complement(boost::math::students_t(df), std::fabs(t)));
}

double student_quantile(double upper, double df) {
    return boost::math::quantile(boost::math::complement(boost::math::students_t(df), upper));
}

double f_upper(double f, double a, double b) {
    return boost::math::cdf(boost::math::complement(boost::math::fisher_f(a, b), f));
}

double normal_upper(double z) { return boost::math::cdf(boost::math::complement(boost::math::normal(), z)); }

}  // namespace rivalfold
