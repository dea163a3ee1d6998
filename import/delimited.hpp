// SPDX-License-Identifier: GPL-3.0-or-later
// Delimited text into rows whose every field knows where it stands.
#pragma once
#include <string>
#include <string_view>
#include <vector>

#include "engine/fault.hpp"

namespace binwright {

struct Field {
    std::string text;
    int line = 0;    ///< of its first character, from 1
    int column = 0;  ///< in characters, from 1; inside the quotes where it is quoted
};
using Row = std::vector<Field>;

/// Reads comma, semicolon or tab delimited text (RFC 4180 quoting, UTF-8, an optional byte order mark). The delimiter is the one
/// that the first line holds most of. Lines end with LF, CR LF or CR. Rows that are all empty, or that start with '#', are passed over.
/// @throws InputError at a quote that is never closed or stands inside an unquoted field, or where the text is not UTF-8
[[nodiscard]] std::vector<Row> read_delimited(std::string_view text, const std::string& file);

}  // namespace binwright
