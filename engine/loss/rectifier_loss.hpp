// SPDX-License-Identifier: GPL-3.0-or-later
// Loss of a rectifier over one period at one junction temperature: forward, reverse, junction charge, recovery.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/network/steady_state.hpp"
#include "engine/part/part.hpp"

namespace binwright {

/// A rectifier as its figures tell it, all legs in use together (currents and leakage of the whole device).
struct RectifierModel {
    int legs = 1;                      ///< conducting in parallel
    std::optional<double> threshold;   ///< V_T0 at `reference` [V]
    double threshold_slope = 0;        ///< dV_T0/dT [V/K], negative
    double resistance = 0;             ///< r_d of all legs together at `reference` [Ω]
    double resistance_slope = 0;       ///< [Ω/K]
    double reference = kCelsiusZero + 25;  ///< [K]
    std::optional<double> leakage;     ///< of all legs together at leakage_temperature and leakage_voltage [A]
    double leakage_temperature = kCelsiusZero + 25;  ///< [K]
    std::optional<double> leakage_voltage;  ///< [V]; absent: taken as constant in voltage
    double leakage_growth = 0.055;     ///< c of I_R ~ exp(c·T) [1/K]
    double leakage_exponent = 0;       ///< of voltage, from two figures at one temperature
    std::optional<double> capacitance, capacitance_at;  ///< C_j of all legs [F] at [V]
    std::optional<double> recovery_charge;  ///< Q_rr of all legs [C]
    bool pn = false;                   ///< known not to be a Schottky
    bool recovers = false;             ///< not known to be a Schottky: recovery counts
    std::vector<std::string> rests_on, missing;
};

/// V_T0 and r_d: the line through figures at one temperature; several temperatures give their slopes. One figure: V_T0 = 70 % of
/// V_F and −1.2 mV/K (Schottky) or 80 % and −2 mV/K (PN), common practice. Leakage: exponential in temperature with the c of
/// two figures, else c = 0.055/K (STMicroelectronics AN869); constant in voltage unless two figures tell. Of several figures
/// the worst end takes the one that foretells most at the hottest of their temperatures, whoever measured or printed it;
/// the other ends believe measurements first.
[[nodiscard]] RectifierModel rectifier_model(const Part& part, int count, End end);

[[nodiscard]] double forward_threshold(const RectifierModel& model, double junction);   ///< V_T0(T) [V], ≥ 0.05
[[nodiscard]] double forward_resistance(const RectifierModel& model, double junction);  ///< r_d(T) [Ω], ≥ 0
[[nodiscard]] double leakage(const RectifierModel& model, double voltage, double junction);  ///< I_R(v, T) [A]

struct RectifierLoss {
    double forward = 0;    ///< V_T0·I_avg + r_d·I_rms² [W]
    double reverse = 0;    ///< period mean of v_R·I_R(v_R, T) [W]
    double junction = 0;   ///< V·Q − E of the junction charge, lost in the switch [W]
    double recovery = 0;   ///< Q_rr·V_R·f of PN kinds [W]
    double slope = 0;      ///< d(forward + reverse)/dT_j [W/K]
    double reverse_slope = 0;  ///< d reverse/dT_j [W/K]
};
[[nodiscard]] RectifierLoss rectifier_loss(const RectifierModel& model, const RectifierStress& stress,
                                           const std::vector<WeightedVoltage>& reverse_profile, double frequency, double junction);

}  // namespace binwright
