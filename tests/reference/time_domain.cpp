// SPDX-License-Identifier: GPL-3.0-or-later
// Integration over one period with GSL, the periodic state by shooting, the duty by an outer root, and every figure.
#include "tests/reference/time_domain.hpp"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_linalg.h>
#include <gsl/gsl_odeiv2.h>
#include <gsl/gsl_roots.h>

#include <algorithm>
#include <cmath>
#include <functional>
#include <stdexcept>

#include "tests/reference/topologies.hpp"

namespace reference {
namespace {

using Vector = std::vector<double>;

/// What is integrated beside the states to get means: index into `channels()`.
enum Channel {
    v_ds,
    i_switch,
    v_r,
    i_rectifier,
    v_in,
    i_source,
    i_cin,
    v_cs,
    i_cs,
    v_out,
    i_co,
    i_load,
    i1,
    i2,
    core,
    p_in,
    p_out,
    bank_branches
};
constexpr int kChannels = bank_branches + 3 * kMostBranches;

struct Integration {
    const Converter& c;
    States s;
    Constants u;
    double duty = 0;
    double tolerance;

    Position position = Position::on;
    enum class Beside { nothing, means, everything } beside = Beside::nothing;  ///< means: of v_in and v_out

    [[nodiscard]] int size() const {
        return s.count + (beside == Beside::nothing ? 0 : beside == Beside::means ? 2 : 2 * kChannels);
    }
};

void channels(const Converter& c, const Wave& w, double* y) {
    const double ratio = c.kind == Kind::flyback ? c.n : c.L2 > 0 ? std::sqrt(c.L2 / c.L1) : 0;
    const double values[] = {w.v_ds,
                             w.i_switch,
                             w.v_r,
                             w.i_rectifier,
                             w.v_in,
                             w.i_source,
                             w.i_cin,
                             w.v_cs,
                             w.i_cs,
                             w.v_out,
                             w.i_co,
                             w.i_load,
                             w.i1,
                             w.i2,
                             w.i1 + ratio * w.i2,
                             w.v_in * w.i_source,
                             w.v_out * w.i_load};
    std::copy(std::begin(values), std::end(values), y);
    for (int k = 0; k < kMostBranches; ++k) {
        y[bank_branches + k] = w.cin[k];
        y[bank_branches + kMostBranches + k] = w.cs[k];
        y[bank_branches + 2 * kMostBranches + k] = w.co[k];
    }
}

/// Time runs in periods: rates are multiplied by T.
int rates(double, const double y[], double dydt[], void* params) {
    const auto& run = *static_cast<const Integration*>(params);
    Wave w;
    probe(run.c, run.s, run.u, run.position, y, dydt, w);
    for (int k = 0; k < run.s.count; ++k) dydt[k] /= run.c.f;
    if (run.beside == Integration::Beside::means) {
        dydt[run.s.count] = w.v_in;
        dydt[run.s.count + 1] = w.v_out;
    } else if (run.beside == Integration::Beside::everything) {
        double* mean = dydt + run.s.count;
        channels(run.c, w, mean);
        for (int k = 0; k < kChannels; ++k) mean[kChannels + k] = mean[k] * mean[k];
    }
    return GSL_SUCCESS;
}

struct Stepper {
    gsl_odeiv2_system system;
    gsl_odeiv2_step* step;
    gsl_odeiv2_control* control;
    gsl_odeiv2_evolve* evolve;

    explicit Stepper(Integration& run) {
        const auto n = static_cast<size_t>(run.size());
        system = {rates, nullptr, n, &run};
        step = gsl_odeiv2_step_alloc(gsl_odeiv2_step_rk8pd, n);
        control = gsl_odeiv2_control_standard_new(run.tolerance, run.tolerance, 1, 0);
        evolve = gsl_odeiv2_evolve_alloc(n);
    }
    Stepper(const Stepper&) = delete;
    Stepper& operator=(const Stepper&) = delete;
    ~Stepper() {
        gsl_odeiv2_evolve_free(evolve);
        gsl_odeiv2_control_free(control);
        gsl_odeiv2_step_free(step);
    }
    void apply(double& t, double end, double& h, double* y) {
        if (gsl_odeiv2_evolve_apply(evolve, control, step, &system, &t, end, &h, y) != GSL_SUCCESS)
            throw std::runtime_error("integration step refused");
    }
    /// From t to end exactly; the states at t are in y.
    void go(double t, double end, double* y) {
        gsl_odeiv2_evolve_reset(evolve);
        gsl_odeiv2_step_reset(step);
        double h = end - t;
        while (t < end) apply(t, end, h, y);
    }
};

Wave look(const Integration& run, Position position, const double* y) {
    Vector dx(static_cast<size_t>(run.s.count));
    Wave w;
    probe(run.c, run.s, run.u, position, y, dx.data(), w);
    return w;
}

/// One stretch without switching, with the states at its ends and at every step of the integration between.
struct Stretch {
    Position position;
    Vector times;
    std::vector<Vector> states;
};

/// Runs in `position` from t to `end` or to the first zero of `event` after it has been positive.
/// @returns true where the event came first
bool run_to(Integration& run, Position position, double& t, double end, Vector& y,
            const std::function<double(const double*)>& event, std::vector<Stretch>* record) {
    run.position = position;
    Stepper stepper(run);
    if (record) record->push_back({position, {t}, {y}});
    const double most = record ? (end - t) / 64 : event ? (end - t) / 8 : end - t;  // short enough to miss no hump
    double h = record ? most / 64 : most;
    // A rectifier that has just begun to conduct carries a current of rounding only: its stop is looked for once it
    // flows.
    bool armed = event && event(y.data()) > 1e-9;
    Vector before;
    while (t < end) {
        h = std::min({h, most, end - t});
        const double from = t;
        before = y;
        stepper.apply(t, end, h, y.data());
        if (event) {
            const double g = event(y.data());
            if (armed && g < 0 && event(before.data()) > 0) {
                // Brent's method on the instant; each trial integrates from the last step before.
                struct Trial {
                    Integration* run;
                    const Vector* from;
                    double t0;
                    const std::function<double(const double*)>* event;
                    Stepper stepper;
                } trial{&run, &before, from, &event, Stepper(run)};
                gsl_function f{[](double at, void* p) {
                                   auto& q = *static_cast<Trial*>(p);
                                   Vector z = *q.from;
                                   q.stepper.go(q.t0, at, z.data());
                                   return (*q.event)(z.data());
                               },
                               &trial};
                gsl_root_fsolver* solver = gsl_root_fsolver_alloc(gsl_root_fsolver_brent);
                gsl_root_fsolver_set(solver, &f, from, t);
                for (int k = 0; k < 80; ++k) {
                    gsl_root_fsolver_iterate(solver);
                    if (gsl_root_test_interval(gsl_root_fsolver_x_lower(solver), gsl_root_fsolver_x_upper(solver),
                                               1e-16, 4e-16) == GSL_SUCCESS)
                        break;
                }
                const double at = gsl_root_fsolver_root(solver);
                gsl_root_fsolver_free(solver);
                y = before;
                trial.stepper.go(from, at, y.data());
                t = at;
                if (record) {
                    record->back().times.push_back(t);
                    record->back().states.push_back(y);
                }
                return true;
            }
            if (g > 1e-9) armed = true;
        }
        if (record) {
            record->back().times.push_back(t);
            record->back().states.push_back(y);
        }
    }
    return false;
}

struct Period {
    double conduction = 0;  ///< share of the period
    bool idle_at_end = false, idle = false;
    int conductions = 0;
    double interrupted = 0;  ///< energy lost in the leakage at turn-off [J]
};

/// One period from turn-on; y holds states and integrals and is advanced.
Period one_period(Integration& run, Vector& y, std::vector<Stretch>* record = nullptr) {
    Period period;
    const bool leaky = run.c.kind == Kind::flyback && run.c.k < 1;
    const auto current = [&run](Position p) {
        return [&run, p](const double* x) { return look(run, p, x).i_rectifier; };
    };
    double t = 0;
    if (leaky && y[1] > 0) {
        if (run_to(run, Position::commutating, t, run.duty, y, current(Position::commutating), record)) y[1] = 0;
        period.conduction = t;
    }
    if (t < run.duty) run_to(run, Position::on, t, run.duty, y, nullptr, record);
    t = run.duty;
    period.interrupted = turn_off(run.c, y.data());
    const auto rising = [&run](const double* x) {
        return look(run, Position::idle, x).v_r + run.c.vt0;
    };  // negative: conducts
    bool conducting = look(run, Position::conducting, y.data()).i_rectifier > 0;
    if (!conducting) stop_rectifier(run.c, y.data());
    if (!conducting && rising(y.data()) < 0) conducting = true;
    for (int k = 0; k < 50 && t < 1; ++k) {
        const double from = t;
        if (conducting) {
            ++period.conductions;
            const bool stopped = run_to(run, Position::conducting, t, 1, y, current(Position::conducting), record);
            period.conduction += t - from;
            if (stopped) {
                stop_rectifier(run.c, y.data());
                conducting = false;
            }
        } else {
            period.idle = true;
            conducting = run_to(run, Position::idle, t, 1, y, rising, record);
        }
    }
    period.idle_at_end = period.idle && !conducting;
    return period;
}

struct Shooting {
    Integration run;
    Vector x;                  ///< states at turn-on
    std::vector<int> unknown;  ///< states that take part
    bool source_unknown = false, load_unknown = false;
    double current_scale = 1, voltage_scale = 1;

    Shooting(const Converter& c, double tolerance) : run{c, States(c), {}, c.duty, tolerance} {
        const bool two = four_elements(c.kind) || (c.kind == Kind::flyback && c.k < 1);
        unknown.push_back(0);
        if (two) unknown.push_back(1);
        if (c.feed == Feed::impedance && c.source_L > 0) unknown.push_back(2);
        for (int k = c.feed == Feed::stiff ? run.s.cs : run.s.cin; k < run.s.count; ++k) unknown.push_back(k);
        source_unknown = c.feed == Feed::mean && !c.cin.empty();
        load_unknown = c.load == LoadKind::power && !c.vout;
    }

    [[nodiscard]] size_t size() const { return unknown.size() + (source_unknown ? 1 : 0) + (load_unknown ? 1 : 0); }
    [[nodiscard]] double scale(size_t j) const {
        return j < unknown.size() && unknown[j] >= 3 ? voltage_scale : current_scale;
    }
    double& value(size_t j) {
        if (j < unknown.size()) return x[static_cast<size_t>(unknown[j])];
        return j == unknown.size() && source_unknown ? run.u.source_current : run.u.load_current;
    }

    /// What is not yet periodic, in scaled units; `mean_out` gets the mean output voltage.
    Vector residual(double& mean_out) {
        run.beside = Integration::Beside::means;
        Vector y(static_cast<size_t>(run.size()), 0.0);
        std::copy(x.begin(), x.end(), y.begin());
        one_period(run, y);
        Vector r;
        for (size_t j = 0; j < unknown.size(); ++j)
            r.push_back((y[static_cast<size_t>(unknown[j])] - x[static_cast<size_t>(unknown[j])]) / scale(j));
        const double mean_in = y[static_cast<size_t>(run.s.count)];
        mean_out = y[static_cast<size_t>(run.s.count) + 1];
        if (source_unknown) r.push_back((mean_in - run.c.vin) / voltage_scale);
        if (load_unknown) r.push_back((run.u.load_current * mean_out - run.c.load_value) / run.c.load_value);
        return r;
    }

    void relax(int periods) {
        for (int k = 0; k < periods; ++k) {
            run.beside = Integration::Beside::means;
            Vector y(static_cast<size_t>(run.size()), 0.0);
            std::copy(x.begin(), x.end(), y.begin());
            one_period(run, y);
            std::copy(y.begin(), y.begin() + run.s.count, x.begin());
            if (load_unknown)
                run.u.load_current =
                    run.c.load_value / std::max(y[static_cast<size_t>(run.s.count) + 1], 0.1 * voltage_scale);
        }
    }

    /// @returns the mean output voltage of the periodic state at this duty. @throws std::runtime_error
    double shoot(double duty) {
        run.duty = duty;
        const size_t n = size();
        gsl_matrix* J = gsl_matrix_alloc(n, n);
        gsl_vector *b = gsl_vector_alloc(n), *dx = gsl_vector_alloc(n);
        gsl_permutation* p = gsl_permutation_alloc(n);
        const auto release = [&] {
            gsl_matrix_free(J);
            gsl_vector_free(b);
            gsl_vector_free(dx);
            gsl_permutation_free(p);
        };
        double mean_out = 0, last_step = HUGE_VAL;
        Vector r = residual(mean_out);
        for (int round = 0; round < 40; ++round) {
            const double h = 1e-5;
            for (size_t j = 0; j < n; ++j) {
                const double keep = value(j);
                value(j) = keep + h * scale(j);
                double ignored = 0;
                const Vector shifted = residual(ignored);
                value(j) = keep;
                for (size_t i = 0; i < n; ++i) gsl_matrix_set(J, i, j, (shifted[i] - r[i]) / h);
            }
            // The same slopes serve while they still contract quickly.
            int sign = 0;
            Vector rows(n);
            for (size_t i = 0; i < n; ++i) {
                double most = 1e-300;
                for (size_t j = 0; j < n; ++j) most = std::max(most, std::abs(gsl_matrix_get(J, i, j)));
                rows[i] = most;
                for (size_t j = 0; j < n; ++j) gsl_matrix_set(J, i, j, gsl_matrix_get(J, i, j) / most);
            }
            gsl_linalg_LU_decomp(J, p, &sign);
            bool singular = false;
            for (size_t i = 0; i < n; ++i) singular = singular || gsl_matrix_get(J, i, i) == 0;
            if (singular) {
                relax(30);
                r = residual(mean_out);
                continue;
            }
            double last_inner = HUGE_VAL;
            for (int inner = 0; inner < 6; ++inner) {
                for (size_t i = 0; i < n; ++i) gsl_vector_set(b, i, -r[i] / rows[i]);
                gsl_linalg_LU_solve(J, p, b, dx);
                double step = 0;
                for (size_t j = 0; j < n; ++j) step = std::max(step, std::abs(gsl_vector_get(dx, j)));
                if (!std::isfinite(step)) break;
                const double held = step > 0.5 ? 0.5 / step : 1;
                for (size_t j = 0; j < n; ++j) value(j) += held * gsl_vector_get(dx, j) * scale(j);
                r = residual(mean_out);
                // Huge capacitors: the rounding of one period divided by the share by which it settles is all there is.
                const bool done = step < 2e-12 || (inner == 0 && step < 1e-8 && step > 0.3 * last_step);
                last_step = step;
                if (done) {
                    release();
                    return mean_out;
                }
                if (step > 0.2 * last_inner || held < 1) break;
                last_inner = step;
            }
            if (round % 8 == 7) {
                relax(60);
                r = residual(mean_out);
            }
        }
        release();
        throw std::runtime_error("no periodic state found: " + describe(run.c));
    }
};

/// A first state from the ideal, ripple-free converter (Erickson & Maksimovic, ch. 2 and 5).
void guess(Shooting& shooting, double duty, double v_o) {
    const Converter& c = shooting.run.c;
    const double T = 1 / c.f, D = duty, V = c.vin;
    double i_o = c.load == LoadKind::current      ? c.load_value
                 : c.load == LoadKind::resistance ? v_o / c.load_value
                                                  : c.load_value / v_o;
    const double i_in = v_o * i_o / V;
    Vector& x = shooting.x;
    x.assign(static_cast<size_t>(shooting.run.s.count), 0.0);
    const auto positive = [](double value) { return std::max(value, 0.0); };
    switch (c.kind) {
        case Kind::buck:
            x[0] = positive(i_o - (V - v_o) * D * T / c.L1 / 2);
            break;
        case Kind::boost:
            x[0] = positive(i_in - V * D * T / c.L1 / 2);
            break;
        case Kind::inverting:
            x[0] = positive(i_in / D - V * D * T / c.L1 / 2);
            break;
        case Kind::flyback:
            x[c.k < 1 ? 1 : 0] = positive(i_in / D - V * D * T / c.L1 / 2) / (c.k < 1 ? c.n : 1);
            break;
        default: {
            const double M = c.k * std::sqrt(c.L1 * c.L2), det = c.L1 * c.L2 - M * M;
            const double d1 = V * (c.L2 - M) / det * D * T, d2 = V * (c.L1 - M) / det * D * T;
            x[0] = i_in - d1 / 2;
            x[1] = i_o - d2 / 2;
            const double sum = x[0] + x[1];
            if (sum < 0) {
                x[0] -= sum / 2;
                x[1] -= sum / 2;
            }
        }
    }
    x[2] = c.feed == Feed::impedance && c.source_L > 0 ? i_in : 0;
    for (int k = shooting.run.s.cin; k < shooting.run.s.cs; ++k) x[static_cast<size_t>(k)] = V;
    for (int k = shooting.run.s.cs; k < shooting.run.s.co; ++k)
        x[static_cast<size_t>(k)] = c.kind == Kind::sepic ? V : c.kind == Kind::cuk ? V + v_o : v_o;
    for (int k = shooting.run.s.co; k < shooting.run.s.count; ++k) x[static_cast<size_t>(k)] = v_o;
    shooting.run.u.source_current = shooting.source_unknown ? i_in : 0;
    shooting.run.u.load_current = c.load == LoadKind::resistance ? 0 : i_o;
    shooting.current_scale = std::max({i_o, i_in, 1e-3});
    shooting.voltage_scale = std::max(V, v_o);
}

/// Ideal continuous or discontinuous duty with the rectifier's drop (formulas of Erickson & Maksimovic, ch. 5).
double ideal_duty(const Converter& c, double v_o) {
    const double i_o = c.load == LoadKind::current      ? c.load_value
                       : c.load == LoadKind::resistance ? v_o / c.load_value
                                                        : c.load_value / v_o;
    const double V = c.vin, Vd = v_o + c.vt0;
    const double M = c.k * std::sqrt(c.L1 * c.L2);
    const double Le = four_elements(c.kind) ? (c.L1 * c.L2 - M * M) / (c.L1 + c.L2 - 2 * M) : c.L1;
    switch (c.kind) {
        case Kind::buck:
            return std::min(Vd / (V + c.vt0), std::sqrt(2 * Le * c.f * i_o * Vd / ((V - v_o) * (V + c.vt0))));
        case Kind::boost:
            return std::min((Vd - V) / Vd, std::sqrt(2 * Le * c.f * i_o * (Vd - V)) / V);
        case Kind::flyback:
            return std::min(Vd / c.n / (V + Vd / c.n), std::sqrt(2 * Le * c.f * i_o * Vd) / V);
        default:
            return std::min(Vd / (V + Vd), std::sqrt(2 * Le * c.f * i_o * Vd) / V);
    }
}

/// Output voltage of the ideal converter at a duty: the root of ideal_duty(v) = D.
double ideal_output(const Converter& c, double D) {
    double low = c.kind == Kind::boost ? c.vin * (1 + 1e-9) : 1e-6,
           high = c.kind == Kind::buck ? c.vin * (1 - 1e-9) : 1e4 * c.vin;
    for (int k = 0; k < 200; ++k) {
        const double middle = std::sqrt(low * high);
        (ideal_duty(c, middle) < D ? low : high) = middle;
    }
    return std::sqrt(low * high);
}

/// Highest (sign +1) or lowest (−1) value of a channel over the recorded period: at the ends of the stretches, at every
/// step, and wherever its slope changes sign within a step.
double extreme(Integration& run, const std::vector<Stretch>& stretches, int channel, double sign) {
    run.beside = Integration::Beside::nothing;
    const auto states = static_cast<size_t>(run.s.count);
    const auto value = [&](Position p, const double* x) {
        double y[kChannels];
        channels(run.c, look(run, p, x), y);
        return sign * y[channel];
    };
    // Every voltage and current is an affine function of the states, so a difference along dx/dt is its exact slope.
    const auto slope = [&](Position p, const double* x) {
        Vector dx(states);
        Wave w;
        probe(run.c, run.s, run.u, p, x, dx.data(), w);
        const double moment = 0.01 / run.c.f;
        for (size_t k = 0; k < states; ++k) dx[k] = x[k] + moment * dx[k];
        return (value(p, dx.data()) - value(p, x)) / 0.01;
    };
    double best = -HUGE_VAL;
    for (const auto& stretch : stretches)
        for (const auto& x : stretch.states) best = std::max(best, value(stretch.position, x.data()));
    for (const auto& stretch : stretches) {
        for (size_t j = 0; j + 1 < stretch.states.size(); ++j) {
            const double* left = stretch.states[j].data();
            const double *right = stretch.states[j + 1].data(), from = stretch.times[j], to = stretch.times[j + 1];
            const double rise = slope(stretch.position, left), fall = -slope(stretch.position, right);
            if (!(rise > 0 && fall > 0)) continue;
            const double bound = std::min(value(stretch.position, left) + 2 * rise * (to - from),
                                          value(stretch.position, right) + 2 * fall * (to - from));
            if (bound < best) continue;
            run.position = stretch.position;
            Stepper stepper(run);
            const auto at = [&](double t) {
                Vector z(left, left + states);
                if (t > from) stepper.go(from, t, z.data());
                return z;
            };
            std::function<double(double)> function = [&](double t) { return slope(stretch.position, at(t).data()); };
            gsl_function f{[](double t, void* p) { return (*static_cast<std::function<double(double)>*>(p))(t); },
                           &function};
            gsl_root_fsolver* solver = gsl_root_fsolver_alloc(gsl_root_fsolver_brent);
            gsl_root_fsolver_set(solver, &f, from, to);
            for (int k = 0; k < 60; ++k) {
                gsl_root_fsolver_iterate(solver);
                if (gsl_root_test_interval(gsl_root_fsolver_x_lower(solver), gsl_root_fsolver_x_upper(solver), 1e-11,
                                           0) == GSL_SUCCESS)
                    break;
            }
            best = std::max(best, value(stretch.position, at(gsl_root_fsolver_root(solver)).data()));
            gsl_root_fsolver_free(solver);
        }
    }
    return sign * best;
}

Solution measure(Shooting& shooting) {
    Integration& run = shooting.run;
    const Converter& c = run.c;
    run.beside = Integration::Beside::everything;
    Vector y(static_cast<size_t>(run.size()), 0.0);
    std::copy(shooting.x.begin(), shooting.x.end(), y.begin());
    std::vector<Stretch> stretches;
    const Period period = one_period(run, y, &stretches);
    const double* mean = y.data() + run.s.count;
    const double* square = mean + kChannels;
    const auto rms = [&](int k) { return std::sqrt(square[k]); };
    const auto highest = [&](int k) { return extreme(run, stretches, k, 1); };
    const auto lowest = [&](int k) { return extreme(run, stretches, k, -1); };
    const bool coupled = four_elements(c.kind);

    // The instants of turn-on and turn-off, each from both sides.
    const auto before_on = look(run, stretches.back().position, stretches.back().states.back().data());
    const auto after_on = look(run, stretches.front().position, stretches.front().states.front().data());
    Wave before_off, after_off;
    for (size_t k = 0; k + 1 < stretches.size(); ++k) {
        const bool here = stretches[k].position == Position::on || stretches[k].position == Position::commutating;
        const bool next =
            stretches[k + 1].position == Position::on || stretches[k + 1].position == Position::commutating;
        if (!here || next) continue;
        before_off = look(run, stretches[k].position, stretches[k].states.back().data());
        after_off = look(run, stretches[k + 1].position, stretches[k + 1].states.front().data());
    }

    Solution solution;
    solution.duty = run.duty;
    solution.mode = period.idle ? "discontinuous" : "continuous";
    solution.conductions = period.conductions;
    auto& f = solution.figures;
    const auto add = [&f](const char* name, char kind, double value) { f.push_back({name, kind, value}); };
    add("duty", '1', run.duty);
    add("rectifier_fraction", '1', period.conduction);
    add("input_current_average", 'A', mean[i_source]);
    add("output_voltage_average", 'V', mean[v_out]);
    add("output_current_average", 'A', mean[i_load]);
    const double out_max = highest(v_out), out_min = lowest(v_out);
    add("output_ripple", 'V', out_max - out_min);
    add("input_power", 'W', mean[p_in]);
    add("output_power", 'W', mean[p_out]);
    add("switch.voltage_peak", 'V', highest(v_ds));
    add("switch.current_peak", 'A', highest(i_switch));
    add("switch.current_rms", 'A', rms(i_switch));
    add("switch.current_average", 'A', mean[i_switch]);
    add("switch.current_turn_on", 'A', after_on.i_switch);
    add("switch.current_turn_off", 'A', before_off.i_switch);
    add("switch.voltage_turn_on", 'V', before_on.v_ds);
    add("switch.voltage_turn_off", 'V', after_off.v_ds);
    add("rectifier.reverse_voltage_peak", 'V', highest(v_r));
    add("rectifier.current_peak", 'A', highest(i_rectifier));
    add("rectifier.current_rms", 'A', rms(i_rectifier));
    add("rectifier.current_average", 'A', mean[i_rectifier]);
    add("rectifier.current_turn_off", 'A', before_on.i_rectifier);
    if (stretches.front().position == Position::on) add("rectifier.voltage_turn_on", 'V', after_on.v_r);
    const auto bank = [&](const std::string& name, int v, int i, size_t branches, int first) {
        f.push_back({name + ".voltage_average", 'V', mean[v]});
        f.push_back({name + ".voltage_max", 'V', highest(v)});
        f.push_back({name + ".voltage_min", 'V', lowest(v)});
        f.push_back({name + ".current_rms", 'A', rms(i)});
        for (size_t k = 0; k < branches; ++k)
            f.push_back(
                {name + ".branch_current_rms[" + std::to_string(k) + "]", 'A', rms(first + static_cast<int>(k))});
    };
    if (!c.cin.empty()) bank("input_capacitor", v_in, i_cin, c.cin.size(), bank_branches);
    if (coupled) bank("coupling_capacitor", v_cs, i_cs, c.cs.size(), bank_branches + kMostBranches);
    bank("output_capacitor", v_out, i_co, c.co.size(), bank_branches + 2 * kMostBranches);
    const auto winding = [&](const std::string& name, int i) {
        f.push_back({name + ".current_average", 'A', mean[i]});
        f.push_back({name + ".current_rms", 'A', rms(i)});
        f.push_back({name + ".current_peak", 'A', highest(i)});
        f.push_back({name + ".current_min", 'A', lowest(i)});
    };
    winding("primary", i1);
    if (coupled || c.kind == Kind::flyback) winding("secondary", i2);
    if (c.kind == Kind::flyback) winding("magnetising", core);

    double lost = (c.r_switch + c.r_sense) * square[i_switch] + c.vt0 * mean[i_rectifier] + c.rd * square[i_rectifier] +
                  c.R1 * square[i1] + c.R2 * square[i2] + period.interrupted * c.f;
    for (size_t k = 0; k < c.cin.size(); ++k) lost += c.cin[k].r * square[bank_branches + k];
    for (size_t k = 0; k < c.cs.size(); ++k) lost += c.cs[k].r * square[bank_branches + kMostBranches + k];
    for (size_t k = 0; k < c.co.size(); ++k) lost += c.co[k].r * square[bank_branches + 2 * kMostBranches + k];
    solution.balance = (mean[p_in] - mean[p_out] - lost) / mean[p_in];
    if (!(std::abs(solution.balance) < 1e-9))
        throw std::runtime_error("energy does not balance: outside the model: " + describe(c));
    return solution;
}

}  // namespace

double Solution::operator[](const std::string& name) const {
    for (const auto& figure : figures)
        if (figure.name == name) return figure.value;
    throw std::out_of_range(name);
}

Solution integrate(const Converter& converter, double tolerance) {
    gsl_set_error_handler_off();
    Converter c = converter;
    if (c.kind == Kind::flyback) c.L2 = c.L1 * c.n * c.n;
    Shooting shooting(c, tolerance);
    if (!c.vout) {
        guess(shooting, c.duty, ideal_output(c, c.duty));
        shooting.run.duty = c.duty;
        shooting.relax(20);
        shooting.shoot(c.duty);
        return measure(shooting);
    }
    const double wanted = *c.vout;
    double D = std::min(ideal_duty(c, wanted), 0.97);
    guess(shooting, D, wanted);
    shooting.run.duty = D;
    shooting.relax(20);
    const auto error = [&](double duty) { return shooting.shoot(duty) - wanted; };
    double e = error(D), low = D, high = D, e_low = e, e_high = e;
    double stride = 0.01;
    while (e_high < 0) {  // outward until the mean crosses the set-point upwards
        low = high;
        e_low = e_high;
        high = std::min(high + stride * std::min(high, 1 - high), 0.5 * (1 + high));
        e_high = error(high);
        if (e_high < e_low) throw std::runtime_error("the gain curve folds back below the set-point: " + describe(c));
        stride *= 1.5;
    }
    stride = 0.01;
    while (e_low > 0) {
        high = low;
        e_high = e_low;
        low -= stride * std::min(low, 1 - low);
        e_low = error(low);
        if (e_low > e_high) throw std::runtime_error("not on the rising branch of the gain curve: " + describe(c));
        stride *= 1.5;
        if (low < 1e-6) throw std::runtime_error("no duty low enough: " + describe(c));
    }
    if (e_low == 0 || e_high == 0) {
        D = e_low == 0 ? low : high;
    } else {
        std::function<double(double)> function = error;
        gsl_function f{[](double x, void* p) { return (*static_cast<std::function<double(double)>*>(p))(x); },
                       &function};
        gsl_root_fsolver* solver = gsl_root_fsolver_alloc(gsl_root_fsolver_brent);
        gsl_root_fsolver_set(solver, &f, low, high);
        double last = 0;
        for (int k = 0; k < 60; ++k) {
            gsl_root_fsolver_iterate(solver);
            const double now = gsl_root_fsolver_root(solver);
            if (std::abs(now - last) < 2e-13 * now) break;
            if (gsl_root_test_interval(gsl_root_fsolver_x_lower(solver), gsl_root_fsolver_x_upper(solver), 0, 1e-13) ==
                GSL_SUCCESS)
                break;
            last = now;
        }
        D = gsl_root_fsolver_root(solver);
        gsl_root_fsolver_free(solver);
    }
    shooting.shoot(D);
    return measure(shooting);
}

int settle(const Converter& converter, const Solution& known, double accuracy, int most) {
    Converter c = converter;
    if (c.kind == Kind::flyback) c.L2 = c.L1 * c.n * c.n;
    if (c.feed == Feed::mean) {
        c.feed = Feed::stiff;
        c.cin.clear();
    }
    Shooting shooting(c, 1e-9);
    guess(shooting, known.duty, known["output_voltage_average"]);
    shooting.run.duty = known.duty;
    for (int k = 1; k <= most; ++k) {
        const Vector before = shooting.x;
        shooting.relax(1);
        double moved = 0;
        for (size_t j = 0; j < before.size(); ++j)
            moved = std::max(
                moved, std::abs(shooting.x[j] - before[j]) / (j < 3 ? shooting.current_scale : shooting.voltage_scale));
        if (moved < accuracy) return k;
    }
    return most;
}

}  // namespace reference
