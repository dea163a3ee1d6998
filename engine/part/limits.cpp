// SPDX-License-Identifier: GPL-3.0-or-later
// Whether a measurement can be of the type it is said to be of: held to what is printed and published of that type.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/part/part.hpp"

namespace binwright {
namespace {

constexpr double kSame = 0.02;       // conditions this near are the same: no bench sets them better (common practice)
constexpr double kSameKelvin = 3;    // likewise, for temperatures
constexpr double kRoom = 273.15 + 25;

/// −1, 0 or 1: below, at or above. What is not stated on either side is the same; on one side it is the usual condition.
int beside(std::optional<double> a, std::optional<double> b, std::optional<double> usual, double relative, double absolute) {
    if (!a) a = usual;
    if (!b) b = usual;
    if (!a || !b) return 0;
    if (std::abs(*a - *b) <= std::max(absolute, relative * std::max(std::abs(*a), std::abs(*b)))) return 0;
    return *a < *b ? -1 : 1;
}

struct Beside {
    int voltage, current, frequency, temperature;
    [[nodiscard]] bool same() const { return voltage == 0 && current == 0 && frequency == 0 && temperature == 0; }
};

Beside beside(const Figure& reading, const Figure& limit) {
    const Conditions& usual = info(limit.symbol).usual;
    return {beside(reading.at.voltage, limit.at.voltage, usual.voltage, kSame, 0), beside(reading.at.current, limit.at.current, usual.current, kSame, 0),
            beside(reading.at.frequency, limit.at.frequency, usual.frequency, kSame, 0),
            beside(reading.at.temperature, limit.at.temperature, usual.temperature ? usual.temperature : std::optional(kRoom), 0, kSameKelvin)};
}

/// Whether a good part would show no more under the conditions of the reading than under those of the limit: what is above the limit
/// there is so much the more above it here.
bool gentler(Symbol symbol, const Beside& at) {
    switch (symbol) {
        case Symbol::R_DSon: return at.voltage >= 0 && at.temperature <= 0;                                            // more drive, cooler
        case Symbol::V_F: return at.current <= 0 && at.temperature == 0;                                               // less current
        case Symbol::I_R: return at.voltage <= 0 && at.temperature <= 0;                                               // less voltage, cooler
        case Symbol::Q_g: return at.voltage <= 0 && at.current == 0 && at.temperature == 0;                            // less drive
        case Symbol::C_oss:
        case Symbol::C_j: return at.voltage >= 0 && at.frequency == 0 && at.temperature == 0;                          // wider depletion layer
        case Symbol::ESR: return at.temperature >= 0 && at.frequency == 0 && at.voltage == 0 && at.current == 0;       // thinner electrolyte
        default: return false;
    }
}

}  // namespace

std::string outside_limits(const Part& part, const Figure& reading) {
    const SymbolInfo& symbol = info(reading.symbol);
    const double lowest = std::min(reading.value.best, reading.value.worst), highest = std::max(reading.value.best, reading.value.worst);
    for (const Figure& limit : part.figures) {
        if (limit.symbol != reading.symbol || limit.known == Known::kind || limit.known == Known::measured || limit.both_legs != reading.both_legs) continue;
        const double low = std::min(limit.value.best, limit.value.worst), high = std::max(limit.value.best, limit.value.worst);
        const bool range = limit.column == Column::none && !limit.value.exact();  // published as lowest … highest
        const bool from = range || limit.column == Column::minimum || (symbol.rating && symbol.better == Better::higher);
        const bool to = range || limit.column == Column::maximum || (symbol.rating && symbol.better == Better::lower);
        const Beside at = beside(reading, limit);
        const bool below = from && (symbol.rating || at.same()) && !(lowest >= low * (1 - 1e-9));
        const bool above = to && (symbol.rating || at.same() || gentler(reading.symbol, at)) && !(highest <= high * (1 + 1e-9));
        if (!below && !above) continue;
        const std::string measured = format_quantity(below ? lowest : highest, symbol.unit), allowed = format_quantity(below ? low : high, symbol.unit);
        if (symbol.rating || at.same()) return fmt::format("{} measured {}, and the type's limit is {}", symbol.name, measured, allowed);
        return fmt::format("{} measured as {}, and the type's limit is {}", symbol.name, format_figure(reading), format_figure(limit));
    }
    return "";
}

}  // namespace binwright
