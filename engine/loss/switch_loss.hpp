// SPDX-License-Identifier: GPL-3.0-or-later
// Loss of a hard-switched N-channel switch over one period, at one junction temperature.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/network/steady_state.hpp"
#include "engine/part/part.hpp"

namespace binwright {

/// A switch as its figures tell it at one end of their spreads. Absent = not on record and not estimated.
struct SwitchModel {
    std::optional<double> resistance;    ///< R_DS(on) of one part at `reference` [Ω]
    double reference = kCelsiusZero + 25;  ///< [K]
    double growth = 0.0054;              ///< of R_DS(on): factor (1 + growth)^(T − reference) [1/K]
    std::optional<double> switching_charge;  ///< Q_gd and the part of Q_gs above threshold [C]
    std::optional<double> plateau;       ///< gate voltage of the plateau [V]
    std::optional<double> gate_charge;   ///< Q_g at the drive voltage [C]
    std::optional<double> output_capacitance, output_capacitance_at;  ///< C_oss [F] at [V]
    double gate_resistance = 0;          ///< R_g inside the part [Ω]
    std::vector<std::string> rests_on;   ///< what was assumed in making the model
    std::vector<std::string> missing;    ///< symbols without which a loss cannot be computed
};

/// R_DS(on)(T) = R25·(1 + a)^(T − 25 °C), the compound law of published application notes on switch losses. With one figure
/// a is that of its kind: ×1.4 … 1.6 … 1.8 at 100 °C and above (common practice for low-voltage trench parts); two figures at different
/// temperatures give it. Of figures at several gate voltages the highest that `drive` [V] reaches counts; where it reaches none, the
/// lowest, and that is said.
[[nodiscard]] SwitchModel switch_model(const Part& part, End end, std::optional<double> drive = {});

struct GateDrive {
    double voltage;     ///< [V]
    double resistance;  ///< of driver and series resistor [Ω]
};

struct SwitchLoss {
    double conduction = 0;  ///< I_rms²·R_DS(on) at the junction temperature [W]
    double overlap = 0;     ///< of voltage and current at both edges [W]
    double output = 0;      ///< energy of the output capacitance, lost at turn-on [W]
    double gate = 0;        ///< Q_g·V·f, from the drive supply, not from the input [W]
    double conduction_slope = 0;  ///< d conduction / d T_j [W/K]
};

/// R_DS(on) of `count` parts in parallel at a junction temperature [Ω]. @throws OutsideModel without a resistance
[[nodiscard]] double on_resistance(const SwitchModel& model, int count, double junction);

/// Gate-charge method (Balogh, Fundamentals of MOSFET and IGBT Gate Driver Circuits): the plateau lasts Q_sw/I_gate, with
/// I_gate = (V_drive − V_plateau)/R at turn-on and V_plateau/R at turn-off; half of V·I over it. Output energy
/// ∫v·C_oss dv with C_oss ~ 1/√v. For `count` parts in parallel driven together through one resistance. Ringing is an
/// allowance of the rulebook, not of this model. Terms whose figures are missing are 0 here and named in the model.
/// @throws OutsideModel when the drive voltage does not exceed the plateau
[[nodiscard]] SwitchLoss switch_loss(const SwitchModel& model, int count, const GateDrive& drive, const SwitchStress& stress,
                                     double frequency, double junction);

}  // namespace binwright
