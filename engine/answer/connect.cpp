// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/connect.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace binwright {
namespace {

bool no_impedance(const Converter& converter) {
    return !converter.source || (converter.source->resistance == 0 && converter.source->inductance == 0);
}

std::optional<Saturation> saturation_of(const std::optional<WindingConfig>& winding) {
    if (!winding || !winding->saturation_current || !(*winding->saturation_current > 0)) return std::nullopt;
    // The drop is that of the inductance at the rated current; a powder core goes on so, a ferrite then all but stops.
    const double drop = winding->core == "powder" ? winding->saturation_drop.value_or(0.3) : std::max(kFerriteDrop, winding->saturation_drop.value_or(0));
    if (!(drop > 0)) return std::nullopt;
    return Saturation{*winding->saturation_current, drop};
}

void widen(Extreme& all, const Extreme& one) {
    all.highest = std::max(all.highest, one.highest);
    all.lowest = std::min(all.lowest, one.lowest);
}

void merge(ConnectionPeaks& all, const ConnectionPeaks& one) {
    widen(all.input, one.input);
    widen(all.coupling, one.coupling);
    widen(all.output, one.output);
    widen(all.switch_voltage, one.switch_voltage);
    for (double ConnectionPeaks::* value : {&ConnectionPeaks::reverse_voltage, &ConnectionPeaks::source_current, &ConnectionPeaks::rectifier_current,
                                            &ConnectionPeaks::primary_current, &ConnectionPeaks::secondary_current, &ConnectionPeaks::source_charge_squared,
                                            &ConnectionPeaks::source_energy, &ConnectionPeaks::duration})
        all.*value = std::max(all.*value, one.*value);
    all.saturated |= one.saturated;
    all.body_diode |= one.body_diode;
}

}  // namespace

std::pair<Circuit, HotConnection> connection_of(const Setup& setup, const Models& models, End end, double first_factor, double second_factor) {
    const Converter& converter = setup.converter;
    At at = typical_point(converter);
    at.input_voltage = converter.operating.input_voltage.highest;
    Circuit circuit = circuit_of(setup, models, end, at);
    if (no_impedance(converter)) {
        circuit.source_resistance = kLeadResistance;
        circuit.source_inductance = kLeadInductance;
    }
    circuit.source = SourceKind::impedance;
    circuit.primary.inductance *= first_factor;
    HotConnection connection{at.input_voltage, saturation_of(converter.winding.primary), {}};
    if (!circuit.topology->transformer) {
        circuit.secondary.inductance *= second_factor;
        connection.secondary = saturation_of(converter.winding.secondary ? converter.winding.secondary : converter.winding.primary);
    }
    return {circuit, connection};
}

std::optional<Connected> connect(const Setup& setup, const Models& models, End end) {
    const Converter& converter = setup.converter;
    if (converter.source && !converter.source->switched) return std::nullopt;
    Connected out;
    out.input_voltage = converter.operating.input_voltage.highest;
    if (no_impedance(converter))
        out.rests_on.push_back(fmt::format("connected hot through {} and {}: the file gives no source", format_quantity(kLeadResistance, Unit::ohm),
                                           format_quantity(kLeadInductance, Unit::henry)));
    const auto& winding = converter.winding;
    const double first = winding.primary ? winding.primary->tolerance.value_or(0) : 0;
    const double second = winding.secondary ? winding.secondary->tolerance.value_or(0) : first;
    try {
        for (const double sign : {-1.0, 1.0}) {
            const auto [circuit, connection] = connection_of(setup, models, end, 1 + sign * first, 1 + sign * second);
            merge(out.peaks, connect_hot(circuit, connection));
            if (first == 0 && second == 0) break;
        }
    } catch (const OutsideModel& error) {
        out.not_computed = error.what();
    }
    if (out.peaks.body_diode) out.rests_on.push_back("connected hot, V_DS rings below zero: the switch's body diode is not in the network");
    return out;
}

}  // namespace binwright
