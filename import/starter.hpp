// SPDX-License-Identifier: GPL-3.0-or-later
// The starter catalogue and the demo bin: delimited text that came with the program, turned into edits of a bin.
#pragma once
#include <iosfwd>
#include <string>
#include <string_view>
#include <vector>

#include "catalog/store.hpp"

namespace binwright {

/// Reads part types from delimited text (columns in catalog/starter/README; header row, UTF-8, comma).
/// @throws InputError with every faulty row: file, line, column, and what was expected
[[nodiscard]] std::vector<PartRecord> read_part_types(std::string_view text, const std::string& file);

/// The generic part types that came with the program.
[[nodiscard]] const std::vector<PartRecord>& starter_parts();

/// Adds the starter catalogue to a bin that does not have it yet (types only, no lots); one edit.
[[nodiscard]] Edit starter_edit(const Store& store);

/// Fills an empty bin with the tide-gauge station's lots and readings; one edit.
[[nodiscard]] Edit demo_edit(const Store& store);

}  // namespace binwright
