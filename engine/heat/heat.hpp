// SPDX-License-Identifier: GPL-3.0-or-later
// Heat of parts that share sinks and an enclosure: junction temperatures at given losses, and whether losses that grow with
// temperature leave a stable one.
#pragma once
#include <array>
#include <functional>
#include <optional>
#include <vector>

#include "engine/fault.hpp"

namespace binwright {

/// One heated part. Its junction stands above its sink (or the air) by its own resistance.
struct HeatSeat {
    double own = 0;                    ///< junction to sink, or junction to air where there is no sink [K/W], ≥ 0
    std::optional<int> sink;           ///< index into HeatLayout::sinks
};
struct HeatLayout {
    double ambient = 0;                ///< [K]
    double enclosure = 0;              ///< inner air to ambient [K/W]; 0 = open air
    std::vector<double> sinks;         ///< to the inner air [K/W]
    std::vector<HeatSeat> seats;
    double other_power = 0;            ///< of everything else inside the enclosure [W]
};

/// R_th,ij: kelvin of part i per watt of part j.
[[nodiscard]] double mutual_resistance(const HeatLayout& layout, int i, int j);

/// Loss of each part and its slope at junction temperatures.
struct HeatSources {
    std::vector<double> power;  ///< [W]
    std::vector<double> slope;  ///< dP_j/dT_j [W/K]
};
using HeatLaw = std::function<HeatSources(const std::vector<double>& junction)>;

struct HeatResult {
    std::vector<double> junction;  ///< [K]; where unstable, where the search gave up
    double air = 0;                ///< inside [K]
    bool stable = false;           ///< a fixed point exists above ambient and its gain is below 1
    double gain = 0;               ///< spectral radius of [R_th,ij·dP_j/dT_j] there
};

/// The fixed point reached from ambient upward: Newton from below, which on losses convex in temperature never passes it.
/// @throws OutsideModel on negative resistances, an ambient not above 0 K, or losses that are not finite at ambient
[[nodiscard]] HeatResult settle_heat(const HeatLayout& layout, const HeatLaw& law);

/// Largest resistance of one sink with which the parts are stable [K/W]; empty when not even an ideal one helps.
[[nodiscard]] std::optional<double> critical_sink(HeatLayout layout, int sink, const HeatLaw& law);

}  // namespace binwright
