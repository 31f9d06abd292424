#include "support/catch.hpp"

#include "rivalfold/folds/random.hpp"

#include <Random123/philox.h>

#include <algorithm>
#include <array>
#include <cstdint>
#include <map>
#include <vector>

using namespace rivalfold;
using Words = std::array<std::uint32_t, 4>;

namespace {

/// Philox4x32-10 written from the paper (Salmon, Moraes, Dror & Shaw 2011, SC'11, section 3.3), sharing nothing with
/// the library.
Words plain_philox(Words counter, std::array<std::uint32_t, 2> key) {
    for (int round = 0; round < 10; ++round) {
        const std::uint64_t a = std::uint64_t{0xD2511F53U} * counter[0];
        const std::uint64_t b = std::uint64_t{0xCD9E8D57U} * counter[2];
        counter = {static_cast<std::uint32_t>(b >> 32) ^ counter[1] ^ key[0], static_cast<std::uint32_t>(b),
                   static_cast<std::uint32_t>(a >> 32) ^ counter[3] ^ key[1], static_cast<std::uint32_t>(a)};
        key = {key[0] + 0x9E3779B9U, key[1] + 0xBB67AE85U};
    }
    return counter;
}

/// Pearson's chi-square of counts against equal expectation.
double chi_square(const std::vector<std::size_t>& counts) {
    double total = 0, sum = 0;
    for (const std::size_t count : counts) total += static_cast<double>(count);
    const double expected = total / static_cast<double>(counts.size());
    for (const std::size_t count : counts)
        sum += (static_cast<double>(count) - expected) * (static_cast<double>(count) - expected) / expected;
    return sum;
}

}  // namespace

// Random123 1.14, tests/kat_vectors, lines "philox4x32 10".
TEST_CASE("the generator gives the published known answers", "[folds]") {
    struct Known {
        Words counter;
        std::array<std::uint32_t, 2> key;
        Words answer;
    };
    const std::vector<Known> known = {{{0, 0, 0, 0}, {0, 0}, {0x6627e8d5U, 0xe169c58dU, 0xbc57ac4cU, 0x9b00dbd8U}},
                                      {{0xffffffffU, 0xffffffffU, 0xffffffffU, 0xffffffffU},
                                       {0xffffffffU, 0xffffffffU},
                                       {0x408f276dU, 0x41c83b0eU, 0xa20bc7c6U, 0x6d5451fdU}},
                                      {{0x243f6a88U, 0x85a308d3U, 0x13198a2eU, 0x03707344U},
                                       {0xa4093822U, 0x299f31d0U},
                                       {0xd16cfe09U, 0x94fdccebU, 0x5001e420U, 0x24126ea1U}}};
    for (const Known& k : known) {
        CHECK(plain_philox(k.counter, k.key) == k.answer);
        const auto out =
            r123::Philox4x32{}({{k.counter[0], k.counter[1], k.counter[2], k.counter[3]}}, {{k.key[0], k.key[1]}});
        CHECK(Words{out[0], out[1], out[2], out[3]} == k.answer);
    }
    RandomStream zero(0, static_cast<Purpose>(0), 0);
    CHECK(Words{zero.next32(), zero.next32(), zero.next32(), zero.next32()} == known[0].answer);
}

TEST_CASE("a stream is the generator keyed by the seed, counting blocks within index and purpose", "[folds]") {
    for (const std::uint64_t seed : {std::uint64_t{1}, std::uint64_t{20240229}, 0xfedcba9876543210U})
        for (const Purpose purpose : {Purpose::folds, Purpose::confidence_set, Purpose::bootstrap, Purpose::simulation})
            for (const std::uint32_t index : {0U, 49U, 0xffffffffU}) {
                RandomStream stream(seed, purpose, index);
                for (std::uint32_t block = 0; block < 3; ++block) {
                    const Words expected =
                        plain_philox({block, 0, index, static_cast<std::uint32_t>(purpose)},
                                     {static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32)});
                    CHECK(Words{stream.next32(), stream.next32(), stream.next32(), stream.next32()} == expected);
                }
            }
    CHECK(static_cast<int>(Purpose::folds) == 1);
    CHECK(static_cast<int>(Purpose::confidence_set) == 2);
    CHECK(static_cast<int>(Purpose::bootstrap) == 3);
    CHECK(static_cast<int>(Purpose::simulation) == 4);
}

// From a short Python program written from the papers alone; a change here moves every fold of every study.
TEST_CASE("the first draws of the first repeat of seed 1 never change", "[folds]") {
    RandomStream words(1, Purpose::folds, 0);
    CHECK(Words{words.next32(), words.next32(), words.next32(), words.next32()} ==
          Words{0x127bee41U, 0x1e047488U, 0x48842b20U, 0x0a393496U});
    RandomStream wide(1, Purpose::folds, 0), bounded(1, Purpose::folds, 0), shuffling(1, Purpose::folds, 0);
    CHECK(wide.next64() == 0x1e047488127bee41U);
    CHECK(wide.unit() == 0.0399353854086405);
    std::vector<std::uint64_t> dice;
    for (int k = 0; k < 12; ++k) dice.push_back(bounded.below(6));
    CHECK(dice == std::vector<std::uint64_t>{0, 0, 3, 5, 3, 0, 0, 5, 0, 1, 3, 1});
    CHECK(shuffled(10, shuffling) == std::vector<std::uint32_t>{9, 7, 2, 4, 8, 3, 6, 5, 0, 1});
}

TEST_CASE("two words make a wide one, the first low, and 53 bits of it a number below 1", "[folds]") {
    RandomStream narrow(9, Purpose::bootstrap, 3), wide(9, Purpose::bootstrap, 3), unit(9, Purpose::bootstrap, 3);
    for (int k = 0; k < 1000; ++k) {
        const std::uint64_t low = narrow.next32(), high = narrow.next32();
        REQUIRE(wide.next64() == (high << 32 | low));
        const double u = unit.unit();
        REQUIRE(u == static_cast<double>((high << 32 | low) >> 11) / 9007199254740992.0);
        REQUIRE((u >= 0 && u < 1));
    }
}

// Limits: chi-square quantiles at 1 - 1e-4 (R qchisq, rounded up); seeds are fixed, so each check gives the same number
// for ever.
TEST_CASE("bounded draws are uniform at small bounds", "[folds]") {
    const std::map<std::uint64_t, double> limit = {{2, 15.2}, {3, 18.5}, {5, 23.6}, {6, 25.8}, {7, 27.9}, {10, 33.8}};
    for (const auto& [bound, most] : limit) {
        RandomStream stream(5, Purpose::simulation, static_cast<std::uint32_t>(bound));
        std::vector<std::size_t> counts(bound, 0);
        for (int k = 0; k < 60000; ++k) {
            const std::uint64_t value = stream.below(bound);
            REQUIRE(value < bound);
            ++counts[value];
        }
        CHECK(chi_square(counts) < most);
    }
    for (const auto& [bound, most] : limit) {
        RandomStream stream(5, Purpose::bootstrap, static_cast<std::uint32_t>(bound));
        std::vector<std::size_t> counts(bound, 0);
        for (int k = 0; k < 60000; ++k) ++counts.at(stream.below_small(static_cast<std::uint32_t>(bound)));
        CHECK(chi_square(counts) < most);
    }
    RandomStream one(5, Purpose::simulation, 0);
    for (int k = 0; k < 10; ++k) CHECK((one.below(1) == 0 && one.below_small(1) == 0));
}

// Multiplying without rejecting would give a multiple of 3 half of the time: four words share three values.
TEST_CASE("bounded draws are uniform where a quarter of the words must be rejected", "[folds]") {
    RandomStream stream(5, Purpose::simulation, 1);
    std::vector<std::size_t> counts(3, 0);
    for (int k = 0; k < 30000; ++k) ++counts[stream.below(std::uint64_t{3} << 62) % 3];
    CHECK(chi_square(counts) < 18.5);
    std::vector<std::size_t> small(3, 0);
    for (int k = 0; k < 30000; ++k) ++small[stream.below_small(std::uint32_t{3} << 30) % 3];
    CHECK(chi_square(small) < 18.5);
}

TEST_CASE("a shuffle is a permutation, and all 24 orders of four are equally likely", "[folds]") {
    for (const std::size_t n : {std::size_t{0}, std::size_t{1}, std::size_t{2}, std::size_t{97}, std::size_t{1000}}) {
        RandomStream stream(3, Purpose::folds, 0);
        std::vector<std::uint32_t> order = shuffled(n, stream);
        std::sort(order.begin(), order.end());
        REQUIRE(order.size() == n);
        for (std::size_t i = 0; i < n; ++i) REQUIRE(order[i] == i);
    }
    std::map<std::vector<std::uint32_t>, std::size_t> seen;
    RandomStream stream(3, Purpose::simulation, 0);
    for (int k = 0; k < 48000; ++k) ++seen[shuffled(4, stream)];
    REQUIRE(seen.size() == 24);
    std::vector<std::size_t> counts;
    for (const auto& [order, count] : seen) counts.push_back(count);
    CHECK(chi_square(counts) < 57.1);  // 23 degrees of freedom, 1 - 1e-4
}
