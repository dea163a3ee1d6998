// SPDX-License-Identifier: GPL-3.0-or-later
// The hot connection against an integration in time by GSL, written from the circuits' own equations with the switch open.
#include <gsl/gsl_errno.h>
#include <gsl/gsl_odeiv2.h>

#include <algorithm>
#include <array>
#include <catch2/catch.hpp>
#include <cmath>
#include <functional>

#include "engine/network/scene.hpp"

namespace {

using State = std::array<double, 6>;
using Slopes = std::function<void(const State&, State&)>;
struct Mode {
    Slopes slopes;
    std::function<double(const State&)> lasts;  ///< while above zero
};

int call(double, const double* y, double* f, void* slopes) {
    State at, out{};
    std::copy(y, y + 6, at.begin());
    (*static_cast<const Slopes*>(slopes))(at, out);
    std::copy(out.begin(), out.end(), f);
    return GSL_SUCCESS;
}

void integrate(const Slopes& slopes, State& y, double step) {
    gsl_odeiv2_system system{call, nullptr, 6, const_cast<Slopes*>(&slopes)};
    gsl_odeiv2_driver* driver = gsl_odeiv2_driver_alloc_y_new(&system, gsl_odeiv2_step_rk8pd, step, 1e-12, 1e-11);
    double t = 0;
    gsl_odeiv2_driver_apply(driver, &t, step, y.data());
    gsl_odeiv2_driver_free(driver);
}

/// Two modes that hand over to each other; every state is shown.
void follow(const Mode& blocking, const Mode& conducting, double end, double step, const std::function<void(const State&, bool)>& show) {
    State y{};
    bool on = false;
    for (double t = 0; t < end;) {
        const Mode& mode = on ? conducting : blocking;
        State next = y;
        integrate(mode.slopes, next, step);
        double taken = step;
        if (mode.lasts(next) < 0) {
            double low = 0, high = step;
            for (int k = 0; k < 50; ++k) {
                const double middle = 0.5 * (low + high);
                next = y;
                integrate(mode.slopes, next, middle);
                (mode.lasts(next) < 0 ? high : low) = middle;
            }
            next = y;
            integrate(mode.slopes, next, high);
            taken = high;
            show(next, on);
            on = !on;
        } else {
            show(next, on);
        }
        y = next;
        t += taken;
    }
}

struct Values {
    double Rs = 0.03, Ls = 1e-6, Ci = 20e-6, L1 = 33e-6, R1 = 0.012, L2 = 33e-6, R2 = 0.012, Cs = 22e-6, Es = 0.008, Vd = 0.4, rd = 0.01, Co = 940e-6, Eo = 0.006, V = 15;
};

binwright::Circuit circuit_of(const Values& v, const char* topology) {
    binwright::Circuit c;
    c.topology = binwright::find_topology(topology);
    c.source = binwright::SourceKind::impedance;
    c.source_resistance = v.Rs;
    c.source_inductance = v.Ls;
    c.primary = {v.L1, v.R1};
    c.secondary = {v.L2, v.R2};
    c.rectifier_drop = v.Vd;
    c.rectifier_resistance = v.rd;
    c.input = {{v.Ci, 0}};
    c.coupling_capacitor = {{v.Cs, v.Es}};
    c.output = {{v.Co, v.Eo}};
    return c;
}

}  // namespace

TEST_CASE("a boost connected hot agrees with an integration in time", "[reference][scene]") {
    const Values v;
    // y: source current, input capacitor, choke current (= rectifier's), output capacitor
    const Mode blocking{[v](const State& y, State& f) {
                            f[0] = (v.V - v.Rs * y[0] - y[1]) / v.Ls;
                            f[1] = y[0] / v.Ci;
                        },
                        [v](const State& y) { return y[3] + v.Vd - y[1]; }};
    const Mode conducting{[v](const State& y, State& f) {
                              f[0] = (v.V - v.Rs * y[0] - y[1]) / v.Ls;
                              f[1] = (y[0] - y[2]) / v.Ci;
                              f[2] = (y[1] - v.R1 * y[2] - v.Vd - v.rd * y[2] - y[3] - v.Eo * y[2]) / v.L1;
                              f[3] = y[2] / v.Co;
                          },
                          [](const State& y) { return y[2]; }};
    double input = 0, output = 0, rectifier = 0, source = 0;
    follow(blocking, conducting, 1.5e-3, 4e-8, [&](const State& y, bool on) {
        input = std::max(input, y[1]);
        output = std::max(output, y[3] + (on ? v.Eo * y[2] : 0));
        if (on) rectifier = std::max(rectifier, y[2]);
        source = std::max(source, std::abs(y[0]));
    });
    const binwright::ConnectionPeaks peaks = binwright::connect_hot(circuit_of(v, "boost"), {v.V, {}, {}});
    CHECK(peaks.input.highest == Approx(input).epsilon(1e-5));
    CHECK(peaks.output.highest == Approx(output).epsilon(1e-5));
    CHECK(peaks.rectifier_current == Approx(rectifier).epsilon(1e-5));
    CHECK(peaks.source_current == Approx(source).epsilon(1e-5));
}

TEST_CASE("a sepic connected hot agrees with an integration in time", "[reference][scene]") {
    for (const double coupling_capacitance : {22e-6, 200e-6}) {
        Values v;
        v.Cs = coupling_capacitance;
        // y: source current, input capacitor, first choke, coupling capacitor, second choke (from ground), output capacitor
        const Mode blocking{[v](const State& y, State& f) {  // both chokes carry one current: i2 = −i1
                                f[0] = (v.V - v.Rs * y[0] - y[1]) / v.Ls;
                                f[1] = (y[0] - y[2]) / v.Ci;
                                f[2] = (y[1] - (v.R1 + v.Es + v.R2) * y[2] - y[3]) / (v.L1 + v.L2);
                                f[3] = y[2] / v.Cs;
                                f[4] = -f[2];
                            },
                            [v](const State& y) {
                                const double slope = (y[1] - (v.R1 + v.Es + v.R2) * y[2] - y[3]) / (v.L1 + v.L2);
                                return y[5] + v.Vd - (v.L2 * slope + v.R2 * y[2]);
                            }};
        const Mode conducting{[v](const State& y, State& f) {
                                  const double i = y[2] + y[4], node = v.Vd + v.rd * i + y[5] + v.Eo * i;
                                  f[0] = (v.V - v.Rs * y[0] - y[1]) / v.Ls;
                                  f[1] = (y[0] - y[2]) / v.Ci;
                                  f[2] = (y[1] - (v.R1 + v.Es) * y[2] - y[3] - node) / v.L1;
                                  f[3] = y[2] / v.Cs;
                                  f[4] = (-node - v.R2 * y[4]) / v.L2;
                                  f[5] = i / v.Co;
                              },
                              [](const State& y) { return y[2] + y[4]; }};
        double input = 0, coupling = 0, output = 0, rectifier = 0;
        follow(blocking, conducting, 1.0e-3, 4e-8, [&](const State& y, bool on) {
            const double i = on ? y[2] + y[4] : 0;
            input = std::max(input, y[1]);
            coupling = std::max(coupling, y[3] + v.Es * y[2]);
            output = std::max(output, y[5] + v.Eo * i);
            rectifier = std::max(rectifier, i);
        });
        const binwright::ConnectionPeaks peaks = binwright::connect_hot(circuit_of(v, "sepic"), {v.V, {}, {}});
        CHECK(peaks.input.highest == Approx(input).epsilon(1e-5));
        CHECK(peaks.coupling.highest == Approx(coupling).epsilon(1e-5));
        CHECK(peaks.output.highest == Approx(output).epsilon(1e-5));
        CHECK(peaks.rectifier_current == Approx(rectifier).epsilon(1e-5));
    }
}
