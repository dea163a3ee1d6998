// SPDX-License-Identifier: GPL-3.0-or-later
// The engine's answers as JSON: base SI units, temperatures in °C, null where there is no number.
#pragma once
#include <nlohmann/json.hpp>

#include "app/command/session.hpp"

namespace binwright {

[[nodiscard]] Json number(double value);
[[nodiscard]] Json number(const std::optional<double>& value);
/// A value of a unit: kelvin become °C.
[[nodiscard]] Json number(double value, Unit unit);
[[nodiscard]] Json number(const std::optional<double>& value, Unit unit);

[[nodiscard]] Json json_of(const At& at);
/// One solved point. `unregulated`: it was run at a duty, and no output voltage was asked for.
[[nodiscard]] Json json_of(const ElectricalPoint& point, const Topology& topology, bool unregulated);
[[nodiscard]] Json json_of(const Figure& figure);
[[nodiscard]] Json json_of(const Conditions& conditions);
[[nodiscard]] Json json_of(const Finding& finding);
[[nodiscard]] Json json_of(const SeatReport& report);
[[nodiscard]] Json json_of(const Lot& lot);
[[nodiscard]] Json json_of(const Remedy& remedy);

/// A lot of the bin with its type's name and its own label.
[[nodiscard]] Json json_of(const LotRecord& lot, const Part& part);

}  // namespace binwright
