#include "rivalfold/data/read_delimited.hpp"

#include "support/catch.hpp"

TEST_CASE("the cells of a small table are read as numbers", "[data]") {
    const auto all = [](const std::vector<std::string>& header) {
        rivalfold::ColumnChoice choice;
        for (std::size_t column = 0; column < header.size(); ++column) choice.numbers.push_back(column);
        return choice;
    };
    const rivalfold::Table table = rivalfold::read_delimited_text("a,b\n1,2\n3.5,-4\n", "t.csv", {}, all);
    REQUIRE(table.n_rows == 2);
    CHECK(table.numbers(1, 0) == 3.5);
    CHECK(table.numbers(1, 1) == -4);
}
