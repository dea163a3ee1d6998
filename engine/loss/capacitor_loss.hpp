// SPDX-License-Identifier: GPL-3.0-or-later
// Capacitors: what stands in the circuit, self-heating, ripple rating at the working frequency, life.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/part/part.hpp"

namespace binwright {

enum class CapacitorKind { aluminium, polymer, hybrid, tantalum, tantalum_polymer, ceramic1, ceramic2, film, unknown };
[[nodiscard]] CapacitorKind capacitor_kind(const Part& part);

struct CapacitorModel {
    CapacitorKind kind = CapacitorKind::unknown;
    std::optional<double> capacitance;  ///< of one part at zero bias [F]
    std::optional<double> resistance;   ///< ESR of one part [Ω]
    std::optional<double> ripple;       ///< rated ripple current at the working frequency [A]
    double rated_rise = 5;              ///< ΔT0 at the rated ripple current [K]
    std::optional<double> highest_temperature;  ///< T_max [K]
    std::optional<double> life;         ///< at T_max and rated ripple [s]
    std::optional<double> rated_voltage;
    std::vector<std::string> rests_on, missing;
    double life_rise = 0;               ///< ΔT_L: rise that the rated life already includes [K]; 0 earns no credit for it
    std::optional<double> surface, core_over_case;  ///< of the can [m²]; rise of its core over that of its surface
    bool aged = false;                  ///< computed with end-of-life figures
};

/// What of ageing a model must take on (pulled aluminium without measured C and ESR, at the worst end).
struct Ageing {
    double capacitance = 1, resistance = 1;  ///< factors
};

/// ESR from ESR or tan δ/(2πfC); ripple rating (of several the one nearest in frequency) to the working frequency by the aluminium frequency factors of the trade
/// (120 Hz → 100 kHz: ×1.2 … 1.4 … 1.7); a figure without frequency counts as 120 Hz.
[[nodiscard]] CapacitorModel capacitor_model(const Part& part, double frequency, End end, const Ageing& ageing = {});

/// C at DC bias of a class 2 ceramic as a factor on C: planning figures of the trade (half left at half the rated voltage, a quarter at
/// the rated voltage; best end: nine tenths and six tenths). 1 for every other kind.
[[nodiscard]] double bias_factor(const CapacitorModel& model, double voltage, End end);

/// By how much the ESR of an electrolyte grows below 20 °C, without self-heating: doubling every 35 K, 23 K or 18 K (best, typical,
/// worst) where it is wet, every 60 … 30 K in hybrids, 60 … 40 K in solid tantalum; 1 for other kinds and from 20 °C up. Planning
/// figures: low-ESR series are printed with two to three times the impedance at −10 °C, and up to ten at −40 °C (common practice, no source).
[[nodiscard]] double cold_factor(const CapacitorModel& model, double temperature, End end);

/// Self-heating of a body in still air.
struct SurfaceHeating {
    double current;     ///< [A]
    double resistance;  ///< [Ω]
    double surface;     ///< [m²], > 0
    double transfer;    ///< β [W/(m²·K)], > 0
};
/// Rise of the surface I²·ESR/(β·S) [K] (capacitor makers' life guides). @throws OutsideModel outside the ranges above
[[nodiscard]] double surface_rise(const SurfaceHeating& heating);
/// β of a can by its surface [m²]: 2.3·10⁻³·S^−0.2 W/(cm²·K), S in cm² (a capacitor maker's life guide).
[[nodiscard]] double surface_transfer(double surface);

/// Self-heating at a ripple current of one part [K]: ΔT0·(I/I_R)²; without a ripple rating from ESR and the size of the can,
/// times the makers' ratio of core to case by its diameter. A rating stated below T_max counts as heating up to T_max and
/// ΔT0 above it. Empty where neither can be told.
[[nodiscard]] std::optional<double> ripple_rise(const CapacitorModel& model, double current);

/// Life [s] at a hot-spot temperature: aluminium and hybrid L0·2^((T_max − T_hot)/10), polymer L0·10^((T_max − T_hot)/20), T_hot
/// not below 40 °C, at most 15 years; other kinds have no life rule. The rise that some rated lives already include earns
/// no credit here.
[[nodiscard]] std::optional<double> capacitor_life(const CapacitorModel& model, double hot_spot);

}  // namespace binwright
