#include "rivalfold/folds/random.hpp"

#include <Random123/philox.h>

namespace rivalfold {

RandomStream::RandomStream(std::uint64_t seed, Purpose purpose, std::uint32_t index)
    : seed_(seed), purpose_(static_cast<std::uint32_t>(purpose)), index_(index) {}

std::uint32_t RandomStream::next32() {
    if (used_ == 4) {
        const r123::Philox4x32::key_type key = {
            {static_cast<std::uint32_t>(seed_), static_cast<std::uint32_t>(seed_ >> 32)}};
        const r123::Philox4x32::ctr_type counter = {
            {static_cast<std::uint32_t>(block_), static_cast<std::uint32_t>(block_ >> 32), index_, purpose_}};
        const auto out = r123::Philox4x32{}(counter, key);
        words_ = {out[0], out[1], out[2], out[3]};
        ++block_;
        used_ = 0;
    }
    return words_[used_++];
}

std::uint64_t RandomStream::next64() {
    const std::uint64_t low = next32();
    const std::uint64_t high = next32();
    return high << 32 | low;
}

std::uint64_t RandomStream::below(std::uint64_t bound) {
    __extension__ using Wide = unsigned __int128;
    const std::uint64_t reject_below = (0 - bound) % bound;
    for (;;) {
        const Wide product = static_cast<Wide>(next64()) * bound;
        if (static_cast<std::uint64_t>(product) >= reject_below) return static_cast<std::uint64_t>(product >> 64);
    }
}

std::uint32_t RandomStream::below_small(std::uint32_t bound) {
    const std::uint32_t reject_below = (0 - bound) % bound;
    for (;;) {
        const std::uint64_t product = static_cast<std::uint64_t>(next32()) * bound;
        if (static_cast<std::uint32_t>(product) >= reject_below) return static_cast<std::uint32_t>(product >> 32);
    }
}

double RandomStream::unit() { return static_cast<double>(next64() >> 11) * 0x1p-53; }

std::vector<std::uint32_t> shuffled(std::size_t n, RandomStream& stream) {
    std::vector<std::uint32_t> order(n);
    for (std::size_t i = 0; i < n; ++i) order[i] = static_cast<std::uint32_t>(i);
    for (std::size_t i = n; i > 1; --i) std::swap(order[i - 1], order[stream.below(i)]);
    return order;
}

}  // namespace rivalfold
