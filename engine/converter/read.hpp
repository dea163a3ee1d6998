// SPDX-License-Identifier: GPL-3.0-or-later
// Between a text's values and a Converter; shared by reading and by changing a file.
#pragma once
#include <string>
#include <vector>

#include "engine/converter/converter.hpp"
#include "engine/converter/item.hpp"

namespace binwright {

/// Puts one "KEY=VALUE" into the values, making tables where they are missing; an empty value takes the key out.
void apply_change(Item& root, const std::string& change, std::vector<Fault>& faults);

/// Fills a Converter from values. `whole` false: some lines could not be read, so nothing is called missing.
[[nodiscard]] Converter converter_from(const Item& root, const std::string& file, bool whole, bool changed,
                                       std::vector<Fault>& faults);

/// The member of a table that is this key; figures also under another spelling of their symbol.
[[nodiscard]] Item* find_member(Item& table, const std::string& key, std::optional<Symbol> symbol, Family family);

}  // namespace binwright
