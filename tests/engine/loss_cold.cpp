// SPDX-License-Identifier: GPL-3.0-or-later
#include <catch2/catch.hpp>

#include "engine/answer/judge.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

TEST_CASE("an electrolyte's ESR grows in the cold and nothing else's does", "[engine][loss]") {
    // Common practice, no source: two to three times at −10 °C for low-ESR aluminium, up to ten times at −40 °C.
    CapacitorModel model;
    model.kind = CapacitorKind::aluminium;
    const double cold = kCelsiusZero - 10, bitter = kCelsiusZero - 40;
    CHECK(cold_factor(model, cold, End::best) == Approx(1.8).epsilon(0.02));
    CHECK(cold_factor(model, cold, End::worst) == Approx(3.2).epsilon(0.02));
    CHECK(cold_factor(model, bitter, End::worst) == Approx(10).epsilon(0.02));
    CHECK(cold_factor(model, kCelsiusZero + 20, End::worst) == 1);
    CHECK(cold_factor(model, kCelsiusZero + 60, End::worst) == 1);
    for (const CapacitorKind dry : {CapacitorKind::polymer, CapacitorKind::film, CapacitorKind::ceramic1, CapacitorKind::ceramic2}) {
        model.kind = dry;
        CHECK(cold_factor(model, bitter, End::worst) == 1);
    }
}

TEST_CASE("cold electrolytics on the output let through the ripple that warm ones hold", "[engine][loss][answer]") {
    std::string text = supply_text();
    text.replace(text.find("fitted = \"polymer\""), 18, "fitted = \"aluminium\"");
    text.insert(text.find("[source]"), "output_ripple = \"400 mV\"\n");
    const auto ripple = [&](const char* ambient) {
        const Setup setup = setup_of(text, {std::string("operating.ambient=") + ambient});
        const Exposure exposure = expose(setup, End::worst, {});
        const StressValue* seen = exposure.seats.at(Seat::output_capacitor).front().find(Stress::output_ripple);
        REQUIRE(seen != nullptr);
        return *seen;
    };
    const StressValue warm = ripple("25 °C .. 45 °C"), cold = ripple("-25 °C .. 45 °C");
    CHECK(cold.value > 3 * warm.value);
    CHECK(cold.at.ambient == Approx(kCelsiusZero - 25));
    REQUIRE_FALSE(cold.rests_on.empty());
    CHECK(cold.rests_on.front().starts_with("ESR at -25 °C taken as 5.7 times that at 20 °C"));
}
