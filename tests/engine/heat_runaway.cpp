// SPDX-License-Identifier: GPL-3.0-or-later
// Junction temperatures against worked examples, and the edge beyond which leakage leaves no stable one, from both sides.
#include <catch2/catch.hpp>
#include <cmath>

#include "engine/heat/heat.hpp"
#include "engine/quantity/quantity.hpp"

using namespace binwright;

namespace {

double celsius(double degrees) { return kCelsiusZero + degrees; }

HeatLaw constant(double watts) {
    return [=](const std::vector<double>& t) { return HeatSources{std::vector<double>(t.size(), watts), std::vector<double>(t.size(), 0.0)}; };
}

/// One rectifier: forward loss that does not depend on temperature, and v_R·share·I_R(T).
HeatLaw leaky(double forward, double volts, double leakage, double at, double growth) {
    return [=](const std::vector<double>& t) {
        const double reverse = volts * leakage * std::exp(growth * (t[0] - at));
        return HeatSources{{forward + reverse}, {growth * reverse}};
    };
}

HeatLayout free_standing(double ambient, double resistance) {
    HeatLayout layout;
    layout.ambient = ambient;
    layout.seats = {{resistance, {}}};
    return layout;
}

}  // namespace

TEST_CASE("the thermal chain of a power transistor", "[engine][heat][reference]") {
    // Rashid, Power Electronics: Devices, Circuits and Applications, 4th ed., example 4.4 (read through its Scilab companion):
    // 0.4, 0.1 and 0.5 K/W from 25 °C carry 125 W to a junction of 150 °C.
    HeatLayout layout;
    layout.ambient = celsius(25);
    layout.sinks = {0.5};
    layout.seats = {{0.4 + 0.1, 0}};
    const HeatResult rashid = settle_heat(layout, constant(125));
    CHECK(rashid.stable);
    CHECK(rashid.junction[0] == Approx(celsius(150)).epsilon(1e-9));
    // Scilab textbook companion no. 371, example 3.4: 0.1 and 0.08 K/W from 45 °C carry 416.67 W to 120 °C.
    layout.ambient = celsius(45);
    layout.sinks = {0.08};
    layout.seats = {{0.1, 0}};
    CHECK(settle_heat(layout, constant(416.67)).junction[0] == Approx(celsius(120)).epsilon(1e-5));
}

TEST_CASE("a switch whose resistance grows with its own heat", "[engine][heat][reference]") {
    // Closed form of the loop with linear R_DS(on): 4 A, 50 mΩ, 0.6 %/K, 0.3 W besides, 40 K/W, 40 °C: 98.02 °C and 1.4505 W.
    const HeatLaw law = [](const std::vector<double>& t) {
        const double r = 0.05 * (1 + 0.006 * (t[0] - celsius(25)));
        return HeatSources{{16 * r + 0.3}, {16 * 0.05 * 0.006}};
    };
    const HeatResult result = settle_heat(free_standing(celsius(40), 40), law);
    CHECK(result.stable);
    CHECK(result.junction[0] - kCelsiusZero == Approx(98.02).epsilon(1e-4));
    CHECK(law(result.junction).power[0] == Approx(1.4505).epsilon(1e-4));
    CHECK(result.gain == Approx(40 * 16 * 0.05 * 0.006).epsilon(1e-9));
}

TEST_CASE("the leakage loop settles at its fixed point", "[engine][heat][reference]") {
    // Leakage law of STMicroelectronics AN869 (c = 0.055/K), fixed point by hand: 50 °C, 50 K/W, 0.4 W forward, 20 V half of the
    // time, 10 mA at 100 °C: 71.015 °C, 20.308 mW reverse, loop gain 0.055847.
    const HeatResult result = settle_heat(free_standing(celsius(50), 50), leaky(0.4, 20 * 0.5, 0.01, celsius(100), 0.055));
    REQUIRE(result.stable);
    CHECK(result.junction[0] - kCelsiusZero == Approx(71.015).epsilon(1e-4));
    CHECK(result.gain == Approx(0.055847).epsilon(3e-3));
}

TEST_CASE("runaway begins at the published limit current and nowhere else", "[engine][heat][reference]") {
    // STMicroelectronics AN869, first example: 15 V half of the time, 1.6 + 8.5 K/W: unstable from 0.24 A on (0.242 A in print).
    const auto gain = [](double leakage) {
        // Held at one temperature by the ambient that gives it: the gain at the junction is what decides.
        const double t = celsius(125), power = 15 * 0.5 * leakage;
        return settle_heat(free_standing(t - 10.1 * power, 10.1), leaky(0, 7.5, leakage, t, 0.055));
    };
    const double limit = 1 / (15 * 0.5 * 0.055 * 10.1);
    CHECK(limit == Approx(0.242).epsilon(0.012));
    const HeatResult below = gain(limit * 0.999);
    CHECK(below.stable);
    CHECK(below.junction[0] == Approx(celsius(125)).epsilon(1e-6));
    // Above it the same temperature is still a balance, but one that runs away: reached from ambient is another, cooler one.
    const HeatResult above = gain(limit * 1.2);
    CHECK(above.stable);
    CHECK(above.junction[0] < celsius(124));
    // Its second step: 0.21 A at 125 °C reach the limit at 127.43 °C.
    CHECK(125 + std::log(0.24 / 0.21) / 0.055 == Approx(127.43).margin(0.3));
    CHECK(std::exp(0.055 * 2.43) * 0.21 == Approx(limit).epsilon(2e-3));
}

TEST_CASE("the critical junction of a part that blocks all the time", "[engine][heat][reference]") {
    // Unity loop gain V_R·R_th·c·I_R = 1 of a published article: 11 V, 25 K/W, 0.07675/K, 0.1 mA at 25 °C: 105.27 °C.
    const double edge = celsius(105.27);
    const HeatLaw law = leaky(0, 11, 1e-4, celsius(25), 0.07675);
    CHECK(25 * law({edge}).slope[0] == Approx(1).epsilon(0.025));
    // The hottest ambient that settles has its junction there.
    double low = celsius(0), high = celsius(105);
    for (int k = 0; k < 60; ++k) {
        const double middle = 0.5 * (low + high);
        (settle_heat(free_standing(middle, 25), law).stable ? low : high) = middle;
    }
    CHECK(settle_heat(free_standing(low - 1e-6, 25), law).junction[0] - kCelsiusZero == Approx(105.27).margin(0.3));
}

TEST_CASE("walking across the edge of runaway from both sides", "[engine][heat][reference]") {
    // Tangency dP/dT = 1/R_th, worked by hand on the AN869 law: 50 K/W, 0.4 W, 20 V half of the time, 10 mA at 100 °C: highest
    // ambient 85.291 °C with a junction of 123.47 °C, where the reverse loss is 1/(R_th·c) = 0.3636 W whatever the part.
    const HeatLaw law = leaky(0.4, 10, 0.01, celsius(100), 0.055);
    const double edge = 85.291;
    double before = 0;
    for (double ambient = edge - 2; ambient < edge - 0.01; ambient += 0.1) {
        const HeatResult result = settle_heat(free_standing(celsius(ambient), 50), law);
        INFO(ambient);
        CHECK(result.stable);
        CHECK(result.gain < 1);
        CHECK(result.junction[0] > before);
        before = result.junction[0];
    }
    for (double ambient = edge + 2; ambient > edge + 0.01; ambient -= 0.1) {
        const HeatResult result = settle_heat(free_standing(celsius(ambient), 50), law);
        INFO(ambient);
        CHECK_FALSE(result.stable);
    }
    double low = celsius(80), high = celsius(90);
    for (int k = 0; k < 60; ++k) {
        const double middle = 0.5 * (low + high);
        (settle_heat(free_standing(middle, 50), law).stable ? low : high) = middle;
    }
    CHECK(low - kCelsiusZero == Approx(85.291).epsilon(1e-4));
    const HeatResult last = settle_heat(free_standing(low - 1e-7, 50), law);
    CHECK(last.junction[0] - kCelsiusZero == Approx(123.47).epsilon(1e-4));
    CHECK(last.gain == Approx(1).epsilon(1e-3));
    CHECK(law(last.junction).power[0] - 0.4 == Approx(1 / (50 * 0.055)).epsilon(1e-3));
}

TEST_CASE("parts on one sink heat each other and the enclosure heats all", "[engine][heat]") {
    // By hand: air 30 + 2·(5 + 3 + 1) = 48 °C; sink 48 + 4·(5 + 3) = 80 °C; junctions 80 + 5·1 and 80 + 3·2 °C; the lone one
    // 48 + 1·10 °C.
    HeatLayout layout;
    layout.ambient = celsius(30);
    layout.enclosure = 2;
    layout.sinks = {4};
    layout.seats = {{1, 0}, {2, 0}, {10, {}}};
    const HeatLaw law = [](const std::vector<double>&) { return HeatSources{{5, 3, 1}, {0, 0, 0}}; };
    const HeatResult result = settle_heat(layout, law);
    REQUIRE(result.stable);
    CHECK(result.junction[0] == Approx(celsius(85)));
    CHECK(result.junction[1] == Approx(celsius(86)));
    CHECK(result.junction[2] == Approx(celsius(58)));
    CHECK(result.air == Approx(celsius(48)));
    CHECK(mutual_resistance(layout, 0, 1) == 6);
    CHECK(mutual_resistance(layout, 0, 2) == 2);
}

TEST_CASE("the critical sink lies exactly at the edge", "[engine][heat]") {
    // Tangency by hand: at R in all, T = T_a + R·P_f + 1/c and v·I·c·R = 1; with R = own + sink both hold at one sink.
    const double forward = 1.5, volts = 12, leakage = 0.24, at = celsius(100), growth = 0.055, own = 1.7, ambient = celsius(45);
    const auto excess = [&](double sink) {
        const double r = own + sink;
        const double t = ambient + r * forward + 1 / growth;
        return volts * leakage * std::exp(growth * (t - at)) * growth * r - 1;
    };
    double low = 0, high = 50;
    for (int k = 0; k < 80; ++k) (excess(0.5 * (low + high)) < 0 ? low : high) = 0.5 * (low + high);
    HeatLayout layout;
    layout.ambient = ambient;
    layout.sinks = {12};
    layout.seats = {{own, 0}};
    const HeatLaw law = leaky(forward, volts, leakage, at, growth);
    const auto critical = critical_sink(layout, 0, law);
    REQUIRE(critical);
    CHECK(*critical == Approx(low).epsilon(1e-5));
    layout.sinks[0] = low * 0.9999;
    CHECK(settle_heat(layout, law).stable);
    layout.sinks[0] = low * 1.0001;
    CHECK_FALSE(settle_heat(layout, law).stable);
    // A part that runs away on an ideal sink has none.
    CHECK_FALSE(critical_sink(layout, 0, leaky(60, volts, leakage, at, growth)));
}

TEST_CASE("impossible thermal resistances are refused", "[engine][heat]") {
    CHECK_THROWS_AS(settle_heat(free_standing(celsius(25), -1), constant(1)), OutsideModel);
    CHECK_THROWS_AS(settle_heat(free_standing(celsius(25), std::nan("")), constant(1)), OutsideModel);
    HeatLayout layout = free_standing(celsius(25), 1);
    layout.enclosure = -2;
    CHECK_THROWS_AS(settle_heat(layout, constant(1)), OutsideModel);
    layout = free_standing(std::nan(""), 1);
    CHECK_THROWS_AS(settle_heat(layout, constant(1)), OutsideModel);
    CHECK_THROWS_AS(settle_heat(free_standing(celsius(25), 1), constant(std::nan(""))), OutsideModel);
}
