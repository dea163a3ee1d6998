// SPDX-License-Identifier: GPL-3.0-or-later
// The closed, ripple-free stress formulas of the ideal converters, with a resistive load and a mean-only source.
// Sources: R. W. Erickson, D. Maksimovic, Fundamentals of Power Electronics, ch. 2, 3, 5 (ratios, critical K,
// discontinuous operation); D. W. Hart, Power Electronics, ch. 6-7 (ripples in continuous operation); N. Mohan, T. M.
// Undeland, W. P. Robbins, Power Electronics, ch. 7. Discontinuous RMS values, circulating current and coupling ripple
// of the four-element kinds are derived from their straight-line currents. Limits of large capacitors, never exact.
#pragma once
#include <map>

#include "tests/reference/topologies.hpp"

namespace reference {

struct Ideal {
    Kind kind;
    double vin, duty, load, f;  ///< [V], share, [Ω], [Hz]
    double L1, L2 = 0;          ///< [H]; L2: four-element kinds
    double n = 1;               ///< N_secondary/N_primary, flyback
    double Cin, Cs = 0, Co;     ///< [F]
};

[[nodiscard]] std::map<std::string, double> closed_formulas(const Ideal& converter);
[[nodiscard]] Converter ideal_converter(const Ideal& converter);

}  // namespace reference
