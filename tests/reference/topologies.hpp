// SPDX-License-Identifier: GPL-3.0-or-later
// What one converter's own equations give at one instant: every current and voltage, and how fast the states change.
#pragma once
#include <array>

#include "tests/reference/time_domain.hpp"

namespace reference {

enum class Position { on, commutating, conducting, idle };  ///< commutating: switch on, the rectifier still conducts

inline constexpr int kMostBranches = 4;

/// Everything that can be read with a probe. Directions: mean current of windings, switch and rectifier; capacitor
/// currents into the terminal that is positive on average.
struct Wave {
    double v_ds = 0, i_switch = 0;
    double v_r = 0, i_rectifier = 0;  ///< v_r: reverse voltage, cathode to anode
    double v_in = 0, i_source = 0, i_cin = 0;
    double v_cs = 0, i_cs = 0;
    double v_out = 0, i_co = 0, i_load = 0;
    double i1 = 0, i2 = 0;
    std::array<double, kMostBranches> cin{}, cs{}, co{};  ///< branch currents
};

/// States: 0 winding 1 (flyback with coupling 1: magnetising current, primary side), 1 winding 2, 2 source inductance,
/// then the capacitors of the input, coupling and output banks.
struct States {
    int cin = 3, cs = 3, co = 3, count = 3;
    explicit States(const Converter& c)
        : cs(cin + static_cast<int>(c.cin.size())),
          co(cs + static_cast<int>(c.cs.size())),
          count(co + static_cast<int>(c.co.size())) {}
};

/// Constant currents that belong to the periodic state, not to the circuit.
struct Constants {
    double source_current = 0;  ///< Feed::mean
    double load_current = 0;    ///< LoadKind::current and power
};

/// @param dx  rates of all states [A/s], [V/s]
void probe(const Converter& c, const States& s, const Constants& u, Position position, const double* x, double* dx,
           Wave& w);

/// What the turn-off of the switch does to the states at once: only leakage does anything.
/// @returns the energy lost in it [J]
double turn_off(const Converter& c, double* x);

/// What the stop of the rectifier leaves: winding currents that are exactly zero, or exactly opposite.
void stop_rectifier(const Converter& c, double* x);

[[nodiscard]] inline bool four_elements(Kind kind) {
    return kind == Kind::sepic || kind == Kind::cuk || kind == Kind::zeta;
}

}  // namespace reference
