// SPDX-License-Identifier: GPL-3.0-or-later
// Getting figures out of parts for the models, and the one law of junction capacitances.
#pragma once
#include <cmath>
#include <optional>
#include <vector>

#include "engine/part/part.hpp"

namespace binwright {

[[nodiscard]] inline std::vector<const Figure*> figures_of(const Part& part, Symbol symbol) {
    std::vector<const Figure*> found;
    for (const Figure& figure : part.figures)
        if (figure.symbol == symbol) found.push_back(&figure);
    return found;
}

/// First figure of a symbol at one end of its spread.
[[nodiscard]] inline std::optional<double> end_value(const Part& part, Symbol symbol, End end) {
    for (const Figure& figure : part.figures)
        if (figure.symbol == symbol) return at_end(figure.value, end);
    return std::nullopt;
}

/// The temperature of a figure [K], or what is usual for its symbol, or `otherwise`.
[[nodiscard]] inline double temperature_of(const Figure& figure, double otherwise) {
    if (figure.at.temperature) return *figure.at.temperature;
    return info(figure.symbol).usual.temperature.value_or(otherwise);
}

/// ∫v·C dv from 0 to V [J] for C(v) = C_s·√(V_s/v): the square-root law of an abrupt junction.
[[nodiscard]] inline double capacitance_energy(double capacitance, double at, double voltage) {
    return voltage > 0 ? 2.0 / 3.0 * capacitance * std::sqrt(at) * voltage * std::sqrt(voltage) : 0.0;
}
/// ∫C dv from 0 to V [C] by the same law.
[[nodiscard]] inline double capacitance_charge(double capacitance, double at, double voltage) {
    return voltage > 0 ? 2 * capacitance * std::sqrt(at * voltage) : 0.0;
}

}  // namespace binwright
