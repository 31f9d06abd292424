#include "trial/split_engine.hpp"

#include <algorithm>
#include <cmath>
#include <cstring>

namespace rivalfold {

/// One thread's buffers: a block of rows sorted by fold, work columns, and each contestant's scratch.
struct SplitEngine::Room {
    Eigen::MatrixXd block;              // padded rows x (columns + 1 + gappy): values, ones, observed masks or gaps
    std::vector<Eigen::Index> row;      // sample row of each block position; -1 for padding
    std::vector<std::ptrdiff_t> begin;  // per fold of the range: first block position
    std::vector<std::ptrdiff_t> end;    // per fold: one past its last row
    std::vector<std::ptrdiff_t> cursor;
    std::vector<std::vector<std::uint32_t>> held_out;  // per fold of the range: its rows within the block
    std::vector<std::int32_t> offset;                  // of each block position, from the block's first sample row
    std::vector<std::size_t> padding;                  // block positions that hold no row
    std::ptrdiff_t filled = 0;                         // block positions in use, a multiple of kLanes
    Eigen::MatrixXd design;
    Eigen::MatrixXd predicted;
    Eigen::MatrixXd inverse_actual;
    Eigen::VectorXd row_squared, row_absolute;
    RowScratch scratch;
    Moments moments;
    std::vector<std::unique_ptr<FitScratch>> fit_scratch;

    RowBlock rows(const Sample& sample, std::ptrdiff_t first, std::ptrdiff_t count) const {
        return {block.data() + first, sample.gappy.empty() ? nullptr : block.col(sample.n_columns + 1).data() + first,
                block.rows(), count};
    }
    double* make_design_room(std::ptrdiff_t rows, int columns) {
        if (design.rows() < rows || design.cols() < columns)
            design.resize(std::max<Eigen::Index>(design.rows(), rows), std::max<Eigen::Index>(design.cols(), columns));
        return design.data();
    }
    /// Appends ones to `columns` design columns of `count` rows and adds their cross-products, without the rows in
    /// `out`.
    void add_design(std::ptrdiff_t count, int columns, std::span<const std::uint32_t> out, Eigen::MatrixXd& gram) {
        fill(design.col(columns).data(), count, 1);
        const std::ptrdiff_t whole = padded(count);
        for (int c = 0; c <= columns; ++c) {
            double* column = design.col(c).data();
            for (const std::uint32_t row : out) column[row] = 0;
            for (std::ptrdiff_t i = count; i < whole; ++i) column[i] = 0;
        }
        add_gram(design.data(), design.rows(), whole, columns + 1, gram.data(), gram.rows());
    }
    std::vector<const Contestant*> fit_scratch_for;
};

/// Consecutive rows straight from the sample.
RowBlock SplitEngine::rows_of(Eigen::Index first, std::ptrdiff_t count) const {
    return {sample_.values.data() + first, sample_.gappy.empty() ? nullptr : sample_.gaps.data() + first, sample_.n,
            count};
}

SplitEngine::SplitEngine(const Sample& sample, WorkerPool& pool)
    : sample_(sample),
      pool_(pool),
      segment_rows_(
          std::max<Eigen::Index>(32 * kBlockRows, ((sample.n + 15) / 16 + kBlockRows - 1) / kBlockRows * kBlockRows)) {
    rooms_.resize(pool.size());
}

SplitEngine::Room& SplitEngine::room(unsigned worker, const std::vector<const Contestant*>* contestants) {
    std::shared_ptr<Room>& mine = rooms_[worker];
    if (!mine) mine = std::make_shared<Room>();
    if (contestants && mine->fit_scratch_for != *contestants) {
        mine->fit_scratch.clear();
        for (const Contestant* contestant : *contestants) mine->fit_scratch.push_back(contestant->make_scratch());
        mine->fit_scratch_for = *contestants;
    }
    return *mine;
}

// Copies rows first .. first + rows - 1 into the room's block, sorted by fold: rows of folds before the range, then
// each fold of the range, then the rest. With `pad`, each fold of the range starts a run of whole lanes, filled up with
// rows of zeros.
void SplitEngine::gather(const FoldRange& range, Eigen::Index first, Eigen::Index rows, bool pad, Room& room) const {
    const std::size_t folds = range.folds();
    const std::uint32_t* fold_of = range.fold_of.data() + first;
    room.cursor.assign(folds + 2, 0);
    const auto bucket = [&](std::uint32_t fold) {
        return fold < range.first ? 0 : fold >= range.last ? folds + 1 : fold - range.first + 1;
    };
    for (Eigen::Index i = 0; i < rows; ++i) ++room.cursor[bucket(fold_of[i])];
    room.begin.resize(folds);
    room.end.resize(folds);
    std::ptrdiff_t at = 0;
    for (std::size_t b = 0; b < folds + 2; ++b) {
        const std::ptrdiff_t count = room.cursor[b];
        room.cursor[b] = at;
        if (b > 0 && b <= folds) {
            room.begin[b - 1] = at;
            room.end[b - 1] = at + count;
        }
        at += pad && b <= folds ? padded(count) : count;
    }
    room.filled = padded(at);
    const Eigen::Index gappy = static_cast<Eigen::Index>(sample_.gappy.size());
    const Eigen::Index width = sample_.n_columns + 1 + gappy;
    if (room.block.rows() < room.filled || room.block.cols() < width)
        room.block.resize(std::max<Eigen::Index>(room.filled, room.block.rows()), width);
    room.row.assign(static_cast<std::size_t>(room.filled), -1);
    for (Eigen::Index i = 0; i < rows; ++i)
        room.row[static_cast<std::size_t>(room.cursor[bucket(fold_of[i])]++)] = first + i;
    // Padding reads the block's first row and is overwritten with zeros after: no branch in the copying loop.
    room.offset.resize(static_cast<std::size_t>(room.filled));
    room.padding.clear();
    for (std::size_t i = 0; i < room.row.size(); ++i) {
        room.offset[i] = room.row[i] < 0 ? 0 : static_cast<std::int32_t>(room.row[i] - first);
        if (room.row[i] < 0) room.padding.push_back(i);
    }
    const auto copy = [&](const double* column, double* to) {
        const double* from = column + first;
        const std::int32_t* offset = room.offset.data();
        for (std::ptrdiff_t i = 0; i < room.filled; ++i) to[i] = from[offset[i]];
        for (const std::size_t i : room.padding) to[i] = 0;
    };
    for (Eigen::Index h = 0; h < sample_.n_columns; ++h) copy(sample_.values.col(h).data(), room.block.col(h).data());
    double* ones = room.block.col(sample_.n_columns).data();
    fill(ones, room.filled, 1);
    for (const std::size_t i : room.padding) ones[i] = 0;
    for (Eigen::Index g = 0; g < gappy; ++g)
        copy(sample_.gaps.col(g).data(), room.block.col(sample_.n_columns + 1 + g).data());
}

template <class Use>
void SplitEngine::for_each_block(std::size_t segment, Use use) const {
    const Eigen::Index start = static_cast<Eigen::Index>(segment) * segment_rows_;
    const Eigen::Index stop = std::min(sample_.n, start + segment_rows_);
    for (Eigen::Index first = start; first < stop; first += kBlockRows)
        use(first, std::min<Eigen::Index>(kBlockRows, stop - first));
}

std::vector<std::vector<Gram>> SplitEngine::fold_grams(const std::vector<FoldRange>& ranges) {
    const std::size_t segments = n_segments();
    const int size = gram_size(sample_);
    std::vector<std::vector<Gram>> partial(ranges.size() * segments);
    pool_.run(partial.size(), [&](std::size_t number, unsigned worker) {
        const FoldRange& range = ranges[number / segments];
        Room& mine = room(worker, nullptr);
        std::vector<Gram>& grams = partial[number];
        grams.assign(range.folds(), Gram::Zero(size, size));
        for_each_block(number % segments, [&](Eigen::Index first, std::ptrdiff_t count) {
            gather(range, first, count, true, mine);
            // Turn gaps into observed masks: the Gram counts observed cells.
            for (int g = 0; g < static_cast<int>(sample_.gappy.size()); ++g)
                for (std::ptrdiff_t i = 0; i < mine.filled; ++i)
                    mine.block(i, sample_.n_columns + 1 + g) =
                        mine.block(i, sample_.n_columns) - mine.block(i, sample_.n_columns + 1 + g);
            for (std::size_t k = 0; k < range.folds(); ++k)
                if (mine.end[k] > mine.begin[k])
                    add_gram(mine.block.data() + mine.begin[k], mine.block.rows(), padded(mine.end[k] - mine.begin[k]),
                             size, grams[k].data(), size);
        });
    });
    std::vector<std::vector<Gram>> result(ranges.size());
    for (std::size_t r = 0; r < ranges.size(); ++r) {
        result[r] = std::move(partial[r * segments]);
        for (std::size_t s = 1; s < segments; ++s)
            for (std::size_t k = 0; k < result[r].size(); ++k) result[r][k] += partial[r * segments + s][k];
    }
    return result;
}

Gram SplitEngine::whole_gram() {
    const std::vector<std::uint32_t> one_fold(static_cast<std::size_t>(sample_.n), 0);
    return fold_grams({{one_fold, 0, 1, 0}}).front().front();
}

void SplitEngine::fit(const std::vector<FoldRange>& ranges, const Gram& whole,
                      const std::vector<const Contestant*>& contestants, std::vector<std::vector<SplitFits>>& out) {
    const std::vector<std::vector<Gram>> held_out = fold_grams(ranges);
    std::vector<std::pair<std::size_t, std::size_t>> splits;
    out.resize(ranges.size());
    for (std::size_t r = 0; r < ranges.size(); ++r) {
        out[r].resize(ranges[r].folds());
        for (std::size_t k = 0; k < ranges[r].folds(); ++k) {
            out[r][k].fits.resize(contestants.size());
            splits.emplace_back(r, k);
        }
    }
    pool_.run(splits.size(), [&](std::size_t number, unsigned worker) {
        const auto [r, k] = splits[number];
        Room& mine = room(worker, &contestants);
        SplitFits& split = out[r][k];
        bool suspect = false;
        moments_by_downdating(sample_, whole, held_out[r][k], mine.moments, suspect);
        if (suspect) {
            std::vector<Eigen::Index> in;
            for (Eigen::Index i = 0; i < sample_.n; ++i)
                if (ranges[r].fold_of[static_cast<std::size_t>(i)] != ranges[r].first + k) in.push_back(i);
            moments_of_rows(sample_, in, mine.moments);
        }
        split.constant = mine.moments.constant;
        if (split.constant >= 0) return;
        for (std::size_t c = 0; c < contestants.size(); ++c) {
            contestants[c]->fit_moments(mine.moments, *mine.fit_scratch[c], split.fits[c]);
            if (contestants[c]->n_designs() == 0) contestants[c]->finish(*mine.fit_scratch[c], split.fits[c]);
        }
    });
    fit_designs(ranges, contestants, out);
}

void SplitEngine::fit_designs(const std::vector<FoldRange>& ranges, const std::vector<const Contestant*>& contestants,
                              std::vector<std::vector<SplitFits>>& out) {
    struct Job {
        std::size_t contestant;
        int design;
    };
    std::vector<Job> jobs;
    for (std::size_t c = 0; c < contestants.size(); ++c)
        for (int d = 0; d < contestants[c]->n_designs(); ++d) jobs.push_back({c, d});
    if (jobs.empty()) return;
    // Small samples need many tasks, large ones long sweeps over blocks in cache.
    const std::uint32_t folds_per_task = n_segments() > 1 ? 64 : 8;
    std::vector<FoldRange> parts;
    std::vector<std::pair<std::size_t, std::size_t>> origin;  // range, first fold within it
    for (std::size_t r = 0; r < ranges.size(); ++r)
        for (std::uint32_t first = ranges[r].first; first < ranges[r].last; first += folds_per_task) {
            parts.push_back(
                {ranges[r].fold_of, first, std::min(ranges[r].last, first + folds_per_task), ranges[r].repeat});
            origin.emplace_back(r, first - ranges[r].first);
        }
    const std::size_t segments = n_segments();
    std::vector<std::vector<Eigen::MatrixXd>> partial(parts.size() * segments);  // [part, segment][fold x job]
    pool_.run(partial.size(), [&](std::size_t number, unsigned worker) {
        const std::size_t part = number / segments;
        Room& mine = room(worker, &contestants);
        std::vector<Eigen::MatrixXd>& grams = partial[number];
        grams.resize(parts[part].folds() * jobs.size());
        for (std::size_t g = 0; g < grams.size(); ++g) {
            const Job& job = jobs[g % jobs.size()];
            const int size = contestants[job.contestant]->design_columns(job.design) + 1;
            grams[g].setZero(size, size);
        }
        for_each_block(number % segments, [&](Eigen::Index first, std::ptrdiff_t count) {
            const RowBlock rows = rows_of(first, count);
            mine.held_out.resize(parts[part].folds());
            for (auto& rows_out : mine.held_out) rows_out.clear();
            for (std::ptrdiff_t i = 0; i < count; ++i) {
                const std::uint32_t fold = parts[part].fold_of[static_cast<std::size_t>(first + i)];
                if (fold >= parts[part].first && fold < parts[part].last)
                    mine.held_out[fold - parts[part].first].push_back(static_cast<std::uint32_t>(i));
            }
            for (std::size_t k = 0; k < parts[part].folds(); ++k)
                for (std::size_t j = 0; j < jobs.size(); ++j) {
                    const Fit& fit = out[origin[part].first][origin[part].second + k].fits[jobs[j].contestant];
                    if (fit.status != FitStatus::fitted) continue;
                    const int columns = contestants[jobs[j].contestant]->design_columns(jobs[j].design);
                    double* design = mine.make_design_room(padded(count), columns + 1);
                    contestants[jobs[j].contestant]->form_design(jobs[j].design, fit, rows, mine.scratch, design,
                                                                 mine.design.rows());
                    mine.add_design(count, columns, mine.held_out[k], grams[k * jobs.size() + j]);
                }
        });
    });
    pool_.run(parts.size(), [&](std::size_t part, unsigned worker) {
        Room& mine = room(worker, &contestants);
        for (std::size_t k = 0; k < parts[part].folds(); ++k) {
            SplitFits& split = out[origin[part].first][origin[part].second + k];
            for (std::size_t j = 0; j < jobs.size(); ++j) {
                Fit& fit = split.fits[jobs[j].contestant];
                if (fit.status != FitStatus::fitted) continue;
                Eigen::MatrixXd& gram = partial[part * segments][k * jobs.size() + j];
                for (std::size_t s = 1; s < segments; ++s) gram += partial[part * segments + s][k * jobs.size() + j];
                contestants[jobs[j].contestant]->fit_design(jobs[j].design, gram, fit);
            }
            for (std::size_t c = 0; c < contestants.size(); ++c)
                if (contestants[c]->n_designs() > 0) contestants[c]->finish(*mine.fit_scratch[c], split.fits[c]);
        }
    });
}

SplitFits SplitEngine::fit_whole(const Gram& whole, const std::vector<const Contestant*>& contestants) {
    const std::vector<std::uint32_t> none_held_out(static_cast<std::size_t>(sample_.n), 1);
    std::vector<std::vector<SplitFits>> out;
    fit({{none_held_out, 0, 1, 0}}, whole, contestants, out);
    return std::move(out.front().front());
}

Eigen::MatrixXd SplitEngine::gram_of(int n_columns, const FormColumns& form) {
    std::vector<Eigen::MatrixXd> partial(n_segments());
    pool_.run(partial.size(), [&](std::size_t segment, unsigned worker) {
        Room& mine = room(worker, nullptr);
        partial[segment].setZero(n_columns + 1, n_columns + 1);
        for_each_block(segment, [&](Eigen::Index first, std::ptrdiff_t count) {
            double* design = mine.make_design_room(padded(count), n_columns + 1);
            form(rows_of(first, count), mine.scratch, design, mine.design.rows());
            mine.add_design(count, n_columns, {}, partial[segment]);
        });
    });
    for (std::size_t s = 1; s < partial.size(); ++s) partial.front() += partial[s];
    return partial.front();
}

void SplitEngine::predict_segment(const FoldRange& range, std::size_t segment, const std::vector<SplitFits>& fits,
                                  const std::vector<const Contestant*>& contestants, const LossRule& rule,
                                  const PredictionSlots& slots, Room& mine, std::vector<SplitErrors>& out) {
    const auto q = static_cast<std::ptrdiff_t>(rule.target_columns.size());
    out.resize(range.folds());
    for (SplitErrors& errors : out) {
        errors.loss.assign(contestants.size(), 0);
        errors.sums.assign(contestants.size(), std::vector<ErrorSums>(static_cast<std::size_t>(q)));
    }
    for_each_block(segment, [&](Eigen::Index first, std::ptrdiff_t count) {
        gather(range, first, count, false, mine);
        const std::ptrdiff_t capacity = std::max<std::ptrdiff_t>(mine.filled, kBlockRows);
        if (mine.predicted.rows() < capacity || mine.predicted.cols() < q) {
            mine.predicted.resize(capacity, q);
            mine.row_squared.resize(capacity);
            mine.row_absolute.resize(capacity);
        }
        mine.inverse_actual.resize(mine.filled, q);
        for (std::ptrdiff_t j = 0; j < q; ++j) {
            const int column = rule.target_columns[static_cast<std::size_t>(j)];
            for (std::ptrdiff_t i = 0; i < mine.filled; ++i) {
                const double actual = mine.block(i, column) + sample_.centre(column);
                mine.inverse_actual(i, j) = actual != 0 ? 1 / std::fabs(actual) : 0;
            }
        }
        for (std::size_t k = 0; k < range.folds(); ++k) {
            const std::ptrdiff_t begin = mine.begin[k], n = mine.end[k] - begin;
            if (n == 0) continue;
            out[k].rows += static_cast<double>(n);
            const RowBlock rows = mine.rows(sample_, begin, n);
            for (std::size_t c = 0; c < contestants.size(); ++c) {
                if (fits[k].fits[c].status != FitStatus::fitted) continue;
                contestants[c]->predict(fits[k].fits[c], rows, mine.scratch, mine.predicted.data(),
                                        mine.predicted.rows());
                fill(mine.row_squared.data(), n, 0);
                fill(mine.row_absolute.data(), n, 0);
                for (std::ptrdiff_t j = 0; j < q; ++j)
                    add_errors(rows.values + rule.target_columns[static_cast<std::size_t>(j)] * rows.stride,
                               mine.predicted.col(j).data(), mine.inverse_actual.col(j).data() + begin, n,
                               rule.one_over_unit(j), mine.row_squared.data(), mine.row_absolute.data(),
                               out[k].sums[c][static_cast<std::size_t>(j)]);
                const double* loss = rule.absolute ? mine.row_absolute.data() : mine.row_squared.data();
                double sum = 0;
                for (std::ptrdiff_t i = 0; i < n; ++i) {
                    const double value = loss[i] / static_cast<double>(q);
                    slots.row_loss[static_cast<Eigen::Index>(c) * sample_.n +
                                   mine.row[static_cast<std::size_t>(begin + i)]] += value;
                    sum += value;
                }
                out[k].loss[c] += sum;
                if (!slots.errors || rule.error_slot[c] < 0) continue;
                for (std::ptrdiff_t j = 0; j < q; ++j) {
                    const double* actual = rows.values + rule.target_columns[static_cast<std::size_t>(j)] * rows.stride;
                    const double* predicted = mine.predicted.col(j).data();
                    double* to = slots.errors + (rule.error_slot[c] * q + j) * sample_.n;
                    const double scale = rule.one_over_unit(j);
                    for (std::ptrdiff_t i = 0; i < n; ++i)
                        to[mine.row[static_cast<std::size_t>(begin + i)]] = (actual[i] - predicted[i]) * scale;
                }
            }
        }
    });
}

void SplitEngine::predict(const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                          const std::vector<const Contestant*>& contestants, const LossRule& rule,
                          const std::vector<PredictionSlots>& slots, std::vector<std::vector<SplitErrors>>& out) {
    const std::size_t segments = n_segments();
    std::vector<std::vector<SplitErrors>> partial(ranges.size() * segments);
    pool_.run(partial.size(), [&](std::size_t number, unsigned worker) {
        const std::size_t r = number / segments;
        predict_segment(ranges[r], number % segments, fits[r], contestants, rule, slots[r], room(worker, &contestants),
                        partial[number]);
    });
    out.resize(ranges.size());
    for (std::size_t r = 0; r < ranges.size(); ++r) {
        out[r] = std::move(partial[r * segments]);
        for (std::size_t s = 1; s < segments; ++s)
            for (std::size_t k = 0; k < out[r].size(); ++k) {
                const SplitErrors& more = partial[r * segments + s][k];
                out[r][k].rows += more.rows;
                for (std::size_t c = 0; c < contestants.size(); ++c) {
                    out[r][k].loss[c] += more.loss[c];
                    for (std::size_t j = 0; j < rule.target_columns.size(); ++j) {
                        out[r][k].sums[c][j].squared += more.sums[c][j].squared;
                        out[r][k].sums[c][j].absolute += more.sums[c][j].absolute;
                        out[r][k].sums[c][j].proportional += more.sums[c][j].proportional;
                    }
                }
            }
    }
}

}  // namespace rivalfold
