// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/heat/heat.hpp"

#include <fmt/format.h>

#include <Eigen/Eigenvalues>
#include <Eigen/LU>
#include <cmath>

namespace binwright {

double mutual_resistance(const HeatLayout& layout, int i, int j) {
    const HeatSeat& a = layout.seats[i];
    const HeatSeat& b = layout.seats[j];
    double sum = layout.enclosure;
    if (a.sink && b.sink && *a.sink == *b.sink) sum += layout.sinks[*a.sink];
    if (i == j) sum += a.own;
    return sum;
}

HeatResult settle_heat(const HeatLayout& layout, const HeatLaw& law) {
    const int n = static_cast<int>(layout.seats.size());
    const auto sound = [](double r) { return r >= 0 && std::isfinite(r); };
    for (const HeatSeat& seat : layout.seats)
        if (!sound(seat.own)) throw OutsideModel(fmt::format("a thermal resistance is {:.4g} K/W; it must be 0 or more", seat.own));
    for (const double sink : layout.sinks)
        if (!sound(sink)) throw OutsideModel(fmt::format("a heatsink is {:.4g} K/W; it must be 0 or more", sink));
    if (!(layout.ambient > 0 && std::isfinite(layout.ambient)))
        throw OutsideModel(fmt::format("the ambient temperature is {:.4g} K; it must be above 0 K", layout.ambient));
    if (!(std::isfinite(layout.other_power)))
        throw OutsideModel(fmt::format("the other losses are {:.4g} W; they must be finite", layout.other_power));
    if (!sound(layout.enclosure)) throw OutsideModel(fmt::format("the enclosure is {:.4g} K/W; it must be 0 or more", layout.enclosure));

    Eigen::MatrixXd R(n, n);
    for (int i = 0; i < n; ++i)
        for (int j = 0; j < n; ++j) R(i, j) = mutual_resistance(layout, i, j);
    const double base = layout.ambient + layout.enclosure * layout.other_power;
    HeatResult result;
    result.junction.assign(n, base);
    HeatSources sources;
    Eigen::MatrixXd gain = Eigen::MatrixXd::Zero(n, n);
    const auto spectral_radius = [&] {
        for (int i = 0; i < n; ++i)
            for (int j = 0; j < n; ++j) gain(i, j) = R(i, j) * sources.slope[j];
        return n == 0 ? 0.0 : gain.eigenvalues().cwiseAbs().maxCoeff();
    };
    constexpr double kHopeless = 1500;  // K: nothing lives there, the search has run away
    for (int step = 0; step < 200; ++step) {
        sources = law(result.junction);
        result.gain = spectral_radius();
        Eigen::VectorXd residual(n);
        for (int i = 0; i < n; ++i) {
            residual(i) = base - result.junction[i];
            for (int j = 0; j < n; ++j) residual(i) += R(i, j) * sources.power[j];
            if (!std::isfinite(residual(i))) {
                if (step == 0) throw OutsideModel(fmt::format("the loss of part {} of {} is not finite at ambient", i + 1, n));
                return result;
            }
        }
        if (n == 0 || residual.cwiseAbs().maxCoeff() < 1e-9) {
            result.stable = result.gain < 1;
            break;
        }
        // From below, a gain of 1 or more means that no fixed point lies above: it has run away.
        if (!(result.gain < 1)) return result;
        const Eigen::VectorXd rise = (Eigen::MatrixXd::Identity(n, n) - gain).partialPivLu().solve(residual);
        bool hopeless = false;
        for (int i = 0; i < n; ++i) {
            result.junction[i] += rise(i);
            hopeless |= !(result.junction[i] < kHopeless);
        }
        if (hopeless) return result;
        if (rise.cwiseAbs().maxCoeff() < 1e-10) {
            result.stable = true;
            break;
        }
    }
    double total = layout.other_power;
    for (const double power : sources.power) total += power;
    result.air = layout.ambient + layout.enclosure * total;
    return result;
}

std::optional<double> critical_sink(HeatLayout layout, int sink, const HeatLaw& law) {
    const auto stable = [&](double resistance) {
        layout.sinks[sink] = resistance;
        return settle_heat(layout, law).stable;
    };
    if (!stable(0)) return std::nullopt;
    double low = 0, high = 1;
    while (stable(high)) {
        low = high;
        high *= 2;
        if (high > 1e4) return high;
    }
    for (int step = 0; step < 60 && high - low > 1e-9 * high; ++step) {
        const double middle = 0.5 * (low + high);
        (stable(middle) ? low : high) = middle;
    }
    return low;
}

}  // namespace binwright
