// SPDX-License-Identifier: GPL-3.0-or-later
// Every stress of every case in cases.csv: the engine's periodic steady state against integration in time by GSL.
#include <catch2/catch.hpp>
#include <iomanip>
#include <sstream>

#include "tests/reference/engine_side.hpp"

using namespace reference;

TEST_CASE("every stress agrees with integration in time", "[reference][network]") {
    const auto cases = read_cases(BINWRIGHT_SOURCE "/tests/reference/cases.csv");
    std::map<Kind, int> count;
    for (const auto& c : cases) {
        ++count[c.kind];
        DYNAMIC_SECTION(c.name) {
            INFO(describe(c));
            const Solution expected = integrate(c);
            const auto state = binwright::solve(circuit_of(c), point_of(c));
            REQUIRE(state.reached);
            CHECK(std::string(binwright::to_string(state.mode)) == expected.mode);
            // A difference counts relative to the larger of the figure itself and 1 % of the largest of its kind.
            std::map<char, double> largest;
            for (const auto& figure : expected.figures)
                largest[figure.kind] = std::max(largest[figure.kind], std::abs(figure.value));
            const auto got = figures_of(state);
            std::ostringstream off;
            off << std::setprecision(12);
            int wrong = 0;
            for (const auto& figure : expected.figures) {
                const auto found = got.find(figure.name);
                const double value = found == got.end() ? NAN : found->second;
                const double error =
                    (value - figure.value) / std::max(std::abs(figure.value), 0.01 * largest[figure.kind]);
                if (!(std::abs(error) <= 1e-6)) {
                    ++wrong;
                    off << "\n  " << figure.name << ": engine " << value << ", in time " << figure.value << ", error "
                        << error;
                }
            }
            INFO("figures that differ:" << off.str());
            CHECK(wrong == 0);
        }
    }
    for (const Kind kind :
         {Kind::buck, Kind::boost, Kind::inverting, Kind::sepic, Kind::cuk, Kind::zeta, Kind::flyback}) {
        INFO(topology_name(kind));
        CHECK(count[kind] >= 6);
    }
}
