// SPDX-License-Identifier: GPL-3.0-or-later
// Numbers that stand side by side in a sentence: one prefix, one number of decimals, and as many of them as matter.
#pragma once
#include <initializer_list>
#include <string>
#include <string_view>
#include <vector>

#include "engine/quantity/quantity.hpp"

namespace binwright {

struct Shown {
    Unit unit = Unit::none;
    double factor = 1;   ///< of the shown unit in base units
    std::string symbol;  ///< "mV", "°C", "h"
    int decimals = 0;    ///< negative: rounded to tens, hundreds

    [[nodiscard]] double round(double value) const;              ///< to what is shown, in shown units
    [[nodiscard]] std::string operator()(double value) const;    ///< "18.1 V"; a temperature in °C
    [[nodiscard]] std::string difference(double value) const;    ///< "2.1 V", "13 K", "1 mV"; of the magnitude
};

/// For a stress beside its limit: so that their difference shows, and what is shown adds up.
[[nodiscard]] Shown shown_for(double stress, double limit, Unit unit);
/// For one value: three digits.
[[nodiscard]] Shown shown_for(double value, Unit unit);

/// "a 20 V part", "an 8 V part", "an ESR", "a V_F".
[[nodiscard]] std::string with_article(const std::string& text);

/// "a, b and c"
[[nodiscard]] std::string joined(const std::vector<std::string>& pieces, std::string_view last = " and ");

}  // namespace binwright
