// SPDX-License-Identifier: GPL-3.0-or-later
// Values that can be had: usual ratings of the trade, and the preferred numbers of IEC 60063 where there is no other series.
#include <algorithm>
#include <cmath>
#include <span>

#include "engine/answer/judge_part.hpp"

namespace binwright {
namespace {

// Common practice, no source: what drawers and catalogues of small power parts hold.
constexpr double kCapacitorVolts[] = {2.5, 4, 6.3, 10, 16, 20, 25, 35, 50, 63, 80, 100, 160, 200, 250, 400, 450};
constexpr double kSwitchVolts[] = {20, 25, 30, 40, 55, 60, 75, 80, 100, 150, 200, 250, 400, 500, 600};
constexpr double kRectifierVolts[] = {20, 30, 40, 45, 60, 80, 100, 150, 200, 300, 400, 600};
constexpr double kGateVolts[] = {8, 10, 12, 16, 20, 30};
constexpr double kJunction[] = {125 + kCelsiusZero, 150 + kCelsiusZero, 175 + kCelsiusZero};
constexpr double kBody[] = {85 + kCelsiusZero, 105 + kCelsiusZero, 125 + kCelsiusZero, 135 + kCelsiusZero, 150 + kCelsiusZero};
constexpr double kHours[] = {1000, 2000, 3000, 5000, 7000, 10000};

// IEC 60063, E12.
constexpr double kE12[] = {1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2};

std::optional<double> next_of(std::span<const double> series, double at_least, double scale = 1) {
    for (const double value : series)
        if (value * scale >= at_least * (1 - 1e-9)) return value * scale;
    return std::nullopt;
}

}  // namespace

std::optional<double> usual_value(Symbol rating, double at_least) {
    if (!std::isfinite(at_least) || !(at_least > 0)) return std::nullopt;
    switch (rating) {
        case Symbol::U_R: return next_of(kCapacitorVolts, at_least);
        case Symbol::V_DSS: return next_of(kSwitchVolts, at_least);
        case Symbol::V_RRM: return next_of(kRectifierVolts, at_least);
        case Symbol::V_GSS: return next_of(kGateVolts, at_least);
        case Symbol::T_jmax: return next_of(kJunction, at_least);
        case Symbol::T_max: return next_of(kBody, at_least);
        case Symbol::life: return next_of(kHours, at_least, 3600);
        default: break;
    }
    const double decade = std::pow(10.0, std::floor(std::log10(at_least) + 1e-12));
    if (const auto value = next_of(kE12, at_least / decade)) return *value * decade;
    return 10 * decade;
}

double rounded_down(double value, int digits) {
    if (value == 0 || !std::isfinite(value)) return value;
    const double scale = std::pow(10.0, digits - 1 - static_cast<int>(std::floor(std::log10(std::abs(value)))));
    return std::floor(value * scale + 1e-6) / scale;
}

double rounded_up(double value, int digits) {
    if (value == 0 || !std::isfinite(value)) return value;
    const double scale = std::pow(10.0, digits - 1 - static_cast<int>(std::floor(std::log10(std::abs(value)))));
    return std::ceil(value * scale - 1e-6) / scale;
}

std::optional<double> bound_between(double harmless, double harmful, const HoldsAt& holds, const At* point) {
    if (!(harmless > 0) || !(harmful > 0)) return std::nullopt;
    const auto bisect = [&](double good, double bad, const At* only) -> std::optional<double> {
        double a = std::log(good), b = std::log(bad);
        while (std::abs(b - a) > 0.005) {
            const double middle = 0.5 * (a + b);
            const auto answer = holds(std::exp(middle), only);
            if (!answer) return std::nullopt;
            (*answer ? a : b) = middle;
        }
        return std::exp(a);
    };
    double bad = harmful;
    if (point != nullptr && holds(harmless, point) == std::optional(true) && holds(harmful, point) == std::optional(false)) {
        const auto found = bisect(harmless, harmful, point);
        if (found && holds(*found, nullptr) == std::optional(true)) return found;
        if (found) bad = *found;
    } else if (point != nullptr && holds(harmless, point) == std::optional(false)) {
        return std::nullopt;
    }
    if (holds(harmless, nullptr) != std::optional(true)) return std::nullopt;
    if (bad == harmful && holds(harmful, nullptr) != std::optional(false)) return std::nullopt;
    return bisect(harmless, bad, nullptr);
}

}  // namespace binwright
