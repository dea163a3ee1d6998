// SPDX-License-Identifier: GPL-3.0-or-later
// The exact periodic steady state of a single-switch converter: what flows in every branch over one switching period.
//
// Switch: a resistance when on, open when off. Rectifier: V_T0 + r_d·i while it conducts, open otherwise; it stops at zero
// current. Between switching instants the network is linear, its flow a matrix exponential; the steady state is the fixed
// point of the period map. Overshoot, overlap, output charge, leakage and core loss are not in here: see engine/loss.
#pragma once
#include <array>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "engine/fault.hpp"
#include "engine/network/topology.hpp"

namespace binwright {

struct CapacitorValues {
    double capacitance;  ///< [F], > 0
    double resistance;   ///< ESR [Ω], ≥ 0
};
struct WindingValues {
    double inductance;      ///< [H], > 0 (transformer: magnetising, primary side)
    double resistance = 0;  ///< [Ω], ≥ 0
};
enum class SourceKind {
    mean,      ///< delivers its mean current only; the input capacitor, of that mean voltage, carries all ripple
    stiff,     ///< ideal voltage at the input terminals: the input capacitor sees no ripple
    impedance  ///< an EMF behind resistance and inductance
};
enum class LoadKind { current, resistance, power };

/// Element values of one converter. Voltages, currents and angles come from the operating point.
struct Circuit {
    const Topology* topology = nullptr;
    SourceKind source = SourceKind::mean;
    double source_resistance = 0;  ///< [Ω], ≥ 0
    double source_inductance = 0;  ///< [H], ≥ 0
    WindingValues primary{};
    WindingValues secondary{};  ///< unused where the topology has none; transformer: only its resistance is used
    double coupling = 0;        ///< k of the two windings, 0 … 0.999; a transformer may have exactly 1 (no leakage)
    double turns_ratio = 1;     ///< N_secondary/N_primary, transformer only
    double switch_resistance = 0;     ///< R_DS(on) [Ω], ≥ 0
    double sense_resistance = 0;      ///< in series with the switch [Ω], ≥ 0
    double rectifier_drop = 0;        ///< V_T0 [V], ≥ 0
    double rectifier_resistance = 0;  ///< r_d [Ω], ≥ 0
    std::vector<CapacitorValues> input;     ///< each kind of a mixed bank is a branch; empty: ideal source at the terminals
    std::vector<CapacitorValues> coupling_capacitor;
    std::vector<CapacitorValues> output;    ///< at least one
    double maximum_duty = 1;      ///< 0 < D ≤ 1
    double minimum_on_time = 0;   ///< [s]
};

struct OperatingPoint {
    double input_voltage;                  ///< [V], > 0: EMF of the source, or mean terminal voltage (SourceKind::mean)
    std::optional<double> output_voltage;  ///< mean terminal voltage wanted [V], magnitude; absent: run at `duty`
    double duty = 0;                       ///< used when output_voltage is absent, 0 < D < 1
    LoadKind load = LoadKind::current;
    double load_value = 0;                 ///< [A], [Ω] or [W]
    double frequency;                      ///< [Hz], 1 kHz … 5 MHz
};

enum class Mode { continuous, discontinuous, idle };
[[nodiscard]] std::string_view to_string(Mode mode);

struct SwitchStress {
    double voltage_peak = 0;      ///< V_DS, the waveform's own extreme [V]
    double current_peak = 0, current_rms = 0, current_average = 0;  ///< [A]
    double current_turn_on = 0;   ///< just after turn-on [A]
    double current_turn_off = 0;  ///< just before turn-off [A]
    double voltage_turn_on = 0;   ///< V_DS just before turn-on [V]
    double voltage_turn_off = 0;  ///< V_DS just after turn-off [V]
};
struct RectifierStress {
    double reverse_voltage_peak = 0;  ///< [V]
    double current_peak = 0, current_rms = 0, current_average = 0;  ///< [A]
    double current_turn_off = 0;      ///< when the switch turns on [A], 0 in discontinuous operation
    double voltage_turn_on = 0;       ///< V_R just after the switch has turned on [V]
};
struct CapacitorStress {
    double voltage_average = 0, voltage_max = 0, voltage_min = 0;  ///< at the terminals, ESR steps included [V]
    double current_rms = 0;                  ///< of the whole bank [A]
    std::vector<double> branch_current_rms;  ///< of each branch of the bank [A]
};
struct WindingStress {
    double current_average = 0, current_rms = 0, current_peak = 0, current_min = 0;  ///< [A]
};
/// A stretch of the period with its length as a share of it, for quadrature of v_R-dependent losses.
struct WeightedVoltage {
    double weight;   ///< share of the period, ≥ 0; all weights sum to 1
    double voltage;  ///< reverse voltage of the rectifier there [V], 0 while it conducts
};
/// One interval of the period between two switching instants.
struct Interval {
    double duration;  ///< [s]
    bool switch_on, rectifier_on;
};

struct SteadyState {
    bool reached = false;      ///< the wanted output voltage is met (always true when run at a duty)
    double highest_output = 0; ///< where not reached: highest mean output voltage any permitted duty gives [V]
    double least_load = 0;     ///< where the shortest on-time delivers too much: least load current that regulates [A]
    double duty = 0;
    Mode mode = Mode::idle;
    double rectifier_fraction = 0;      ///< share of the period in which the rectifier conducts, all intervals
    double input_current_average = 0;   ///< [A]
    double output_voltage_average = 0;  ///< magnitude [V]
    double output_current_average = 0;  ///< [A]
    double output_ripple = 0;           ///< peak to peak at the terminals [V]
    double input_power = 0;             ///< at the converter's input terminals [W]
    double output_power = 0;            ///< [W]
    SwitchStress switch_;
    RectifierStress rectifier;
    CapacitorStress input, coupling, output;
    WindingStress primary, secondary, magnetising;
    double core_current_peak = 0;       ///< peak of i1 + (N2/N1)·i2: what a common core sees [A]
    std::vector<Interval> intervals;    ///< in order, from turn-on
    std::vector<WeightedVoltage> reverse_profile;
    std::vector<std::string> warnings;  ///< sentences: where a state leaves the models
};

/// Solves one operating point.
/// @throws OutsideModel naming the first value out of range, or why the circuit has no periodic steady state
[[nodiscard]] SteadyState solve(const Circuit& circuit, const OperatingPoint& point);

/// All branch currents and voltages over one period, at the switching instants (both sides) and `samples` times between.
struct Waveforms {
    std::vector<std::string> names;            ///< "time", "switch.current", "switch.voltage", "output_capacitor.voltage" …
    std::vector<std::vector<double>> columns;  ///< one a name, SI units
};
[[nodiscard]] Waveforms waveforms(const Circuit& circuit, const OperatingPoint& point, int samples = 200);

/// A solver that keeps the derived network and the last solution: sweeping neighbouring points is faster with one of these.
class Solver {
  public:
    Solver();
    ~Solver();
    Solver(Solver&&) noexcept;
    Solver& operator=(Solver&&) noexcept;
    /// As the free function; the result does not depend on what was solved before (to rounding).
    const SteadyState& solve(const Circuit& circuit, const OperatingPoint& point);

  private:
    struct Inside;
    friend Waveforms waveforms(const Circuit& circuit, const OperatingPoint& point, int samples);
    std::unique_ptr<Inside> inside_;
};

}  // namespace binwright
