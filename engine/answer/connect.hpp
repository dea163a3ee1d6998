// SPDX-License-Identifier: GPL-3.0-or-later
// The hot connection of a setup: what the input's sudden arrival does to every seat, at one end of all spreads.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/answer/models.hpp"
#include "engine/network/scene.hpp"

namespace binwright {

/// A lead of a metre or two and a battery, where the file gives no [source] (common practice, no source).
inline constexpr double kLeadInductance = 1e-6;   ///< [H]
inline constexpr double kLeadResistance = 30e-3;  ///< [Ω]
inline constexpr double kFerriteDrop = 0.9;       ///< of its inductance per change of current, beyond saturation (common practice, no source)

struct Connected {
    double input_voltage = 0;        ///< the highest [V]
    ConnectionPeaks peaks;           ///< the worst of both ends of the tolerance of inductance
    std::vector<std::string> rests_on;
    std::string not_computed;        ///< why not, instead of peaks
};

/// Empty where the file says that the input is never connected hot (source.switched = false).
[[nodiscard]] std::optional<Connected> connect(const Setup& setup, const Models& models, End end);

/// The circuit and the step behind it, with one factor on each inductance (for waveforms).
[[nodiscard]] std::pair<Circuit, HotConnection> connection_of(const Setup& setup, const Models& models, End end, double first_factor = 1, double second_factor = 1);

}  // namespace binwright
