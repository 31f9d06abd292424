// Cells compared with those that libcsv finds, an independent reader of the same texts.
#include "reading.hpp"
#include "support/catch.hpp"

#include <csv.h>
#include <fmt/format.h>

#include <random>

using namespace rivalfold;

namespace {

using Rows = std::vector<std::vector<std::string>>;

struct Collected {
    Rows rows;
    std::vector<std::string> row;
};

/// All rows as libcsv sees them; nothing if it finds the quotes out of order.
bool oracle_rows(const std::string& text, char delimiter, Rows& rows) {
    csv_parser parser;
    if (csv_init(&parser, CSV_STRICT_FINI) != 0) return false;
    csv_set_delim(&parser, static_cast<unsigned char>(delimiter));
    Collected collected;
    const auto end_cell = [](void* cell, std::size_t size, void* to) {
        static_cast<Collected*>(to)->row.emplace_back(static_cast<char*>(cell), size);
    };
    const auto end_row = [](int, void* to) {
        auto& all = *static_cast<Collected*>(to);
        all.rows.push_back(std::move(all.row));
        all.row.clear();
    };
    const bool whole = csv_parse(&parser, text.data(), text.size(), end_cell, end_row, &collected) == text.size();
    const bool closed = csv_fini(&parser, end_cell, end_row, &collected) == 0;
    csv_free(&parser);
    rows = std::move(collected.rows);
    return whole && closed;
}

std::string trim(const std::string& text) {
    const std::size_t first = text.find_first_not_of(" \t\r\n");
    return first == std::string::npos ? "" : text.substr(first, text.find_last_not_of(" \t\r\n") - first + 1);
}

bool same_cells(const Rows& expected, const Table& table) {
    if (table.n_rows + 1 != expected.size()) return false;
    for (std::size_t column = 0; column < table.header.size(); ++column) {
        if (table.header[column] != trim(expected[0][column])) return false;
        for (std::size_t row = 0; row < table.n_rows; ++row)
            if (table.texts[column][row] != trim(expected[row + 1][column])) return false;
    }
    return true;
}

/// A rectangular table of tricky cells written with random quotes, blanks and line ends.
std::string random_table(std::mt19937& random, char delimiter) {
    const std::vector<std::string> pieces = {"",         "1",
                                             "a b",      "x\"\"y",
                                             "\n",       "\r\n",
                                             "\r",       std::string(1, delimiter),
                                             ",",        "\"\"",
                                             " ",        "7.5",
                                             "\xC3\xA9", "long text of some words"};
    const std::vector<std::string> ends = {"\n", "\r\n", "\r"};
    const std::size_t n_columns = 2 + random() % 4;
    const std::size_t n_rows = 2 + random() % 6;
    const std::string row_end = ends[random() % ends.size()];
    std::string text;
    for (std::size_t row = 0; row < n_rows; ++row) {
        for (std::size_t column = 0; column < n_columns; ++column) {
            if (column > 0) text += delimiter;
            if (row == 0) {
                text += fmt::format("h{}", column);
            } else if (random() % 2 == 0) {
                text += random() % 4 == 0 ? " \"" : "\"";
                for (std::size_t i = random() % 4; i > 0; --i) text += pieces[random() % pieces.size()];
                text += random() % 4 == 0 ? "\"  " : "\"";
            } else {
                text += fmt::format("{}{}", random() % 100, random() % 5 == 0 ? "\" inch" : "");
            }
        }
        text += row_end;
        if (random() % 8 == 0) text += row_end;
    }
    return text;
}

}  // namespace

TEST_CASE("tricky texts give the cells that libcsv finds", "[data]") {
    for (const std::string text :
         {"a,b\n1,2\n", "a,b\r\n\"1\",\"2\"\r\n", "a,b\n\"x\"\"y\",\"\"\"\"\n", "a,b\n\"x\ny\",\"z,z\"\n",
          "a,b\n\"\",\n", "a,b\n,\n", "a,b\n 1 ,\t2\t\n", "a,b\n5\" pipe,a\"b\"c\n", "a,b\n\n\n1,2\n\n",
          "a,b\r1,2\r\r3,4\r", "a,b\n \"quoted\" , \"after blanks\"\n", "a,b\n1,2", "a,b\n1,\"2\"", "a,b\n1,",
          "a,b\n\"ends\r\",\"\r\nstarts\"\n", "a,b\n\"\"\"\"\"\",\"\"\"a\"\"\"\n"}) {
        CAPTURE(text);
        Rows expected;
        REQUIRE(oracle_rows(text, ',', expected));
        CHECK(same_cells(expected, read_texts(text, {',', {}})));
    }
}

TEST_CASE("pseudo-random texts give the cells that libcsv finds", "[data]") {
    std::mt19937 random(20240317);
    for (int trial = 0; trial < 5000; ++trial) {
        const char delimiter = ",;|\t"[random() % 4];
        const std::string text = random_table(random, delimiter);
        CAPTURE(trial, text);
        Rows expected;
        REQUIRE(oracle_rows(text, delimiter, expected));
        REQUIRE(same_cells(expected, read_texts(text, {delimiter, {}})));
    }
}
