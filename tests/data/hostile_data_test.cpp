// Files that nobody means well: they must end in a table or in a FaultError, in bounded time and memory.
#include "data/layout.hpp"
#include "reading.hpp"
#include "studies.hpp"
#include "support/catch.hpp"

#include <chrono>
#include <random>

using namespace rivalfold;

namespace {

/// A text far larger than memory should hold: a beginning, then one byte repeated.
class Endless final : public ByteSource {
public:
    Endless(std::string beginning, char byte, std::uint64_t size)
        : beginning_(std::move(beginning)), byte_(byte), size_(size) {}
    std::uint64_t size() const override { return size_; }
    std::size_t read_at(std::uint64_t offset, char* into, std::size_t most) const override {
        if (offset >= size_) return 0;
        const auto n = static_cast<std::size_t>(std::min<std::uint64_t>(most, size_ - offset));
        for (std::size_t i = 0; i < n; ++i)
            into[i] = offset + i < beginning_.size() ? beginning_[static_cast<std::size_t>(offset) + i] : byte_;
        return n;
    }

private:
    std::string beginning_;
    char byte_;
    std::uint64_t size_;
};

/// Gives other bytes the second time, as a file that is being written does.
class Changing final : public ByteSource {
public:
    explicit Changing(std::string later) : later_(std::move(later)) {}
    std::uint64_t size() const override { return first_.size(); }
    std::size_t read_at(std::uint64_t offset, char* into, std::size_t most) const override {
        const std::string& now =
            calls_++ < 2 ? first_ : later_;  // for the header and to count rows; then for the cells
        return TextSource(now).read_at(offset, into, most);
    }

private:
    std::string first_ = "a,b\n1,2\n3,4\n";
    std::string later_;
    mutable int calls_ = 0;
};

std::string faults_of_source(const ByteSource& source) {
    return faults_of([&] { read_source(source, "t.csv", {}, every_number); });
}

}  // namespace

TEST_CASE("one quoted cell of 200 MB is refused early", "[data]") {
    CHECK(faults_of_source(Endless("a,b\n1,2\n3,\"", 'x', 200'000'000)) ==
          "t.csv: row 2, column \"b\": this cell is longer than 1048576 bytes; is its closing quote missing?");
    CHECK(faults_of_source(Endless("a,b\n1,2\n3,", 'x', 200'000'000)) ==
          "t.csv: row 2, column \"b\": this cell is longer than 1048576 bytes; is this a delimited text file?");
    CHECK(faults_of_source(Endless("a,b\n1,2\n3", ',', 200'000'000)) ==
          "t.csv: row 2: this row is longer than 67108864 bytes");
    CHECK(faults_of_source(Endless("a,\"b", 'x', 200'000'000)) ==
          "t.csv: header: longer than 67108864 bytes; is a closing quote missing?");
    CHECK(faults_of_source(Endless("a,b\n1,2\n", '\n', 20'000'000)) == "nothing thrown");
}

TEST_CASE("a cell just below the limit is read, one just above is not", "[data]") {
    const auto text = [](std::size_t length) { return "a,b\n1,\"" + std::string(length, ' ') + "\"\n"; };
    CHECK(faults_in(text(kMostCellBytes)) == "nothing thrown");
    CHECK(faults_in(text(kMostCellBytes + 1)) ==
          "t.csv: row 1, column \"b\": this cell is longer than 1048576 bytes; is its closing quote missing?");
}

TEST_CASE("a header of 100000 columns is read", "[data]") {
    std::string text;
    for (int column = 0; column < 100000; ++column) text += (column > 0 ? ",c" : "c") + std::to_string(column);
    text += "\n1";
    for (int column = 1; column < 100000; ++column) text += ",2";
    const Table table = read_delimited_text(text, "t.csv", {}, [](const auto&) {
        return ColumnChoice{{99999, 0}, {}};
    });
    CHECK(table.header.size() == 100000);
    CHECK(table.numbers(0, 0) == 2);
    CHECK(table.numbers(0, 1) == 1);
}

TEST_CASE("rows larger than a block are read", "[data]") {
    std::string text = "a,b,c,d\n";
    const std::string wide(900000, 'w');
    for (int row = 0; row < 4; ++row) text += "1," + wide + ",\"" + wide + "\"," + std::to_string(row) + "\r\n";
    const Table table = read_delimited_text(text, "t.csv", {}, [](const auto&) { return ColumnChoice{{3}, {}}; });
    CHECK(table.numbers.col(0) == Eigen::Vector4d(0, 1, 2, 3));
}

TEST_CASE("a file that changes between the passes is a fault, not a wrong table", "[data]") {
    constexpr const char* kChanged = "t.csv: error: the file changed while it was being read; try again";
    CHECK(faults_of_source(Changing("a,b\n1,2\n3,4\n")) == "nothing thrown");
    CHECK(faults_of_source(Changing("a,b\n1,2\n")) == kChanged);
    CHECK(faults_of_source(Changing("a,b\n1,2,3,4\n\n")) == kChanged);
}

TEST_CASE("line ends in any mixture take linear time", "[data]") {
    std::string text = "a,b\n";
    for (int row = 0; row < 300000; ++row) text += "1,2\r";
    text += "\n\"3\",4\n";
    const auto begin = std::chrono::steady_clock::now();
    CHECK(read_numbers(text).n_rows == 300001);
    // Quadratic time would be minutes; this is no measure of speed.
    CHECK(std::chrono::steady_clock::now() - begin < std::chrono::seconds(20));
}

TEST_CASE("any bytes end in a table or in faults, the same for one thread and for three", "[data]") {
    const std::vector<std::string> starts = {"a,b,c\n1,2,3\n4,\"5\",6\n7,8.25,-9\n", "a;b\r\n1,5;2\r\n\"x\";3,5\r\n",
                                             "\xEF\xBB\xBFone\n1\n\n3\n", "a\tb\r1\t2\r\"3\"\"\"\t4\r"};
    constexpr std::string_view kBytes = "\0\"\",;\t|\r\n 019.-+eEnaif\xFF\xC3\xA9\xEF\xBB\xBF";
    const std::string_view bytes(kBytes.data(), 29);
    std::mt19937 random(99);
    int n_read = 0;
    for (int trial = 0; trial < 20000; ++trial) {
        std::string text = starts[random() % starts.size()];
        for (std::size_t edits = 1 + random() % 4; edits > 0; --edits) {
            const std::size_t at = random() % (text.size() + 1);
            if (random() % 3 == 0)
                text.erase(at, random() % 5);
            else if (random() % 2 == 0 && at < text.size())
                text[at] = bytes[random() % bytes.size()];
            else
                text.insert(at, 1, bytes[random() % bytes.size()]);
        }
        const auto choose = [](const std::vector<std::string>& header) {
            ColumnChoice choice;
            for (std::size_t column = 0; column < header.size(); ++column)
                (column % 2 == 0 ? choice.numbers : choice.texts).push_back(column);
            return choice;
        };
        std::string first;
        Table table;
        first = faults_of([&] { table = read_source(TextSource(text), "t.csv", {0, {"-9", "NA"}}, choose, 1); });
        if (first == "nothing thrown") ++n_read;
        CHECK_FALSE(first.empty());
        const std::string second = faults_of([&] {
            read_source(TextSource(text), "t.csv", {0, {"-9", "NA"}}, choose, 3);
        });
        REQUIRE(first == second);
    }
    CHECK(n_read > 1000);
    CHECK(n_read < 19000);
}

TEST_CASE("any bytes under a study end in a survey or in faults", "[data]") {
    const Study study = study_of(R"(constructs:
  skill: {indicators: ["a*"], reversed: ["*2"], range: [1, 7]}
  sector: {category: k}
  delivery: {indicators: [d]}
controls: [sector]
data: {rows: mean, where: {w: [1, x]}, cluster: c, missing_codes: [-9]}
)");
    const std::string start = "a1,a2,k,d,w,c\n1,2,u,3,1,p\n4,-9,v,6,x,p\n7,1,u,,x,q\n2,,v,5,1.0,q\n3,3,u,1,1,r\n";
    std::mt19937 random(7);
    int n_read = 0;
    for (int trial = 0; trial < 5000; ++trial) {
        std::string text = start;
        for (std::size_t edits = 1 + random() % 3; edits > 0; --edits)
            text[random() % text.size()] = start[random() % start.size()];
        Survey survey;
        if (faults_of([&] { survey = survey_of(study, text); }) != "nothing thrown") continue;
        ++n_read;
        std::size_t n_rows = survey.n();
        for (const Dropped& dropped : survey.dropped) n_rows += dropped.rows.size();
        REQUIRE(n_rows == survey.rows_read);
        REQUIRE(survey.values.rows() == static_cast<Eigen::Index>(survey.n()));
        REQUIRE(survey.clusters.size() == survey.n());
        REQUIRE(survey.values.cols() == static_cast<Eigen::Index>(survey.variables.size()));
        const int outcome = survey.measurement(0, "delivery")->variables.at(0);
        REQUIRE_FALSE(survey.values.col(outcome).array().isNaN().any());
        REQUIRE(survey.has_missing == survey.values.array().isNaN().any());
    }
    CHECK(n_read > 500);
    CHECK(n_read < 4500);
}

TEST_CASE("a table of many stretches and its faults do not depend on the number of threads", "[data]") {
    std::mt19937 random(5);
    std::string text = "id,a,b,note\n";
    for (int row = 0; row < 60000; ++row)
        text += std::to_string(row) + "," + std::to_string(random() % 7) + ",-" + std::to_string(random() % 1000) +
                ".5," + (random() % 50 == 0 ? "\"two\nlines\"" : "plain") + "\n" + (random() % 100 == 0 ? "\n" : "");
    REQUIRE(text.size() > 4 * (std::size_t{1} << 18));
    const auto read = [](const std::string& from, unsigned n_threads) {
        return read_source(
            TextSource(from), "t.csv", {},
            [](const auto&) {
                return ColumnChoice{{0, 1, 2}, {3}};
            },
            n_threads);
    };
    const Table one = read(text, 1);
    REQUIRE(one.n_rows == 60000);
    for (Eigen::Index row = 0; row < 60000; ++row) REQUIRE(one.numbers(row, 0) == static_cast<double>(row));
    for (const unsigned n_threads : {2U, 5U}) {
        const Table other = read(text, n_threads);
        CHECK(other.numbers == one.numbers);
        CHECK(other.texts == one.texts);
    }
    for (std::size_t at = text.size() / 3; at < text.size(); at += 5000)
        if (const std::size_t line = text.find("plain", at); line != std::string::npos) text.replace(line, 5, "a,b\n1");
    const std::string faults = faults_of([&] { read(text, 1); });
    CHECK(faults.find(" more errors") != std::string::npos);
    CHECK(faults_of([&] { read(text, 4); }) == faults);
}
