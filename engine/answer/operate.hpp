// SPDX-License-Identifier: GPL-3.0-or-later
// One operating point of a setup with everything in it: network, losses returned to it, heat.
#pragma once
#include <functional>
#include <string>
#include <vector>

#include "engine/answer/beside.hpp"
#include "engine/answer/connect.hpp"
#include "engine/answer/exposure.hpp"
#include "engine/answer/models.hpp"
#include "engine/heat/heat.hpp"

namespace binwright {

/// A setup made ready for many points at one end of all spreads.
struct Bench {
    const Setup* setup = nullptr;
    End end = End::typical;
    Allowances allowances;
    Models models;
    double primary_factor = 1, secondary_factor = 1;  ///< of inductance, for tolerances
    std::optional<double> coupling;                   ///< instead of the middle of its range
    bool drives_plateau = true;           ///< false: the drive does not lift the gate above its plateau, overlap cannot be computed
    HeatLayout layout;                    ///< seats: those of `heated`, ambient of the point
    std::vector<Seat> heated;             ///< switch, rectifier: whose junction temperature can be computed
    std::optional<Connected> connected;   ///< the input connected hot
    std::vector<Beside> beside;           ///< what else the file names
    std::vector<std::string> assumptions, not_included;
    std::vector<std::pair<Seat, std::string>> no_heat;  ///< seats without a junction temperature, and what is missing
};
[[nodiscard]] Bench bench_of(const Setup& setup, End end, const Allowances& allowances);

struct Operated {
    SteadyState state;
    Circuit circuit;               ///< with the returned resistances
    std::vector<Loss> losses;      ///< sums to P_in − P_out
    double gate_power = 0;         ///< from the drive supply [W]
    HeatResult heat;
    double air = 0;                ///< inside the enclosure [K]
    bool stable = true;
    [[nodiscard]] std::optional<double> junction(const Bench& bench, Seat seat) const;
    [[nodiscard]] double seat_power(Seat seat) const;  ///< sum of its losses [W]
};

/// Network and heat solved together: losses that the network does not contain (overlap, output and junction charge,
/// leakage, core) are series resistances P/I_rms² in it, until nothing changes; what a branch of
/// little current could take up only with a drop that bends the waveforms is drawn from the input beside the network. A loss
/// that has run away is not returned.
/// `nothing`: the largest change that counts as none, of losses as a share of the input power and of temperatures by 300 K.
[[nodiscard]] Operated operate(const Bench& bench, const At& at, Solver& solver, double nothing = 1e-6);

}  // namespace binwright
