// SPDX-License-Identifier: GPL-3.0-or-later
// What a rule holds a stress to at one part: the rating as it counts there, and of several bounds the one that binds.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/answer/judge_part.hpp"

namespace binwright {

/// A rating as it counts here: what is printed, and what is left of it.
struct Rating {
    std::optional<double> printed;
    double scale = 1;               ///< left of it here, ≤ or ≥ 1
    std::string missing;            ///< the figure without which it is not known
    std::vector<std::string> rests_on;
    std::vector<Figure> told;
    bool unsure = false;            ///< only an upper bound of the rating is known
    [[nodiscard]] std::optional<double> here() const { return printed ? std::optional(*printed * scale) : std::nullopt; }
};

/// A rule at one part, at one end of all spreads.
struct Held {
    Rule rule;      ///< with the bound that binds as its only one: of several the binding one, over a temperature its value there
    Rating rating;  ///< of that bound; `missing` where any figure of any bound is not on record
    std::optional<double> limit;
    std::string beyond;  ///< why nothing is permitted: hotter than the last point of a bound over a temperature
};
[[nodiscard]] Held held_to(const Rule& rule, const JudgedPart& part, const PartExposure& seen, const StressValue* stress, End end);

/// Whether a rule names something that it holds its stress to.
[[nodiscard]] bool needs_reference(const Rule& rule);

}  // namespace binwright
