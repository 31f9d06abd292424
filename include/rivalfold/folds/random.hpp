// Random numbers that are the same on every machine, compiler and thread: a counter-based generator and our own draws.
// Knows nothing of what the numbers are for beyond the stream's purpose.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <utility>
#include <vector>

namespace rivalfold {

/// What a stream is for; streams of different purposes never overlap. Values are part of the promise: never renumber.
enum class Purpose : std::uint32_t { folds = 1, confidence_set = 2, bootstrap = 3, simulation = 4 };

/// Philox4x32-10 (Salmon, Moraes, Dror & Shaw 2011, "Parallel random numbers: as easy as 1, 2, 3", SC'11): the key is
/// the seed, the counter is (block, index, purpose). Promised: the same (seed, purpose, index) gives the same numbers
/// everywhere. Not promised: equality across releases that say otherwise under "Changes".
class RandomStream {
public:
    RandomStream(std::uint64_t seed, Purpose purpose, std::uint32_t index);
    std::uint32_t next32();
    std::uint64_t next64();  ///< two 32-bit words, the first one low
    /// Uniform on 0 .. bound - 1 without bias, by multiplication and rejection (Lemire 2019, ACM TOMACS 29(1)). bound
    /// >= 1.
    std::uint64_t below(std::uint64_t bound);
    /// The same from 32-bit words, for bounds below 2^32: half the work, other numbers.
    std::uint32_t below_small(std::uint32_t bound);
    /// Uniform on [0, 1) with 53 random bits.
    double unit();

private:
    std::uint64_t seed_;
    std::uint32_t purpose_;
    std::uint32_t index_;
    std::uint64_t block_ = 0;
    std::array<std::uint32_t, 4> words_{};
    unsigned used_ = 4;
};

/// The numbers 0 .. n - 1 in random order (Fisher & Yates 1938; Durstenfeld 1964).
std::vector<std::uint32_t> shuffled(std::size_t n, RandomStream& stream);

}  // namespace rivalfold
