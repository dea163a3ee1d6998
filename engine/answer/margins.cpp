// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/margins.hpp"

#include <array>
#include <cmath>
#include <functional>

#include "engine/answer/operate.hpp"

namespace binwright {
namespace {

/// The last sound value between one that is and one that is not.
double edge(double sound, double unsound, double width, const std::function<bool(double)>& stable) {
    while (std::abs(unsound - sound) > width) {
        const double middle = 0.5 * (sound + unsound);
        (stable(middle) ? sound : unsound) = middle;
    }
    return sound;
}

}  // namespace

RunawayMargins runaway_margins(const Setup& setup, End end, const Allowances& allowances, const At& at) {
    const auto& winding = setup.converter.winding;
    const double first = winding.primary ? winding.primary->tolerance.value_or(0) : 0;
    const double second = winding.secondary ? winding.secondary->tolerance.value_or(0) : first;
    const Bench bench = bench_of(setup, end, allowances);
    std::array<Solver, 2> solvers;
    constexpr double kWell = 1e-4;
    const auto stable = [&](const Bench& changed, const At& where) {
        for (int k = 0; k < 2; ++k) {
            const double sign = k == 0 ? -1 : 1;
            Bench one = changed;
            one.primary_factor = 1 + sign * first;
            one.secondary_factor = 1 + sign * second;
            if (!operate(one, where, solvers[k], kWell).stable) return false;
            if (first == 0 && second == 0) break;
        }
        return true;
    };

    RunawayMargins margins;
    margins.stable = stable(bench, at);

    constexpr double kFar = 200;  // K
    const auto warmer = [&](double by) {
        At where = at;
        where.ambient += by;
        return stable(bench, where);
    };
    if (margins.stable ? !warmer(kFar) : warmer(-kFar))
        margins.ambient = margins.stable ? edge(0, kFar, 0.05, warmer) : edge(-kFar, 0, 0.05, warmer);

    if (bench.models.rectifier && bench.models.rectifier->leakage) {
        const auto leakier = [&](double decades) {
            Bench changed = bench;
            *changed.models.rectifier->leakage *= std::pow(10, decades);
            return stable(changed, at);
        };
        constexpr double kDecades = 4;
        if (margins.stable ? !leakier(kDecades) : leakier(-kDecades))
            margins.leakage = std::pow(10, margins.stable ? edge(0, kDecades, 0.003, leakier) : edge(-kDecades, 0, 0.003, leakier));
    }

    int index = 0;
    for (const auto& [name, resistance] : setup.converter.heatsinks) {
        const int sink = index++;
        bool used = false;
        for (const HeatSeat& seat : bench.layout.seats) used = used || seat.sink == sink;
        if (!used) continue;
        const auto on = [&](double kelvin_per_watt) {
            Bench changed = bench;
            changed.layout.sinks[sink] = kelvin_per_watt;
            return stable(changed, at);
        };
        constexpr double kWorst = 1000;  // K/W: no heatsink at all
        if (margins.stable) {
            double high = std::max(resistance, 1e-3);
            double low = resistance;
            while (high < kWorst && on(high)) {
                low = high;
                high *= 2;
            }
            if (high < kWorst) margins.sinks[name] = edge(low, high, 0.005 * high, on);
        } else if (on(0)) {
            margins.sinks[name] = edge(0, resistance, 0.005 * resistance, on);
        }
    }
    return margins;
}

}  // namespace binwright
