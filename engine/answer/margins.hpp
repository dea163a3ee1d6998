// SPDX-License-Identifier: GPL-3.0-or-later
// How far a setup is from thermal runaway: in kelvin of ambient, as a factor on leakage, and by its heatsinks.
#pragma once
#include <map>
#include <optional>
#include <string>

#include "engine/answer/exposure.hpp"

namespace binwright {

/// Each found by solving network and heat again, not by extrapolation; accurate to about 1 %. Told for the point asked.
struct RunawayMargins {
    bool stable = false;                  ///< as it stands
    std::optional<double> ambient;        ///< the ambient may rise by this [K] (below 0: must fall), within ±200 K; empty: farther off
    std::optional<double> leakage;        ///< the rectifier's leakage may grow by this factor (below 1: must shrink), 10^-4 … 10^4; empty: farther off
    std::map<std::string, double> sinks;  ///< by name: the largest resistance that is stable [K/W]; one that even 0 K/W leaves unstable, or 1000 K/W stable, is missing
};

/// At the worse end of the tolerance of inductance. @throws as expose
[[nodiscard]] RunawayMargins runaway_margins(const Setup& setup, End end, const Allowances& allowances, const At& at);

}  // namespace binwright
