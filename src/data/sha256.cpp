#include "rivalfold/data/sha256.hpp"

#include "data/byte_source.hpp"

#include <nettle/sha2.h>

#include <array>
#include <cstdint>
#include <vector>

namespace rivalfold {
namespace {

std::string finish(sha256_ctx& context) {
    std::array<std::uint8_t, SHA256_DIGEST_SIZE> digest{};
    sha256_digest(&context, digest.size(), digest.data());
    constexpr std::string_view kDigits = "0123456789abcdef";
    std::string hex;
    for (const std::uint8_t byte : digest) {
        hex += kDigits[byte >> 4];
        hex += kDigits[byte & 15];
    }
    return hex;
}

void add(sha256_ctx& context, std::string_view bytes) {
    sha256_update(&context, bytes.size(), reinterpret_cast<const std::uint8_t*>(bytes.data()));
}

}  // namespace

std::string sha256_hex(std::string_view bytes) {
    sha256_ctx context;
    sha256_init(&context);
    add(context, bytes);
    return finish(context);
}

std::string sha256_hex_of_file(const std::string& path) {
    const FileSource file(path);
    sha256_ctx context;
    sha256_init(&context);
    std::vector<char> block(std::size_t{1} << 18);
    std::uint64_t offset = 0;
    while (const std::size_t got = file.read_at(offset, block.data(), block.size())) {
        add(context, {block.data(), got});
        offset += got;
    }
    return finish(context);
}

}  // namespace rivalfold
