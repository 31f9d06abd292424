// What a text cell must be, and what of it counts. Knows nothing of quotes or columns.
#pragma once

#include <string_view>

namespace rivalfold {

/// Whether the bytes are UTF-8.
bool is_utf8(std::string_view text);

/// Without surrounding spaces, tabs and line ends.
std::string_view trimmed(std::string_view text);

}  // namespace rivalfold
