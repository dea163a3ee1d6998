// SPDX-License-Identifier: GPL-3.0-or-later
// What is wanted in a seat, in words short enough for a slip of paper.
#pragma once
#include <string>

#include "engine/answer/wanted.hpp"

namespace binwright {

/// "42.7 V or more (45 V can be had)", "650 mV or less at 10 A, 25 °C": rounded to the safe side.
[[nodiscard]] std::string wanted_text(const WantedLine& line);

/// "D1: a schottky rectifier, V_RRM 42.7 V or more, V_F 650 mV or less at 10 A, 25 °C …"
[[nodiscard]] std::string wanted_line(const Wanted& wanted);

}  // namespace binwright
