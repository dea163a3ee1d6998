// SPDX-License-Identifier: GPL-3.0-or-later
// One switching period of a network: walking through it from a state at turn-on, with the rectifier's own switching
// instants found as roots, and the state that returns to itself.
//
// Time is in units of the period. The vector z holds the scaled states, the constant 1, the source's current where it
// delivers its mean only, and running means of the output and input terminal voltages: all flows are linear in z.
#pragma once
#include <boost/math/tools/toms748_solve.hpp>
#include <optional>
#include <string>
#include <vector>

#include "engine/network/equations.hpp"
#include "engine/network/flow.hpp"

namespace binwright {

inline constexpr int kMostPieces = 20;

template <int N>
class Period {
  public:
    struct Piece {
        int configuration;
        double duration;
        Column<N> start;  ///< z on entry, after any forcing
        Square<N> flow;
    };

    int states = 0, size = 0, one = 0, feed = -1, output_mean = 0, input_mean = -1;
    double input_voltage = 0;
    Generator<N> generator[4];
    Square<N> force[4];          ///< K x = 0 enforced on entry
    bool constrained[4] = {};
    double constraint[4][N] = {};  ///< first row of K
    Column<N> rectifier_row[4];    ///< i_D where it conducts; v_D − V_T0 where it blocks
    bool commutates = false;       ///< with the switch on, windings can still force current through the rectifier

    /// @param feed_input  affine inputs; source_feed is unknown where mean_feed
    void build(const StateEquations& equations, double period, double emf_value, double threshold, double load_feed_value,
               bool mean_feed) {
        states = equations.states;
        one = states;
        size = states + 1;
        feed = mean_feed ? size++ : -1;
        output_mean = size++;
        input_mean = mean_feed ? size++ : -1;
        input_voltage = emf_value;
        commutates = equations.configuration[3].possible;
        for (int c = 0; c < 4; ++c) {
            const Configuration& from = equations.configuration[c];
            if (!from.possible) continue;
            Square<N>& G = generator[c].G;
            G = {};
            force[c] = Square<N>::identity();
            generator[c].norm = 0;
            for (int i = 0; i < states; ++i) {
                const double wi = equations.weight[i];
                double sum = 0;
                for (int j = 0; j < states; ++j) {
                    G[i][j] = period * wi * from.A(i, j) / equations.weight[j];
                    force[c][i][j] = wi * from.P(i, j) / equations.weight[j];
                    sum += std::abs(G[i][j]);
                }
                generator[c].norm = std::max(generator[c].norm, sum);
                G[i][one] = period * wi * (from.B(i, emf) * emf_value + from.B(i, rectifier_threshold) * threshold +
                                           from.B(i, load_feed) * load_feed_value);
                if (mean_feed) G[i][feed] = period * wi * from.B(i, source_feed);
            }
            Column<N> row = output_row(equations, c, output_voltage, emf_value, threshold, load_feed_value);
            for (int j = 0; j < N; ++j) G[output_mean][j] = row[j];
            if (mean_feed) {
                row = output_row(equations, c, Output::input_voltage, emf_value, threshold, load_feed_value);
                for (int j = 0; j < N; ++j) G[input_mean][j] = row[j];
            }
            const bool conducts = c & 2;
            rectifier_row[c] = output_row(equations, c, conducts ? rectifier_current : rectifier_voltage, emf_value,
                                          threshold, load_feed_value);
            if (!conducts) rectifier_row[c][one] -= threshold;
            constrained[c] = from.K.rows() > 0;
            if (constrained[c])
                for (int j = 0; j < states; ++j) constraint[c][j] = from.K(0, j) / equations.weight[j];
        }
    }

    [[nodiscard]] Column<N> output_row(const StateEquations& equations, int c, int output, double emf_value,
                                       double threshold, double load_feed_value) const {
        const Configuration& from = equations.configuration[c];
        Column<N> row{};
        for (int j = 0; j < states; ++j) row[j] = from.C(output, j) / equations.weight[j];
        row[one] = from.D(output, emf) * emf_value + from.D(output, rectifier_threshold) * threshold +
                   from.D(output, load_feed) * load_feed_value;
        if (feed >= 0) row[feed] = from.D(output, source_feed);
        return row;
    }

    // ---- a walk through the period ------------------------------------------------------------------------------

    Piece pieces[kMostPieces];
    int count = 0;
    Column<N> end;                 ///< z after the period
    Square<N> sensitivity;         ///< d end / d start
    Column<N> by_duty;             ///< d end / d duty
    bool forced_off = false;       ///< turn-off met a current the rectifier cannot take over

    /// Walks from z at turn-on through one period with the switch on for `duty`. @returns false when the rectifier
    /// switches more often than the walk has room for.
    bool walk(const Column<N>& start, double duty) {
        count = 0;
        forced_off = false;
        z_ = start;
        z_[one] = 1;
        z_[output_mean] = 0;
        if (input_mean >= 0) z_[input_mean] = 0;
        sensitivity = Square<N>::identity();
        by_duty = {};
        double left = duty;
        if (commutates && violates(1)) {  // leakage keeps the rectifier conducting for a while
            if (!enter(3)) return false;
            left -= advance(3, left);
            if (left > 0 && !cross(3, 1)) return false;
        } else {
            enter(1);
        }
        if (left > 0) advance_fully(1, left);
        // The switch opens at a set instant; what follows starts later when the duty grows.
        const Column<N> before = generator[last_configuration_].G * z_;
        int next = 2;
        if (!violates(0) && dot<N>(rectifier_row[0].a, z_) <= 0) next = 0;
        Column<N> forced = force[next] * z_;
        if (next == 2 && dot<N>(rectifier_row[2].a, forced) < 0 && !rises(2, forced)) {
            forced_off = violates(0);
            next = 0;
            forced = force[next] * z_;
        }
        apply(force[next]);
        const Column<N> slope = force[next] * before, after = generator[next].G * z_;
        for (int k = 0; k < N; ++k) by_duty[k] += slope[k] - after[k];
        last_configuration_ = next;
        left = 1 - duty;
        while (left > 0) {
            left -= advance(last_configuration_, left);
            if (left <= 0) break;
            if (!cross(last_configuration_, last_configuration_ ^ 2)) return false;
        }
        end = z_;
        return true;
    }

    // ---- the state that returns to itself -------------------------------------------------------------------------

    Column<N> start{};   ///< z at turn-on of the last solution
    double duty = 0;
    double slope_of_output = 0;  ///< d(mean output)/d(duty) there, volts per unit of duty

    /// Newton on the state at turn-on (and the duty, when the mean output is wanted). @returns converged
    bool shoot(std::optional<double> wanted_output, int most_iterations = 12) {
        double previous = HUGE_VAL;
        int settled = 0;
        for (int iteration = 0; iteration < most_iterations; ++iteration) {
            if (!(duty >= 0 && duty < 1) || !walk(start, duty)) return false;
            double step = 0;
            Column<N> trial = start;
            double trial_duty = duty;
            if (!newton_step(wanted_output, trial, trial_duty, step)) return false;
            if (wanted_output) trial_duty = std::clamp(trial_duty, 0.5 * duty, 0.5 * (1 + duty));
            start = trial;
            duty = trial_duty;
            if (step < 1e-13 || (step < 1e-9 && step >= 0.25 * previous)) ++settled;
            // Near no load a period changes the states by little more than rounding, and so the steps stop shrinking early.
            if (step < 1e-4 && step >= 0.5 * previous && iteration > 4) ++settled;
            if (settled || step < 3e-10) {  // quadratic: the next step would be below rounding
                if (!walk(start, duty)) return false;
                find_slope();
                return true;
            }
            previous = step;
        }
        return false;
    }

    /// The periodic state of a given order of intervals: on, rectifier for `conduction`, idle for the rest.
    /// @param[out] current  the rectifier's at the end of its interval: zero in the true solution
    bool periodic(double duty_value, double conduction, double& current) {
        const double idle = 1 - duty_value - conduction;
        Square<N> total = force[1], part, next;
        const auto run = [&](int configuration, double duration, bool with_force) {
            if (with_force) {
                multiply(force[configuration], total, next);
                total = next;
            }
            exponential(generator[configuration], duration, part);
            multiply(part, total, next);
            total = next;
        };
        run(1, duty_value, false);
        run(2, conduction, true);
        Square<N> at_end = total;
        if (idle > 0) run(0, idle, true);
        double M[N][N] = {}, right[N] = {};
        const int unknowns = states + (feed >= 0 ? 1 : 0);
        for (int i = 0; i < states; ++i) {
            for (int j = 0; j < states; ++j) M[i][j] = (i == j ? 1 : 0) - total[i][j];
            if (feed >= 0) M[i][states] = -total[i][feed];
            right[i] = total[i][one];
        }
        if (feed >= 0) {
            for (int j = 0; j < states; ++j) M[states][j] = total[input_mean][j];
            M[states][states] = total[input_mean][feed];
            right[states] = input_voltage - total[input_mean][one];
        }
        if (!solve_in_place<N>(M, right, unknowns)) return false;
        start = {};
        for (int j = 0; j < states; ++j) start[j] = right[j];
        start[one] = 1;
        if (feed >= 0) start[feed] = right[states];
        current = dot<N>(rectifier_row[2].a, at_end * start);
        duty = duty_value;
        return std::isfinite(current);
    }

    /// At a set duty, from nothing. @returns false when no periodic state was found
    bool settle(double duty_value) {
        double current = 0;
        const double longest = 1 - duty_value;
        if (!periodic(duty_value, longest, current)) return false;
        if (shoot({}, 40)) return true;  // at light loads every step but doubles the output voltage
        // Newton from the continuous solution went astray: bracket the rectifier's conduction first.
        if (!periodic(duty_value, longest, current)) return false;
        if (current < 0) {
            bool sound = true;
            const auto residual = [&](double conduction) {
                double value = 0;
                sound = periodic(duty_value, conduction, value) && sound;
                return value;
            };
            double low = 0.5 * longest, at_low = residual(low);
            for (int k = 0; k < 40 && sound && !(at_low > 0); ++k) at_low = residual(low *= 0.5);
            if (!sound || !(at_low > 0)) return relax(duty_value);
            std::uintmax_t steps = 60;
            const auto bracket = boost::math::tools::toms748_solve(
                residual, low, std::min(2 * low, longest), at_low, residual(std::min(2 * low, longest)),
                [](double a, double b) { return std::abs(a - b) <= 1e-9 * std::max(a, b); }, steps);
            residual(0.5 * (bracket.first + bracket.second));
            if (!sound) return false;
        }
        const Column<N> guess = start;
        if (shoot({}, 30)) return true;
        start = guess;
        duty = duty_value;
        return relax(duty_value);
    }

    [[nodiscard]] double mean_output() const { return end[output_mean]; }

  private:
    Column<N> z_;
    int last_configuration_ = 0;

    [[nodiscard]] bool violates(int configuration) const {
        if (!constrained[configuration]) return false;
        double sum = 0, size = 0;
        for (int j = 0; j < states; ++j) {
            const double term = constraint[configuration][j] * z_[j];
            sum += term;
            size += std::abs(term);
        }
        return std::abs(sum) > 1e-11 * size && size > 1e-15;
    }

    [[nodiscard]] bool rises(int configuration, const Column<N>& z) const {
        return dot<N>(rectifier_row[configuration].a, generator[configuration].G * z) > 0 &&
               dot<N>(rectifier_row[configuration].a, z) > -1e-12;
    }

    void apply(const Square<N>& m) {
        Square<N> next;
        multiply(m, sensitivity, next);
        sensitivity = next;
        by_duty = m * by_duty;
        z_ = m * z_;
    }

    bool enter(int configuration) {
        apply(force[configuration]);
        last_configuration_ = configuration;
        return true;
    }

    /// The rectifier switches where its row reaches zero: the instant moves with the state.
    bool cross(int from, int to) {
        if (count >= kMostPieces) return false;
        const Column<N> before = generator[from].G * z_;
        const double speed = dot<N>(rectifier_row[from].a, before);
        if (!(std::abs(speed) > 0)) return false;
        const Column<N> forced = force[to] * z_;
        const Column<N> after = generator[to].G * forced;
        Square<N> jump = force[to];
        const Column<N> slope = force[to] * before;
        for (int i = 0; i < N; ++i)
            for (int j = 0; j < N; ++j) jump[i][j] -= (slope[i] - after[i]) * rectifier_row[from][j] / speed;
        Square<N> next;
        multiply(jump, sensitivity, next);
        sensitivity = next;
        by_duty = jump * by_duty;
        z_ = forced;
        last_configuration_ = to;
        return true;
    }

    void record(int configuration, double duration, const Square<N>& flow) {
        if (count < kMostPieces) pieces[count++] = {configuration, duration, z_, flow};
        apply(flow);
        last_configuration_ = configuration;
    }

    void advance_fully(int configuration, double duration) {
        Square<N> flow;
        exponential(generator[configuration], duration, flow);
        record(configuration, duration, flow);
    }

    /// Runs until the rectifier's row changes sign or `longest` is over. @returns the time taken
    double advance(int configuration, double longest) {
        const bool conducts = configuration & 2;
        const double sign = conducts ? 1 : -1;
        const Generator<N>& gen = generator[configuration];
        const int levels = std::clamp(halvings(gen, longest), 4, 10);
        double step = std::ldexp(longest, -levels);
        Square<N> E, next;
        exponential(gen, step, E);
        const double* row = rectifier_row[configuration].a;
        Column<N> at = z_;
        const double speed = sign * dot<N>(row, gen.G * z_);
        double value = sign * dot<N>(row, z_);
        const double scale = std::abs(value) + std::abs(speed) * longest;
        bool found = value < -1e-12 * scale;  // already past: switches at once
        double t = 0;
        if (found) {
            step = 0;
        } else {
            const int samples = 1 << levels;
            for (int k = 0; k < samples && !found; ++k) {
                const Column<N> ahead = E * at;
                if (sign * dot<N>(row, ahead) < 0) {
                    found = true;
                    break;
                }
                at = ahead;
                t += step;
            }
        }
        if (!found) {
            for (int k = 0; k < levels; ++k) {
                multiply(E, E, next);
                E = next;
            }
            record(configuration, longest, E);
            return longest;
        }
        if (step > 0) t += root(gen, row, sign, at, step, t == 0 && value <= 1e-12 * scale);
        exponential(gen, t, E);
        record(configuration, t, E);
        return t;
    }

    /// Root of sign·row·exp(G s)·at in (0, step]; positive at 0 (or zero there and rising).
    double root(const Generator<N>& gen, const double* row, double sign, const Column<N>& from, double step, bool starts_at_zero) {
        Column<N> at = from;
        double offset = 0;
        while (gen.norm * step > kTaylorReach) {
            step *= 0.5;
            Square<N> E;
            exponential(gen, step, E);
            const Column<N> middle = E * at;
            if (sign * dot<N>(row, middle) >= 0) at = middle, offset += step, starts_at_zero = false;
        }
        constexpr int kDegree = 14;
        double c[kDegree + 1];
        Column<N> term = at;
        c[0] = starts_at_zero ? 0 : sign * dot<N>(row, term);
        for (int k = 1; k <= kDegree; ++k) {
            term = gen.G * term;
            for (int j = 0; j < N; ++j) term[j] *= step / k;
            c[k] = sign * dot<N>(row, term);
        }
        const int first = starts_at_zero ? 1 : 0;  // the root at zero itself is divided out
        const auto value = [&](double s) {
            double sum = 0;
            for (int k = kDegree; k >= first; --k) sum = sum * s + c[k];
            return sum;
        };
        double low = 0, high = 1;
        if (!(value(0) > 0)) return offset;
        if (!(value(1) < 0)) return offset + step;
        std::uintmax_t steps = 80;
        const auto bracket = boost::math::tools::toms748_solve(
            value, low, high, value(0), value(1), boost::math::tools::eps_tolerance<double>(52), steps);
        return offset + step * 0.5 * (bracket.first + bracket.second);
    }

    bool newton_step(std::optional<double> wanted, Column<N>& trial, double& trial_duty, double& step) const {
        double M[N][N] = {}, right[N] = {};
        int unknowns = states;
        const int feed_at = feed >= 0 ? unknowns++ : -1;
        const int duty_at = wanted ? unknowns++ : -1;
        const auto fill = [&](int row, int of, double residual) {
            for (int j = 0; j < states; ++j) M[row][j] = sensitivity[of][j] - (of < states && of == j ? 1 : 0);
            if (feed_at >= 0) M[row][feed_at] = sensitivity[of][feed];
            if (duty_at >= 0) M[row][duty_at] = by_duty[of];
            right[row] = residual;
        };
        double size = 0;
        for (int i = 0; i < states; ++i) {
            fill(i, i, start[i] - end[i]);
            size += start[i] * start[i];
        }
        if (feed_at >= 0) fill(feed_at, input_mean, input_voltage - end[input_mean]);
        if (duty_at >= 0) fill(duty_at, output_mean, *wanted - end[output_mean]);
        if (!solve_in_place<N>(M, right, unknowns)) return false;
        double moved = 0;
        for (int j = 0; j < states; ++j) {
            trial[j] += right[j];
            moved += right[j] * right[j];
        }
        step = std::sqrt(moved / std::max(size, 1e-300));
        if (feed_at >= 0) trial[feed] += right[feed_at];
        if (duty_at >= 0) {
            trial_duty += right[duty_at];
            step = std::max(step, std::abs(right[duty_at]) / std::max(duty, 1e-9));
        }
        return std::isfinite(step);
    }

    void find_slope() {
        double M[N][N] = {}, right[N] = {};
        int unknowns = states;
        const int feed_at = feed >= 0 ? unknowns++ : -1;
        for (int row = 0; row < unknowns; ++row) {
            const int of = row < states ? row : input_mean;
            for (int j = 0; j < states; ++j) M[row][j] = sensitivity[of][j] - (of == j ? 1 : 0);
            if (feed_at >= 0) M[row][feed_at] = sensitivity[of][feed];
            right[row] = -by_duty[of];
        }
        slope_of_output = NAN;
        if (!solve_in_place<N>(M, right, unknowns)) return;
        slope_of_output = by_duty[output_mean];
        for (int j = 0; j < states; ++j) slope_of_output += sensitivity[output_mean][j] * right[j];
        if (feed_at >= 0) slope_of_output += sensitivity[output_mean][feed] * right[feed_at];
    }

    /// Last resort where Newton cycles between two orders of intervals: runs many periods forward, then tries again.
    bool relax(double duty_value) {
        for (int round = 0; round < 6; ++round) {
            for (int k = 0; k < 200; ++k) {
                if (!walk(start, duty_value)) return false;
                const double feed_now = feed >= 0 ? start[feed] : 0;
                const double error = feed >= 0 ? input_voltage - end[input_mean] : 0;
                start = end;
                if (feed >= 0) {  // a gentle source resistance towards the wanted mean
                    start[feed] = feed_now + 0.02 * error * std::abs(feed_now) / std::max(input_voltage, 1e-9);
                }
            }
            duty = duty_value;
            const Column<N> keep = start;
            if (shoot({}, 30)) return true;
            start = keep;
            duty = duty_value;
        }
        return false;
    }
};

}  // namespace binwright
