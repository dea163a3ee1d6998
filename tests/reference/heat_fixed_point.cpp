// SPDX-License-Identifier: GPL-3.0-or-later
// The coupled heat fixed point against the multidimensional root finder of the GNU Scientific Library.
#include <gsl/gsl_multiroots.h>
#include <gsl/gsl_vector.h>

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "engine/heat/heat.hpp"
#include "engine/quantity/quantity.hpp"

using namespace binwright;

namespace {

/// A switch whose resistance grows by a compound law, a rectifier with falling threshold and exponential leakage, and a
/// third part of constant loss, on two sinks in an enclosure.
struct Problem {
    HeatLayout layout;
    double conduction, growth, other, forward, slope, reverse, c, constant;

    [[nodiscard]] HeatSources operator()(const std::vector<double>& t) const {
        const double room = kCelsiusZero + 25;
        const double hot = conduction * std::pow(1 + growth, t[0] - room);
        const double leak = reverse * std::exp(c * (t[1] - kCelsiusZero - 100));
        return {{hot + other, forward + slope * (t[1] - room) + leak, constant}, {hot * std::log1p(growth), slope + c * leak, 0}};
    }
};

int residual(const gsl_vector* x, void* parameters, gsl_vector* f) {
    const Problem& problem = *static_cast<const Problem*>(parameters);
    const std::vector<double> t = {gsl_vector_get(x, 0), gsl_vector_get(x, 1), gsl_vector_get(x, 2)};
    const HeatSources sources = problem(t);
    const double all = sources.power[0] + sources.power[1] + sources.power[2];
    const double air = problem.layout.ambient + problem.layout.enclosure * (all + problem.layout.other_power);
    // Written out by the chain of resistances, not by the matrix under test.
    const double shared = air + problem.layout.sinks[0] * (sources.power[0] + sources.power[1]);
    gsl_vector_set(f, 0, shared + problem.layout.seats[0].own * sources.power[0] - t[0]);
    gsl_vector_set(f, 1, shared + problem.layout.seats[1].own * sources.power[1] - t[1]);
    gsl_vector_set(f, 2, air + problem.layout.seats[2].own * sources.power[2] - t[2]);
    return GSL_SUCCESS;
}

}  // namespace

TEST_CASE("junction temperatures are those of the GNU Scientific Library's root finder", "[reference][heat]") {
    std::mt19937 random(7);
    std::uniform_real_distribution<double> share(0, 1);
    int settled = 0;
    for (int k = 0; k < 200; ++k) {
        Problem problem{};
        problem.layout.ambient = kCelsiusZero - 10 + 60 * share(random);
        problem.layout.enclosure = 2 * share(random);
        problem.layout.other_power = 4 * share(random);
        problem.layout.sinks = {1 + 10 * share(random)};
        problem.layout.seats = {{1 + 2 * share(random), 0}, {1 + 2 * share(random), 0}, {20 * share(random), {}}};
        problem.conduction = 2 * share(random);
        problem.growth = 0.0065;
        problem.other = share(random);
        problem.forward = 3 * share(random);
        problem.slope = -0.002 * share(random);
        problem.reverse = 3 * share(random);
        problem.c = 0.055;
        problem.constant = share(random);
        const HeatResult result = settle_heat(problem.layout, problem);
        if (!result.stable) continue;
        ++settled;
        gsl_multiroot_function function = {&residual, 3, &problem};
        gsl_vector* start = gsl_vector_alloc(3);
        for (int j = 0; j < 3; ++j) gsl_vector_set(start, j, problem.layout.ambient);
        gsl_multiroot_fsolver* solver = gsl_multiroot_fsolver_alloc(gsl_multiroot_fsolver_hybrids, 3);
        gsl_multiroot_fsolver_set(solver, &function, start);
        int status = GSL_CONTINUE;
        for (int step = 0; step < 500 && status == GSL_CONTINUE; ++step) {
            if (gsl_multiroot_fsolver_iterate(solver) != GSL_SUCCESS) break;
            status = gsl_multiroot_test_residual(solver->f, 1e-10);
        }
        INFO("case " << k << ": ambient " << problem.layout.ambient << " K, sink " << problem.layout.sinks[0] << " K/W, gain " << result.gain);
        CHECK(gsl_multiroot_test_residual(solver->f, 1e-8) == GSL_SUCCESS);
        for (int j = 0; j < 3; ++j) CHECK(result.junction[j] == Approx(gsl_vector_get(solver->x, j)).epsilon(1e-9));
        gsl_multiroot_fsolver_free(solver);
        gsl_vector_free(start);
    }
    CHECK(settled > 50);
    CHECK(settled < 200);  // the cases reach beyond runaway
}
