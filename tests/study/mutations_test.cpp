// Whatever happens to a valid study, the reader returns a study or says where something is wrong.
#include <algorithm>
#include <array>
#include <cstdint>

#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

namespace {

// Knuth's MMIX constants (The Art of Computer Programming, volume 2, 3.3.4); from memory. Only repeatable, not good.
class Generator {
public:
    std::size_t below(std::size_t bound) {
        state_ = state_ * 6364136223846793005ULL + 1442695040888963407ULL;
        return static_cast<std::size_t>(state_ >> 33) % bound;
    }

private:
    std::uint64_t state_ = 20260101;
};

std::string mutate(std::string text, Generator& random) {
    static const std::array<std::string, 36> kPieces = {
        "[", "]",  "{",  "}",   ":",    ": ",   ",",   "-",    "- ",        "\"", "'",        "\n",
        " ", "\t", "#",  "&a ", "*a",   "!t ",  "|",   ">",    "---\n",     "?",  "\\",       "%",
        "0", "~",  "<<", "é",   "\xFF", "\x1b", "1e9", "null", "crossed: ", "\r", "delivery", "sector"};
    const std::size_t n_edits = 1 + random.below(3);
    for (std::size_t edit = 0; edit < n_edits && !text.empty(); ++edit) {
        const std::size_t at = random.below(text.size());
        const std::size_t length = random.below(std::min<std::size_t>(30, text.size() - at)) + 1;
        switch (random.below(5)) {
            case 0:
                text.erase(at, length);
                break;
            case 1:
                text.insert(at, kPieces[random.below(kPieces.size())]);
                break;
            case 2:
                text.replace(at, 1, kPieces[random.below(kPieces.size())]);
                break;
            case 3:
                text.insert(random.below(text.size()), text.substr(at, length));
                break;
            default:
                text.resize(at == 0 ? text.size() : std::max(at, text.size() - length));
                break;
        }
    }
    return text;
}

// Empty if the text is a study or its faults are located and fit to be shown; otherwise what is wrong.
std::string complaint(const std::string& text) {
    try {
        const Study study = read_study_text(text, "study.yaml");
        if (study.theories.size() < 2 || study.target.text.empty()) return "a study without target or theories";
    } catch (const FaultError& error) {
        const auto& faults = error.faults();
        if (faults.empty()) return "no fault in the error";
        const bool located =
            std::any_of(faults.begin(), faults.end(), [](const Fault& fault) { return fault.place.line > 0; });
        if (!located) return "no fault with a place";
        const std::string shown = error.what();
        const auto raw = [](char letter) { return (letter >= 0 && letter < ' ' && letter != '\n') || letter == 0x7F; };
        if (std::any_of(shown.begin(), shown.end(), raw)) return "a control character in the message";
    } catch (const std::exception& error) {
        return std::string("another exception: ") + error.what();
    }
    return {};
}

}  // namespace

TEST_CASE("20000 mutated studies are read or faulted with a place", "[hostile]") {
    Generator random;
    std::size_t n_faulted = 0;
    for (int round = 0; round < 20'000; ++round) {
        const std::string text = mutate(kStudy, random);
        const std::string wrong = complaint(text);
        if (!wrong.empty()) {
            INFO(text);
            FAIL(wrong);
        }
        if (round % 100 == 0 && faults_in(text) != "no fault") ++n_faulted;
    }
    // Most edits break something: a reader that accepted nearly all of them, or none, would be at fault itself.
    CHECK(n_faulted > 100);
    CHECK(n_faulted < 200);
}
