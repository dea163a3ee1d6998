// SPDX-License-Identifier: GPL-3.0-or-later
// From a walked period to what flows in every branch: means and RMS values by Romberg quadrature over exact samples,
// halved until it agrees with itself; extremes by quintic Hermite interpolation of value, slope and curvature.
#pragma once
#include <array>
#include <cmath>

#include "engine/network/period.hpp"

namespace binwright {

struct OutputSums {
    int outputs = 0;
    std::array<double, kMostOutputs> mean{}, square{}, highest{}, lowest{};
    double input_power = 0, output_power = 0;
    double highest_forward_on = -HUGE_VAL;  ///< v_D − V_T0 while the switch is on and the rectifier blocks
    double lowest_off_voltage = HUGE_VAL;   ///< V_DS while the switch is off
    double highest_reverse = 0;
};

inline constexpr int kPanels = 16;

/// Romberg weights of 17 (or, on every second point, 9) equidistant samples over a unit interval.
inline const std::array<double, kPanels + 1>& romberg(bool coarse) {
    static const auto make = [](int levels) {
        std::array<double, kPanels + 1> weights{};
        std::array<std::array<double, kPanels + 1>, 5> row{};
        for (int level = 0; level < levels; ++level) {  // trapezium sums of 1, 2, 4 … panels
            const int panels = 1 << level, stride = kPanels / panels;
            for (int k = 0; k <= panels; ++k) row[level][k * stride] = (k == 0 || k == panels ? 0.5 : 1.0) / panels;
        }
        double power = 4;
        for (int order = 1; order < levels; ++order, power *= 4)
            for (int level = levels - 1; level >= order; --level)
                for (int k = 0; k <= kPanels; ++k)
                    row[level][k] = (power * row[level][k] - row[level - 1][k]) / (power - 1);
        weights = row[levels - 1];
        return weights;
    };
    static const auto fine = make(5), rough = make(4);
    return coarse ? rough : fine;
}

template <int N>
class Measure {
  public:
    OutputSums sums;

    Measure(const Period<N>& period, const StateEquations& equations, double emf_value, double threshold, double load_feed_value)
        : period_(period), outputs_(equations.outputs) {
        sums.outputs = outputs_;
        sums.highest.fill(-HUGE_VAL);
        sums.lowest.fill(HUGE_VAL);
        for (int c = 0; c < 4; ++c) {
            if (!equations.configuration[c].possible) continue;
            for (int o = 0; o < outputs_; ++o)
                rows_[c][o] = period.output_row(equations, c, o, emf_value, threshold, load_feed_value);
        }
        threshold_ = threshold;
    }

    /// What counts as nothing: the largest current at any switching instant. Call before the first add.
    void look_at(const typename Period<N>::Piece& piece) {
        const Column<N> end = piece.flow * piece.start;
        for (const int o : kWatched)
            for (const Column<N>* z : {&piece.start, &end}) {
                const double current = dot<N>(rows_[piece.configuration][o].a, *z);
                if (current * current > scale_) scale_ = current * current;
            }
    }

    /// Adds one piece; `profile` collects the reverse voltage with weights.
    void add(const typename Period<N>::Piece& piece, std::vector<WeightedVoltage>& profile) {
        configuration_ = piece.configuration;
        profile_ = &profile;
        stack(piece.start, piece.duration, 0);
    }

    [[nodiscard]] const Column<N>& row(int configuration, int output) const { return rows_[configuration][output]; }

  private:
    static constexpr int kWatched[] = {switch_current, rectifier_current, input_bank_current, coupling_bank_current,
                                       output_bank_current, primary_current};
    static constexpr int kMostLeaves = 20000;  ///< of the halving: a bound on the time of hopelessly fast ringing
    const Period<N>& period_;
    int outputs_, configuration_ = 0, leaves_ = 0;
    double scale_ = 0;
    double threshold_ = 0;
    Column<N> rows_[4][kMostOutputs];
    std::vector<WeightedVoltage>* profile_ = nullptr;
    Column<N> z_[kPanels + 1];
    double y_[kMostOutputs][kPanels + 1];

    void stack(const Column<N>& start, double duration, int depth) {
        if (!(duration > 0)) return;
        Square<N> E;
        exponential(period_.generator[configuration_], duration / kPanels, E);
        z_[0] = start;
        for (int k = 1; k <= kPanels; ++k) z_[k] = E * z_[k - 1];
        for (int o = 0; o < outputs_; ++o)
            for (int k = 0; k <= kPanels; ++k) y_[o][k] = dot<N>(rows_[configuration_][o].a, z_[k]);
        if (depth < 44 && leaves_ < kMostLeaves && !resolved(duration)) {
            const Column<N> middle = z_[kPanels / 2];
            stack(start, 0.5 * duration, depth + 1);
            stack(middle, 0.5 * duration, depth + 1);
            return;
        }
        gather(duration);
    }

    /// Whether both quadratures of every squared current agree, branches of mixed banks included. The finer one is two orders
    /// better: 1e-6 between them leaves it good to some 1e-9.
    [[nodiscard]] bool resolved(double duration) const {
        const auto& fine = romberg(false);
        const auto& coarse = romberg(true);
        double sums[kMostOutputs][2];
        double largest = 0;
        int n = 0;
        const auto integrate = [&](int o) {
            double a = 0, b = 0;
            for (int k = 0; k <= kPanels; ++k) {
                const double square = y_[o][k] * y_[o][k];
                a += fine[k] * square;
                b += coarse[k] * square;
            }
            sums[n][0] = a;
            sums[n++][1] = b;
            largest = std::max(largest, std::abs(a));
        };
        for (const int o : kWatched) integrate(o);
        for (int o = branches; o < outputs_; ++o) integrate(o);
        for (int k = 0; k < n; ++k)
            if (!(std::abs(sums[k][0] - sums[k][1]) <=
                  1e-6 * (std::abs(sums[k][0]) + 1e-4 * largest) + 1e-12 * scale_ / std::max(duration, 1e-12)))
                return false;
        return true;
    }

    void gather(double duration) {
        ++leaves_;
        const auto& weights = romberg(false);
        const bool conducts = configuration_ & 2, on = configuration_ & 1;
        for (int o = 0; o < outputs_; ++o) {
            double mean = 0, square = 0;
            int top = 0, bottom = 0;
            for (int k = 0; k <= kPanels; ++k) {
                mean += weights[k] * y_[o][k];
                square += weights[k] * y_[o][k] * y_[o][k];
                if (y_[o][k] > y_[o][top]) top = k;
                if (y_[o][k] < y_[o][bottom]) bottom = k;
            }
            sums.mean[o] += duration * mean;
            sums.square[o] += duration * square;
            sums.highest[o] = std::max(sums.highest[o], extreme(o, top, duration, 1));
            sums.lowest[o] = std::min(sums.lowest[o], extreme(o, bottom, duration, -1));
        }
        for (int k = 0; k <= kPanels; ++k) {
            sums.input_power += duration * weights[k] * y_[Output::input_voltage][k] * y_[source_current][k];
            sums.output_power += duration * weights[k] * y_[output_voltage][k] * y_[load_current][k];
            const double reverse = conducts ? 0.0 : std::max(0.0, -y_[rectifier_voltage][k]);
            profile_->push_back({duration * weights[k], reverse});
        }
        if (!conducts) {
            int top = 0, bottom = 0;
            for (int k = 0; k <= kPanels; ++k) {
                if (y_[rectifier_voltage][k] > y_[rectifier_voltage][top]) top = k;
                if (y_[rectifier_voltage][k] < y_[rectifier_voltage][bottom]) bottom = k;
            }
            sums.highest_reverse = std::max(sums.highest_reverse, -extreme(rectifier_voltage, bottom, duration, -1));
            if (on)
                sums.highest_forward_on =
                    std::max(sums.highest_forward_on, extreme(rectifier_voltage, top, duration, 1) - threshold_);
        }
        if (!on) {
            int bottom = 0;
            for (int k = 0; k <= kPanels; ++k)
                if (y_[switch_voltage][k] < y_[switch_voltage][bottom]) bottom = k;
            sums.lowest_off_voltage = std::min(sums.lowest_off_voltage, extreme(switch_voltage, bottom, duration, -1));
        }
    }

    /// The extreme near sample k: where the slope changes sign in a panel beside it.
    [[nodiscard]] double extreme(int output, int k, double duration, double sign) const {
        double best = sign * y_[output][k];
        const Generator<N>& gen = period_.generator[configuration_];
        const double h = duration / kPanels;
        const double* row = rows_[configuration_][output].a;
        double slope[2], bend[2];
        const auto derivatives = [&](int at, int which) {
            const Column<N> first = gen.G * z_[at];
            slope[which] = sign * h * dot<N>(row, first);
            bend[which] = sign * h * h * dot<N>(row, gen.G * first);
        };
        for (int panel = std::max(0, k - 1); panel <= std::min(kPanels - 1, k); ++panel) {
            derivatives(panel, 0);
            if (!(slope[0] > 0)) continue;
            derivatives(panel + 1, 1);
            if (!(slope[1] < 0)) continue;
            const double y0 = sign * y_[output][panel], y1 = sign * y_[output][panel + 1];
            // Quintic Hermite on [0, 1].
            const double d = y1 - y0 - slope[0] - 0.5 * bend[0];
            const double e = slope[1] - slope[0] - bend[0];
            const double f = bend[1] - bend[0];
            const double c3 = 10 * d - 4 * e + 0.5 * f, c4 = -15 * d + 7 * e - f, c5 = 6 * d - 3 * e + 0.5 * f;
            const auto speed = [&](double s) {
                return slope[0] + s * (bend[0] + s * (3 * c3 + s * (4 * c4 + s * 5 * c5)));
            };
            double low = 0, high = 1;
            for (int step = 0; step < 50; ++step) {
                const double middle = 0.5 * (low + high);
                (speed(middle) > 0 ? low : high) = middle;
            }
            const double s = 0.5 * (low + high);
            best = std::max(best, y0 + s * (slope[0] + s * (0.5 * bend[0] + s * (c3 + s * (c4 + s * c5)))));
        }
        return sign * best;
    }
};

}  // namespace binwright
