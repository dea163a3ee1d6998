// SPDX-License-Identifier: GPL-3.0-or-later
// The same converter as the engine's circuit and operating point, and its answer as the same list of figures.
#pragma once
#include <algorithm>
#include <cmath>
#include <iomanip>
#include <map>
#include <sstream>
#include <string>
#include <vector>

#include "engine/network/steady_state.hpp"
#include "tests/reference/time_domain.hpp"

namespace reference {

inline const char* topology_name(Kind kind) {
    static const char* const names[] = {"buck", "boost", "inverting", "sepic", "cuk", "zeta", "flyback"};
    return names[static_cast<int>(kind)];
}

inline binwright::Circuit circuit_of(const Converter& c) {
    binwright::Circuit circuit;
    circuit.topology = binwright::find_topology(topology_name(c.kind));
    circuit.source = c.feed == Feed::mean    ? binwright::SourceKind::mean
                     : c.feed == Feed::stiff ? binwright::SourceKind::stiff
                                             : binwright::SourceKind::impedance;
    circuit.source_resistance = c.source_R;
    circuit.source_inductance = c.source_L;
    circuit.primary = {c.L1, c.R1};
    circuit.secondary = {c.kind == Kind::flyback ? c.L1 * c.n * c.n : c.L2, c.R2};
    circuit.coupling = c.k;
    circuit.turns_ratio = c.n;
    circuit.switch_resistance = c.r_switch;
    circuit.sense_resistance = c.r_sense;
    circuit.rectifier_drop = c.vt0;
    circuit.rectifier_resistance = c.rd;
    for (const auto& branch : c.cin) circuit.input.push_back({branch.C, branch.r});
    for (const auto& branch : c.cs) circuit.coupling_capacitor.push_back({branch.C, branch.r});
    for (const auto& branch : c.co) circuit.output.push_back({branch.C, branch.r});
    return circuit;
}

inline binwright::OperatingPoint point_of(const Converter& c) {
    binwright::OperatingPoint point{};
    point.input_voltage = c.vin;
    point.output_voltage = c.vout;
    point.duty = c.duty;
    point.load = static_cast<binwright::LoadKind>(c.load);
    point.load_value = c.load_value;
    point.frequency = c.f;
    return point;
}

inline std::map<std::string, double> figures_of(const binwright::SteadyState& s) {
    std::map<std::string, double> f{
        {"duty", s.duty},
        {"rectifier_fraction", s.rectifier_fraction},
        {"input_current_average", s.input_current_average},
        {"output_voltage_average", s.output_voltage_average},
        {"output_current_average", s.output_current_average},
        {"output_ripple", s.output_ripple},
        {"input_power", s.input_power},
        {"output_power", s.output_power},
        {"switch.voltage_peak", s.switch_.voltage_peak},
        {"switch.current_peak", s.switch_.current_peak},
        {"switch.current_rms", s.switch_.current_rms},
        {"switch.current_average", s.switch_.current_average},
        {"switch.current_turn_on", s.switch_.current_turn_on},
        {"switch.current_turn_off", s.switch_.current_turn_off},
        {"switch.voltage_turn_on", s.switch_.voltage_turn_on},
        {"switch.voltage_turn_off", s.switch_.voltage_turn_off},
        {"rectifier.reverse_voltage_peak", s.rectifier.reverse_voltage_peak},
        {"rectifier.current_peak", s.rectifier.current_peak},
        {"rectifier.current_rms", s.rectifier.current_rms},
        {"rectifier.current_average", s.rectifier.current_average},
        {"rectifier.current_turn_off", s.rectifier.current_turn_off},
        {"rectifier.voltage_turn_on", s.rectifier.voltage_turn_on},
    };
    const auto bank = [&f](const std::string& name, const binwright::CapacitorStress& c) {
        f[name + ".voltage_average"] = c.voltage_average;
        f[name + ".voltage_max"] = c.voltage_max;
        f[name + ".voltage_min"] = c.voltage_min;
        f[name + ".current_rms"] = c.current_rms;
        for (size_t k = 0; k < c.branch_current_rms.size(); ++k)
            f[name + ".branch_current_rms[" + std::to_string(k) + "]"] = c.branch_current_rms[k];
    };
    bank("input_capacitor", s.input);
    bank("coupling_capacitor", s.coupling);
    bank("output_capacitor", s.output);
    const auto winding = [&f](const std::string& name, const binwright::WindingStress& w) {
        f[name + ".current_average"] = w.current_average;
        f[name + ".current_rms"] = w.current_rms;
        f[name + ".current_peak"] = w.current_peak;
        f[name + ".current_min"] = w.current_min;
    };
    winding("primary", s.primary);
    winding("secondary", s.secondary);
    winding("magnetising", s.magnetising);
    return f;
}

/// The figures that differ, one a line; empty when all agree. A difference counts relative to the larger of the figure
/// itself and 1 % of the largest of its kind.
inline std::string differences(const Solution& expected, const binwright::SteadyState& state, double tolerance) {
    std::ostringstream off;
    off << std::setprecision(12);
    if (std::string(binwright::to_string(state.mode)) != expected.mode)
        off << "\n  mode: engine " << binwright::to_string(state.mode) << ", in time " << expected.mode;
    std::map<char, double> largest;
    for (const auto& figure : expected.figures)
        largest[figure.kind] = std::max(largest[figure.kind], std::abs(figure.value));
    const auto got = figures_of(state);
    for (const auto& figure : expected.figures) {
        const auto found = got.find(figure.name);
        const double value = found == got.end() ? NAN : found->second;
        const double error = (value - figure.value) / std::max(std::abs(figure.value), 0.01 * largest[figure.kind]);
        if (!(std::abs(error) <= tolerance))
            off << "\n  " << figure.name << ": engine " << value << ", in time " << figure.value << ", error " << error;
    }
    return off.str();
}

}  // namespace reference
