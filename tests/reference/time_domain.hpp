// SPDX-License-Identifier: GPL-3.0-or-later
// The seven converters by integration in time: an independent reference for the engine's steady state.
//
// Nothing of the engine is used here. Every topology has its own equations, written by hand from its circuit for every
// position of switch and rectifier (topologies.cpp); GSL integrates them (Prince-Dormand 8(9) with error control),
// finds the instant at which the rectifier stops or starts, the periodic state (Newton on the state at turn-on) and the
// duty.
#pragma once
#include <optional>
#include <string>
#include <vector>

namespace reference {

enum class Kind { buck, boost, inverting, sepic, cuk, zeta, flyback };
enum class Feed { mean, stiff, impedance };  ///< mean: a constant current such that the mean terminal voltage is V_in
enum class LoadKind { current, resistance, power };  ///< power: the constant current P/(mean output voltage)

struct Capacitor {
    double C;  ///< [F]
    double r;  ///< ESR [Ω]; at most one branch of a bank may have none
};

struct Converter {
    std::string name;
    Kind kind = Kind::buck;
    Feed feed = Feed::mean;
    double source_R = 0, source_L = 0;  ///< [Ω], [H], Feed::impedance only
    double vin = 0;                     ///< mean terminal voltage (Feed::mean) or EMF [V]
    std::optional<double> vout;         ///< wanted mean output terminal voltage [V]; absent: run at `duty`
    double duty = 0;
    LoadKind load = LoadKind::current;
    double load_value = 0;  ///< [A], [Ω] or [W]
    double f = 0;           ///< [Hz]
    double L1 = 0,
           R1 = 0;  ///< [H], [Ω]: the only winding, the input side (zeta: at the switch), or the magnetising inductance
    double L2 = 0, R2 = 0;                              ///< second winding; flyback: L2 is L1·n²
    double k = 0;                                       ///< coupling; flyback: 1 or less
    double n = 1;                                       ///< N_secondary/N_primary, flyback
    double r_switch = 0, r_sense = 0, vt0 = 0, rd = 0;  ///< [Ω], [Ω], [V], [Ω]
    std::vector<Capacitor> cin, cs, co;
};

/// One figure with the kind of quantity it is: V, A, W, or 1 for shares.
struct Figure {
    std::string name;  ///< "switch.voltage_peak" …
    char kind;
    double value;
};

struct Solution {
    double duty = 0;
    std::string mode;     ///< "continuous" or "discontinuous"
    int conductions = 0;  ///< how often the rectifier starts to conduct in one period
    std::vector<Figure> figures;
    double balance = 0;  ///< (input − output − Σ I²R − V_T0·I_avg)/input power; leakage energy of a flyback included
    [[nodiscard]] double operator[](const std::string& name) const;  ///< @throws std::out_of_range
};

/// @param tolerance  relative, of one integration step
/// @throws std::runtime_error where no periodic state is found
[[nodiscard]] Solution integrate(const Converter& converter, double tolerance = 1e-13);

/// Plain integration, without shooting and with the duty already known: from the ripple-free guess, period after
/// period, until no state moves by more than `accuracy` (relative to the largest) in a period. A mean-only source is
/// taken as stiff, since constant current in and out at a fixed duty never settles.
/// @returns the number of periods run, at most `most`
int settle(const Converter& converter, const Solution& known, double accuracy, int most = 100000);

/// All inputs in one line, for failure messages.
[[nodiscard]] std::string describe(const Converter& converter);

/// The cases of tests/reference/cases.csv.
[[nodiscard]] std::vector<Converter> read_cases(const std::string& path);

}  // namespace reference
