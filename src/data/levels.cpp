#include "data/levels.hpp"

#include "data/numbers.hpp"

#include <algorithm>
#include <numeric>
#include <string_view>
#include <unordered_map>

namespace rivalfold {

Levels code_levels(const std::vector<std::string>& cells, std::span<const std::size_t> rows) {
    Levels levels;
    levels.codes.reserve(rows.size());
    std::vector<std::string_view> texts;  // in order of appearance
    std::unordered_map<std::string_view, int> known;
    for (const std::size_t row : rows) {
        const auto [at, is_new] = known.emplace(cells[row], static_cast<int>(texts.size()));
        if (is_new) texts.push_back(cells[row]);
        levels.codes.push_back(at->second);
    }
    std::vector<double> values(texts.size(), 0);
    bool numeric = true;
    for (std::size_t i = 0; i < texts.size() && numeric; ++i) numeric = text_is_number(texts[i], values[i]);
    if (!numeric) values.assign(texts.size(), 0);
    std::vector<std::size_t> order(texts.size());
    std::iota(order.begin(), order.end(), std::size_t{0});
    std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
        return values[a] != values[b] ? values[a] < values[b] : texts[a] < texts[b];
    });
    std::vector<int> final_code(texts.size());
    for (std::size_t i = 0; i < order.size(); ++i) {
        const bool same = numeric && i > 0 && values[order[i]] == values[order[i - 1]];
        if (!same) levels.names.emplace_back(texts[order[i]]);
        final_code[order[i]] = static_cast<int>(levels.names.size()) - 1;
    }
    for (int& code : levels.codes) code = final_code[static_cast<std::size_t>(code)];
    return levels;
}

}  // namespace rivalfold
