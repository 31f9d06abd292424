// The fingerprint by which a results folder says which bytes it was made from (FIPS 180-4).
// Knows bytes, not what they mean.
#pragma once

#include <string>
#include <string_view>

namespace rivalfold {

/// SHA-256 of the bytes as 64 lower-case hexadecimal digits.
std::string sha256_hex(std::string_view bytes);

/// The same of a file, read in blocks. Throws FaultError when it cannot be read.
std::string sha256_hex_of_file(const std::string& path);

}  // namespace rivalfold
