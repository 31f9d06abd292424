#include "theory/terms/terms.hpp"
#include "support/catch.hpp"

#include <array>
#include <cmath>
#include <vector>

using namespace rivalfold;
using Numbers = std::vector<double>;

namespace {

const Numbers kA = {1, -2, 3, 0.5, 2};
const Numbers kB = {4, 5, -6, 0.5, 0};
const Numbers kC = {2, 2, 2, 2, 2};

Numbers term(TermKind kind, const std::vector<const Numbers*>& scores) {
    std::vector<const double*> members;
    for (const Numbers* score : scores) members.push_back(score->data());
    Numbers out(kA.size(), 99);
    form_term(kind, Members(members.data(), members.size()), static_cast<std::ptrdiff_t>(kA.size()), out.data());
    return out;
}

}  // namespace

TEST_CASE("every kind of term has its value in every row", "[theory]") {
    CHECK(term(TermKind::score, {&kA}) == kA);
    CHECK(term(TermKind::product, {&kA, &kB}) == Numbers{4, -10, -18, 0.25, 0});
    CHECK(term(TermKind::product, {&kA, &kB, &kC}) == Numbers{8, -20, -36, 0.5, 0});
    CHECK(term(TermKind::minimum, {&kA, &kB}) == Numbers{1, -2, -6, 0.5, 0});
    CHECK(term(TermKind::minimum, {&kB, &kC, &kA}) == Numbers{1, -2, -6, 0.5, 0});
    CHECK(term(TermKind::maximum, {&kA, &kB}) == Numbers{4, 5, 3, 0.5, 2});
    CHECK(term(TermKind::maximum, {&kB, &kA, &kC}) == Numbers{4, 5, 3, 2, 2});
    CHECK(term(TermKind::square, {&kA}) == Numbers{1, 4, 9, 0.25, 4});
}

TEST_CASE("the order of the members changes no bit of a minimum, a maximum or a product of two", "[theory]") {
    for (const TermKind kind : {TermKind::minimum, TermKind::maximum, TermKind::product})
        CHECK(term(kind, {&kA, &kB}) == term(kind, {&kB, &kA}));
}

TEST_CASE("a geometric mean is the root of the product, and has no value where a member is not positive", "[theory]") {
    const Numbers two = term(TermKind::geometric_mean, {&kA, &kB});
    CHECK(two[0] == Approx(2).epsilon(1e-15));
    CHECK(std::isnan(two[1]));  // the first is negative
    CHECK(std::isnan(two[2]));  // the second is negative
    CHECK(two[3] == Approx(0.5).epsilon(1e-15));
    CHECK(std::isnan(two[4]));  // the second is zero
    CHECK(term(TermKind::geometric_mean, {&kA, &kB, &kC})[0] == Approx(std::cbrt(8.0)).epsilon(1e-15));
    const Numbers both_negative = term(TermKind::geometric_mean, {&kA, &kA});
    CHECK(std::isnan(both_negative[1]));  // though their product is positive
    CHECK(both_negative[0] == Approx(1).epsilon(1e-15));
    const Numbers large(kA.size(), 1e200), small(kA.size(), 1e-250);
    CHECK(term(TermKind::geometric_mean, {&large, &large, &large})[0] ==
          Approx(1e200).epsilon(1e-12));  // no overflow on the way
    CHECK(term(TermKind::geometric_mean, {&small, &small})[0] == Approx(1e-250).epsilon(1e-12));
}
