// SPDX-License-Identifier: GPL-3.0-or-later
// The one table behind reading, judging and wording of stresses: which family has it, which figures it rests on.
#pragma once
#include <span>

#include "engine/rule/rule.hpp"

namespace binwright {

struct StressRow {
    StressInfo info;
    bool in_switch, in_rectifier, in_capacitor, of_converter;
    /// Figures of the part that decide its value: a told one leaves a verdict unproven, a measured one can settle it.
    std::span<const Symbol> rests_on;
    /// Where a part does not list it, it does not occur there (nothing reverses it, no surge is given).
    bool only_where_it_occurs;
    std::span<const Family> beside = {};  ///< families beside the three that have it too
};
[[nodiscard]] std::span<const StressRow> stress_rows();
[[nodiscard]] const StressRow& stress_row(Stress stress);

/// What a rule may hold a stress to instead of a rating: said by the converter, or by the conditions of a figure.
struct RequirementInfo {
    std::string_view name;     ///< "life"
    std::string_view meaning;  ///< "the life required"
    Stress stress;
};
[[nodiscard]] std::span<const RequirementInfo> requirements();

/// The id without the words of its own selector that it begins with: "aluminium-voltage" for capacitor/aluminium is
/// "voltage". Rules of one stem on one stress stand in for each other; the most specific selector wins.
[[nodiscard]] std::string id_stem(const Rule& rule);

/// Whether a selector ("capacitor", "capacitor/aluminium", "converter"; several with ", " between) takes a part of `part_selector`.
[[nodiscard]] bool selects(std::string_view selector, std::string_view part_selector);

/// Reads an expression of a family's figures; `unit` is what it must come out in (temperatures in it are differences).
/// @throws InputError with place.column within `text`
[[nodiscard]] Expression parse_expression(std::string_view text, Family family, Unit unit);
/// The least (or greatest) value of an expression over both ends of its figures, each the tightest of its symbol; empty where
/// one of them is not on record, and then `missing` names it. NaN where it divides by zero.
[[nodiscard]] std::optional<double> value_of(const Expression& expression, const Part& part, bool least, std::string& missing);

/// Whether a condition is true of a part: 1, 0, or -1 where that cannot be told.
[[nodiscard]] int truth(const Condition& condition, const Part& part);

}  // namespace binwright
