// The help page tells of every key and word that the reader knows.
#include "rivalfold/study/help_study.hpp"

#include <set>
#include <sstream>

#include "rivalfold/study/read_study.hpp"
#include "study/study_keys.hpp"
#include "support/catch.hpp"

using namespace rivalfold;

namespace {

// The words of the page: letters, digits and underscores.
std::set<std::string> words_of(std::string_view page) {
    std::set<std::string> words;
    std::string word;
    for (const char letter : page) {
        const bool inside = (letter >= 'a' && letter <= 'z') || (letter >= 'A' && letter <= 'Z') ||
                            (letter >= '0' && letter <= '9') || letter == '_';
        if (inside) word += letter;
        if (!inside) {
            words.insert(word);
            word.clear();
        }
    }
    return words;
}

void check_keys(const std::set<std::string>& words, const auto& keys) {
    for (const Key& key : keys) {
        INFO(key.name);
        CHECK(words.contains(std::string(key.name)));
    }
}

}  // namespace

TEST_CASE("the help page names every key", "[help]") {
    const std::set<std::string> words = words_of(help_study());
    check_keys(words, kStudyKeys);
    check_keys(words, kDataKeys);
    check_keys(words, kSegmentKeys);
    check_keys(words, kConstructKeys);
    check_keys(words, kTheoryKeys);
    check_keys(words, kTermKeys);
    check_keys(words, kTrialKeys);
    check_keys(words, kVerdictKeys);
    for (const Weights weights : {Weights::mode_a, Weights::mode_b, Weights::equal, Weights::principal})
        CHECK(words.contains(word(weights)));
    for (const Metric metric : {Metric::standard, Metric::response}) CHECK(words.contains(word(metric)));
    for (const RowRule rule : {RowRule::drop, RowRule::mean}) CHECK(words.contains(word(rule)));
    for (const Loss loss : {Loss::squared, Loss::absolute}) CHECK(words.contains(word(loss)));
    for (const Mediators mediators : {Mediators::measured, Mediators::predicted})
        CHECK(words.contains(word(mediators)));
}

TEST_CASE("the help page has plain lines of at most 80 characters", "[help]") {
    std::istringstream page{std::string(help_study())};
    for (std::string line; std::getline(page, line);) {
        INFO(line);
        CHECK(line.size() <= 80);
        CHECK(std::all_of(line.begin(), line.end(), [](char letter) { return letter >= ' ' && letter <= '~'; }));
    }
    CHECK(help_study().ends_with(".\n"));
}

TEST_CASE("the example on the help page is a study", "[help]") {
    std::istringstream page{std::string(help_study())};
    std::string example;
    for (std::string line; std::getline(page, line);)
        if (line.starts_with("    study:") || (!example.empty() && line.starts_with("    "))) {
            example += line.substr(4) + "\n";
        } else if (!example.empty()) {
            break;
        }
    const Study study = read_study_text(example, "study.yaml");
    CHECK(study.theories.size() == 2);
    CHECK(study.constructs.size() == 4);
}
