// SPDX-License-Identifier: GPL-3.0-or-later
// The one table of units: how each may be written, what one of it is in base units, and how it is printed.
#pragma once
#include <optional>
#include <span>
#include <string>
#include <string_view>

#include "engine/quantity/quantity.hpp"

namespace binwright {

struct UnitSpelling {
    Unit unit;
    std::string_view text;  ///< as written behind the number
    bool prefixed;          ///< may carry an SI prefix
    double factor;          ///< in base units, without prefix
};

[[nodiscard]] std::span<const UnitSpelling> unit_spellings();
/// Whether values of this unit are written with SI prefixes.
[[nodiscard]] bool prefixes_of(Unit unit);
/// "a voltage", "a temperature".
[[nodiscard]] std::string_view unit_noun(Unit unit);
/// 1e-6 for "u", "µ"; empty when it is no prefix. `K` is accepted as kilo.
[[nodiscard]] std::optional<double> prefix_factor(std::string_view prefix);
/// ASCII letters in lower case.
[[nodiscard]] std::string lower_case(std::string_view text);

}  // namespace binwright
