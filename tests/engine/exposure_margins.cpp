// SPDX-License-Identifier: GPL-3.0-or-later
// The distance to runaway, checked by going there.
#include <catch2/catch.hpp>

#include "engine/answer/margins.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

const At kHot{10.5, 15, 2.5, 100e3, kCelsiusZero + 45};

Setup standing_on(double sink, double leakage_factor = 1) {
    Setup setup = setup_of(supply_text(), {"seat.rectifier.fitted=leaky", "heatsink.small.resistance=" + std::to_string(sink) + " K/W", "winding.primary.tolerance=0 %"});
    for (Figure& figure : setup.fitted.at(Seat::rectifier).front().lot.part.figures)
        if (figure.symbol == Symbol::I_R) figure.value = {figure.value.best * leakage_factor, figure.value.typical * leakage_factor, figure.value.worst * leakage_factor};
    return setup;
}

bool stable(const Setup& setup, const At& at = kHot) {
    Solver solver;
    return operate(bench_of(setup, End::worst, {}), at, solver).stable;
}

}  // namespace

TEST_CASE("the margins to runaway are where it begins", "[engine][exposure]") {
    const Setup sound = standing_on(4);
    REQUIRE(stable(sound));
    const RunawayMargins margins = runaway_margins(sound, End::worst, {}, kHot);
    CHECK(margins.stable);
    REQUIRE(margins.ambient);
    At at = kHot;
    at.ambient = kHot.ambient + *margins.ambient - 0.2;
    CHECK(stable(sound, at));
    at.ambient = kHot.ambient + *margins.ambient + 0.2;
    CHECK_FALSE(stable(sound, at));
    REQUIRE(margins.leakage);
    CHECK(*margins.leakage > 1);
    CHECK(stable(standing_on(4, *margins.leakage * 0.98)));
    CHECK_FALSE(stable(standing_on(4, *margins.leakage * 1.02)));
    REQUIRE(margins.sinks.count("small") == 1);
    CHECK(stable(standing_on(margins.sinks.at("small") * 0.99)));
    CHECK_FALSE(stable(standing_on(margins.sinks.at("small") * 1.01)));

    // From beyond it the same edges are seen from the other side.
    const Setup lost = standing_on(2 * margins.sinks.at("small"));
    const RunawayMargins beyond = runaway_margins(lost, End::worst, {}, kHot);
    CHECK_FALSE(beyond.stable);
    CHECK(beyond.sinks.at("small") == Approx(margins.sinks.at("small")).epsilon(0.02));
    CHECK(*beyond.ambient < 0);
    CHECK(*beyond.leakage < 1);
    at.ambient = kHot.ambient + *beyond.ambient - 0.2;
    CHECK(stable(lost, at));
}
