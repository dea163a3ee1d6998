// SPDX-License-Identifier: GPL-3.0-or-later
// What happens once: the input connected hot to an empty converter. The same network as in the steady state, its switch off.
#pragma once
#include "engine/network/steady_state.hpp"

namespace binwright {

/// Where a choke's inductance falls: beyond ±current it counts as its own times (1 − drop), per change of current.
struct Saturation {
    double current;  ///< [A], > 0
    double drop;     ///< fraction, 0 < drop < 1
};

/// The input steps from nothing to `input_voltage` behind the circuit's source; all capacitors empty, all currents zero, no load.
struct HotConnection {
    double input_voltage;  ///< [V], > 0
    std::optional<Saturation> primary, secondary;
};

struct Extreme {
    double highest = 0, lowest = 0;
};

struct ConnectionPeaks {
    Extreme input, coupling, output;        ///< at the capacitors' terminals [V]
    Extreme switch_voltage;                 ///< V_DS [V]
    double reverse_voltage = 0;             ///< of the rectifier [V]
    double source_current = 0, rectifier_current = 0, primary_current = 0, secondary_current = 0;  ///< largest magnitudes [A]
    double source_charge_squared = 0;       ///< ∫ i² dt of the source [A²s]
    double source_energy = 0;               ///< ∫ V·i dt of the source's EMF [J]
    double duration = 0;                    ///< until the ringing has died down [s]
    bool saturated = false;                 ///< a choke went beyond its saturation current
    bool body_diode = false;                ///< V_DS went far enough below zero for the switch's body diode, which is not in the network
};

/// Exact between events: matrix exponentials from one opening or closing of the rectifier, or beginning of saturation, to the next.
/// The source must be an impedance (SourceKind::impedance).
/// @throws OutsideModel where the network has no solution, or does not come to rest in 200 000 steps
[[nodiscard]] ConnectionPeaks connect_hot(const Circuit& circuit, const HotConnection& connection);

/// The same with everything over time, `samples` times evenly over its duration.
[[nodiscard]] Waveforms connection_waveforms(const Circuit& circuit, const HotConnection& connection, int samples = 1000);

}  // namespace binwright
