// SPDX-License-Identifier: GPL-3.0-or-later
// Prints how long one regulated point with all its stresses takes: the engine, and integration in time to the same
// accuracy, in one run on one core. Figures to read, not a test: nothing passes or fails here.
//   solver [CASE]     only cases whose name contains CASE
#include <algorithm>
#include <chrono>
#include <cstdio>
#include <cstring>
#include <exception>
#include <vector>

#include "tests/reference/engine_side.hpp"

using namespace reference;
using Clock = std::chrono::steady_clock;

namespace {

double seconds_since(Clock::time_point begin) {
    return std::chrono::duration<double>(Clock::now() - begin).count();
}

/// Median of a few rounds of `body`, each repeated for at least 2 ms.
template <typename Body>
double time_of(Body body, int rounds) {
    std::vector<double> times;
    for (int k = 0; k < rounds; ++k) {
        const auto begin = Clock::now();
        int done = 0;
        do {
            body();
            ++done;
        } while (seconds_since(begin) < 2e-3);
        times.push_back(seconds_since(begin) / done);
    }
    std::nth_element(times.begin(), times.begin() + times.size() / 2, times.end());
    return times[times.size() / 2];
}

}  // namespace

int main(int count, char** arguments) {
    try {
        std::printf("%-46s %9s %9s %11s %7s %11s %8s %7s\n", "regulated point, all stresses", "engine", "engine",
                    "shooting", "ratio", "settling", "periods", "ratio");
        std::printf("%-46s %9s %9s %11s %7s %11s %8s %7s\n", "", "cold, us", "warm, us", "in time, us", "",
                    "in time, us", "", "");
        std::vector<double> cold_times, warm_times, by_shooting, by_settling;
        double sum = 0;
        for (const auto& c : read_cases(BINWRIGHT_SOURCE "/tests/reference/cases.csv")) {
            if (!c.vout || (count > 1 && !std::strstr(c.name.c_str(), arguments[1]))) continue;
            const auto circuit = circuit_of(c);
            const auto point = point_of(c);
            const double cold = time_of([&] { sum += binwright::solve(circuit, point).duty; }, 5);
            // Warm: a kept solver that walks along neighbouring points, as every sweep does.
            binwright::Solver solver;
            int turn = 0;
            const double warm = time_of(
                [&] {
                    auto near = point;
                    near.input_voltage *= 1 + 1e-3 * (turn++ % 16);
                    sum += solver.solve(circuit, near).duty;
                },
                5);
            // In time, twice: with the periodic state shot at, duty searched and all stresses measured; and plainly run
            // until it moves by less than 1e-9 in a period, at one known duty.
            const double shooting = time_of([&] { sum += integrate(c).duty; }, 1);
            const auto known = integrate(c);
            const auto begin = Clock::now();
            const int periods = settle(c, known, 1e-9);
            const double settling = seconds_since(begin);
            std::printf("%-46s %9.1f %9.1f %11.0f %7.0f %11.0f %8d %7.0f\n", c.name.c_str(), cold * 1e6, warm * 1e6,
                        shooting * 1e6, shooting / warm, settling * 1e6, periods, settling / warm);
            cold_times.push_back(cold);
            warm_times.push_back(warm);
            by_shooting.push_back(shooting / warm);
            by_settling.push_back(settling / warm);
        }
        const auto median = [](std::vector<double> v) {
            std::sort(v.begin(), v.end());
            return v.empty() ? 0 : v[v.size() / 2];
        };
        std::printf("%-46s %9.1f %9.1f %11s %7.0f %11s %8s %7.0f\n", "median (ratios to the warm engine)",
                    median(cold_times) * 1e6, median(warm_times) * 1e6, "", median(by_shooting), "", "",
                    median(by_settling));
        return sum > 0 ? 0 : 1;
    } catch (const std::exception& fault) {
        std::fprintf(stderr, "%s\n", fault.what());
        return 1;
    }
}
