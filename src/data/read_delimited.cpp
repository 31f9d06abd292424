#include "rivalfold/data/read_delimited.hpp"

#include "data/layout.hpp"
#include "data/numbers.hpp"
#include "data/read_source.hpp"
#include "data/read_stretch.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <atomic>
#include <cstdint>
#include <future>
#include <new>
#include <thread>

#include <sys/mman.h>

namespace rivalfold {
namespace {

std::vector<ColumnUse> uses_of(const ColumnChoice& choice, const Layout& layout, FaultLog& faults) {
    std::vector<ColumnUse> uses(layout.header.size());
    for (std::size_t i = 0; i < choice.numbers.size(); ++i) uses.at(choice.numbers[i]).number = static_cast<int>(i);
    for (std::size_t i = 0; i < choice.texts.size(); ++i) uses.at(choice.texts[i]).text = static_cast<int>(i);
    for (std::size_t column = 0; column < uses.size(); ++column)
        if ((uses[column].number >= 0 || uses[column].text >= 0) && layout.header[column].empty())
            faults.add(
                {layout.file, {}, fmt::format("header, column {}", column + 1), "this column has no name", {}, {}});
    return uses;
}

/// Asks `choose`; what it finds wrong is told together with what the header has wrong already.
ColumnChoice choose_columns(const ChooseColumns& choose, const Layout& layout, FaultLog& faults) {
    try {
        return choose(layout.header);
    } catch (const FaultError& error) {
        if (faults.empty()) throw;
        for (const Fault& fault : error.faults()) faults.add(fault);
    }
    return {};
}

/// First touches of fresh memory cost more than reading the file does; large pages make them few.
void ask_for_large_pages([[maybe_unused]] Eigen::MatrixXd& numbers) {
#ifdef MADV_HUGEPAGE
    constexpr std::uintptr_t kLargePage = std::uintptr_t{1} << 21;
    const auto begin = reinterpret_cast<std::uintptr_t>(numbers.data());
    const std::uintptr_t end = begin + static_cast<std::uintptr_t>(numbers.size()) * sizeof(double);
    const std::uintptr_t first = (begin + kLargePage - 1) / kLargePage * kLargePage;
    // A wish: where it is not granted, nothing changes but the speed.
    if (first + kLargePage <= end) (void)madvise(reinterpret_cast<void*>(first), end - first, MADV_HUGEPAGE);
#endif
}

void make_room(Table& table, const std::string& file) {
    const std::size_t n_numbers = table.chosen.numbers.size();
    try {
        table.numbers.resize(static_cast<Eigen::Index>(table.n_rows), static_cast<Eigen::Index>(n_numbers));
        ask_for_large_pages(table.numbers);
        table.texts.assign(table.chosen.texts.size(), {});
        for (auto& column : table.texts) column.resize(table.n_rows);
    } catch (const std::bad_alloc&) {
        throw FaultError(Fault{file,
                               {},
                               {},
                               fmt::format("{} rows of {} columns need more memory than there is", table.n_rows,
                                           n_numbers + table.chosen.texts.size()),
                               {},
                               {}});
    }
}

/// One column must not mix "3.5" and "3,5": one of the two is then likely to mean thousands.
void check_marks(const std::vector<MarksSeen>& marks, const Layout& layout, const ColumnChoice& chosen,
                 FaultLog& faults) {
    for (std::size_t i = 0; i < marks.size(); ++i) {
        if (marks[i].point == MarksSeen::kNever || marks[i].comma == MarksSeen::kNever) continue;
        faults.add({layout.file,
                    {},
                    fmt::format("column {}", in_quotes(layout.header[chosen.numbers[i]])),
                    fmt::format("mixes a decimal point (row {}) and a decimal comma (row {}); use one of them",
                                marks[i].point + 1, marks[i].comma + 1),
                    {},
                    {}});
    }
}

void merge_marks(std::vector<MarksSeen>& all, const std::vector<MarksSeen>& part) {
    for (std::size_t i = 0; i < all.size(); ++i) {
        all[i].point = std::min(all[i].point, part[i].point);
        all[i].comma = std::min(all[i].comma, part[i].comma);
    }
}

/// Fills the table from all stretches; each thread takes the next one that is free.
void read_stretches(const ByteSource& source, const Layout& layout, const RowIndex& index, const NumberRules& rules,
                    const std::vector<ColumnUse>& uses, unsigned n_threads, Table& table, FaultLog& faults) {
    std::vector<FaultLog> logs(index.stretches.size());
    std::atomic<std::size_t> next{0};
    const auto work = [&] {
        StretchReader reader(source, layout, rules, uses, table);
        for (std::size_t i = next++; i < logs.size(); i = next++) reader.read(index.stretches[i], logs[i]);
        return reader.marks();
    };
    std::vector<std::future<std::vector<MarksSeen>>> others;
    for (unsigned thread = 1; thread < n_threads && thread < logs.size(); ++thread)
        others.push_back(std::async(std::launch::async, work));
    std::vector<MarksSeen> marks = work();
    for (auto& other : others) merge_marks(marks, other.get());
    for (const FaultLog& log : logs) faults.append(log);
    check_marks(marks, layout, table.chosen, faults);
}

}  // namespace

Table read_source(const ByteSource& source, const std::string& file, const ReadRules& rules,
                  const ChooseColumns& choose, unsigned n_threads) {
    FaultLog faults;
    const Layout layout = read_layout(source, file, rules.delimiter, faults);
    Table table;
    table.header = layout.header;
    table.chosen = choose_columns(choose, layout, faults);
    const std::vector<ColumnUse> uses = uses_of(table.chosen, layout, faults);
    faults.throw_if_any();
    const RowIndex index = index_rows(source, layout);
    table.n_rows = index.n_rows;
    make_room(table, file);
    const NumberRules number_rules(rules.missing_codes, layout.delimiter != ',');
    if (n_threads == 0) n_threads = std::clamp(std::thread::hardware_concurrency(), 1U, 8U);
    read_stretches(source, layout, index, number_rules, uses, n_threads, table, faults);
    faults.throw_if_any();
    return table;
}

Table read_delimited_text(std::string_view text, const std::string& file_name, const ReadRules& rules,
                          const ChooseColumns& choose) {
    return read_source(TextSource(text), file_name, rules, choose);
}

Table read_delimited(const std::string& path, const ReadRules& rules, const ChooseColumns& choose) {
    return read_source(FileSource(path), path, rules, choose);
}

}  // namespace rivalfold
