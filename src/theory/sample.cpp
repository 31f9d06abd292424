#include "rivalfold/theory/sample.hpp"

#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

// Level counts are exact whole numbers, so a mean of 0 means absent.
void mark_levels(const Sample& sample, Moments& moments) {
    moments.in_force.assign(static_cast<std::size_t>(sample.n_columns), 1);
    for (const LevelColumns& span : sample.categories) {
        bool first_passed = false;
        for (int column = span.first; column < span.first + span.n_levels; ++column) {
            const bool present = moments.mean(column) > 0;
            if (!present || !first_passed) moments.in_force[static_cast<std::size_t>(column)] = 0;
            first_passed = first_passed || present;
        }
    }
}

}  // namespace

Sample build_sample(const Survey& survey) {
    Sample sample;
    sample.n = survey.values.rows();
    sample.n_variables = static_cast<int>(survey.values.cols());
    sample.n_columns = sample.n_variables;
    for (const Category& category : survey.categories) {
        sample.categories.push_back({sample.n_columns, static_cast<int>(category.levels.size())});
        sample.n_columns += static_cast<int>(category.levels.size());
    }
    sample.values.resize(sample.n, sample.n_columns);
    sample.centre = Eigen::VectorXd::Zero(sample.n_columns);
    sample.gap_of.assign(static_cast<std::size_t>(sample.n_columns), -1);
    for (int v = 0; v < sample.n_variables; ++v) {
        const auto column = survey.values.col(v);
        double sum = 0;
        Eigen::Index observed = 0;
        for (Eigen::Index i = 0; i < sample.n; ++i) {
            if (std::isnan(column(i))) continue;
            sum += column(i);
            ++observed;
        }
        const double centre = observed > 0 ? sum / static_cast<double>(observed) : 0;
        sample.centre(v) = centre;
        for (Eigen::Index i = 0; i < sample.n; ++i)
            sample.values(i, v) = std::isnan(column(i)) ? 0 : column(i) - centre;
        if (observed == sample.n) continue;
        sample.gap_of[static_cast<std::size_t>(v)] = static_cast<int>(sample.gappy.size());
        sample.gappy.push_back(v);
    }
    sample.gaps.resize(sample.n, static_cast<Eigen::Index>(sample.gappy.size()));
    for (std::size_t g = 0; g < sample.gappy.size(); ++g)
        for (Eigen::Index i = 0; i < sample.n; ++i)
            sample.gaps(i, static_cast<Eigen::Index>(g)) = std::isnan(survey.values(i, sample.gappy[g])) ? 1 : 0;
    for (std::size_t c = 0; c < survey.categories.size(); ++c) {
        const LevelColumns& span = sample.categories[c];
        sample.values.middleCols(span.first, span.n_levels).setZero();
        for (Eigen::Index i = 0; i < sample.n; ++i)
            sample.values(i, span.first + survey.categories[c].codes[static_cast<std::size_t>(i)]) = 1;
    }
    return sample;
}

void moments_by_downdating(const Sample& sample, const Gram& whole, const Gram& held_out, Moments& out, bool& suspect) {
    const int p = sample.n_columns;
    out.mean.resize(p);
    out.sd.resize(p);
    out.ss.resize(p, p);
    out.constant = -1;
    out.n = whole(p, p) - held_out(p, p);
    suspect = false;
    // Position in the Gram of the count of column h's observed cells.
    const auto mask = [&](int h) {
        return sample.gap_of[static_cast<std::size_t>(h)] < 0 ? p : p + 1 + sample.gap_of[static_cast<std::size_t>(h)];
    };
    const auto kept = [&](int a, int b) {
        return a >= b ? whole(a, b) - held_out(a, b) : whole(b, a) - held_out(b, a);
    };
    for (int h = 0; h < p; ++h) {
        const double observed = kept(mask(h), mask(h));
        if (observed <= 0) {  // only a gappy variable can lose all its cells
            out.constant = h;
            return;
        }
        out.mean(h) = kept(p, h) / observed;
    }
    const bool complete = sample.gappy.empty();
    for (int k = 0; k < p; ++k)
        for (int h = k; h < p; ++h) {
            double value = kept(h, k);
            if (complete)
                value -= out.n * out.mean(h) * out.mean(k);
            else
                value += -out.mean(h) * kept(mask(h), k) - out.mean(k) * kept(h, mask(k)) +
                         out.mean(h) * out.mean(k) * kept(mask(h), mask(k));
            out.ss(h, k) = value;
            out.ss(k, h) = value;
        }
    for (int h = 0; h < p; ++h) {
        if (h < sample.n_variables && out.ss(h, h) < 1e-4 * whole(h, h)) suspect = true;
        out.sd(h) = out.ss(h, h) > 0 ? std::sqrt(out.ss(h, h) / (out.n - 1)) : 0;
    }
    mark_levels(sample, out);
}

void moments_of_rows(const Sample& sample, const std::vector<Eigen::Index>& in, Moments& out) {
    const int p = sample.n_columns;
    const Eigen::Index n = static_cast<Eigen::Index>(in.size());
    out.n = static_cast<double>(n);
    out.mean.resize(p);
    out.sd.resize(p);
    out.constant = -1;
    Eigen::MatrixXd rows(n, p);
    for (int h = 0; h < p; ++h) {
        const int gap = sample.gap_of[static_cast<std::size_t>(h)];
        double sum = 0, least = std::numeric_limits<double>::infinity(), most = -least;
        Eigen::Index observed = 0;
        for (const Eigen::Index i : in) {
            if (gap >= 0 && sample.gaps(i, gap) > 0) continue;
            const double value = sample.values(i, h);
            sum += value;
            least = std::min(least, value);
            most = std::max(most, value);
            ++observed;
        }
        const bool varies = observed > 0 && least < most;
        if (!varies && h < sample.n_variables && out.constant < 0) out.constant = h;
        const double mean = varies ? sum / static_cast<double>(observed) : (observed > 0 ? least : 0);
        out.mean(h) = mean;
        for (Eigen::Index r = 0; r < n; ++r) {
            const Eigen::Index i = in[static_cast<std::size_t>(r)];
            rows(r, h) = gap >= 0 && sample.gaps(i, gap) > 0 ? 0 : sample.values(i, h) - mean;
        }
    }
    out.ss.noalias() = rows.transpose() * rows;
    for (int h = 0; h < p; ++h) out.sd(h) = std::sqrt(out.ss(h, h) / (out.n - 1));
    mark_levels(sample, out);
}

}  // namespace rivalfold
