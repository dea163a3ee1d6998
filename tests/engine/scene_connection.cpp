// SPDX-License-Identifier: GPL-3.0-or-later
#include <catch2/catch.hpp>

#include <cmath>
#include <numbers>

#include "engine/network/scene.hpp"

using namespace binwright;

namespace {

Circuit circuit(const char* topology) {
    Circuit c;
    c.topology = find_topology(topology);
    c.source = SourceKind::impedance;
    c.source_resistance = 0.03;
    c.source_inductance = 1e-6;
    c.primary = {33e-6, 0.012};
    c.secondary = {33e-6, 0.012};
    c.rectifier_drop = 0.4;
    c.rectifier_resistance = 0.01;
    c.input = {{10e-6, 0}};
    c.coupling_capacitor = {{22e-6, 0.008}};
    c.output = {{940e-6, 0.006}};
    if (c.topology->transformer) c.coupling = 1;
    return c;
}

}  // namespace

TEST_CASE("a lead and a ceramic ring as a series resonant circuit does", "[engine][scene]") {
    // Step response of R, L, C in series (any text on circuit theory): peak V·(1 + exp(−πζ/√(1 − ζ²))), ζ = R/2·√(C/L);
    // all that flows charges C once: ∫i² dt = C·V²/(2R), and the source delivers C·V².
    Circuit c = circuit("buck");
    const double zeta = 0.5 * 0.03 * std::sqrt(10e-6 / 1e-6);
    const ConnectionPeaks peaks = connect_hot(c, {15, {}, {}});
    const double expected = 15 * (1 + std::exp(-std::numbers::pi * zeta / std::sqrt(1 - zeta * zeta)));
    CHECK(peaks.input.highest == Approx(expected).epsilon(1e-6));
    CHECK(peaks.input.highest > 27);  // twice the battery, nearly: a 25 V part does not stand it
    CHECK(peaks.switch_voltage.highest == Approx(expected).epsilon(1e-6));
    // i(t) has its peak where its slope is zero: V/(ω_d·L)·exp(−ζω·t)·sin(ω_d·t)
    const double w = 1 / std::sqrt(1e-6 * 10e-6), wd = w * std::sqrt(1 - zeta * zeta), t = std::atan2(wd, zeta * w) / wd;
    CHECK(peaks.source_current == Approx(15 / (wd * 1e-6) * std::exp(-zeta * w * t) * std::sin(wd * t)).epsilon(1e-6));
    CHECK(peaks.source_charge_squared == Approx(10e-6 * 15 * 15 / (2 * 0.03)).epsilon(2e-3));  // what is left of the ringing is not in it
    CHECK(peaks.source_energy == Approx(10e-6 * 15 * 15).epsilon(2e-2));
}

TEST_CASE("an overdamped input rises to the battery and no further", "[engine][scene]") {
    Circuit c = circuit("buck");
    c.source_resistance = 2;
    const ConnectionPeaks peaks = connect_hot(c, {15, {}, {}});
    CHECK(peaks.input.highest <= 15 * (1 + 1e-9));
    CHECK(peaks.input.highest > 14.6);
    CHECK(peaks.source_charge_squared == Approx(10e-6 * 15 * 15 / (2 * 2.0)).epsilon(2e-3));
}

TEST_CASE("a boost's output overshoots to nearly twice the input less the rectifier's drop", "[engine][scene]") {
    // Resonant charging through a rectifier (resonant half-wave; no source impedance to speak of, little loss).
    Circuit c = circuit("boost");
    c.source_inductance = 1e-9;
    c.source_resistance = 1e-4;
    c.input = {{1e-6, 0.1}};
    c.primary = {33e-6, 1e-4};
    c.rectifier_resistance = 1e-4;
    c.output = {{100e-6, 0}};
    const ConnectionPeaks peaks = connect_hot(c, {12, {}, {}});
    CHECK(peaks.output.highest == Approx(2 * (12 - 0.4)).epsilon(5e-3));
    CHECK(peaks.rectifier_current == Approx((12 - 0.4) / std::sqrt(33e-6 / 100e-6)).epsilon(1e-2));
    CHECK(peaks.source_energy == Approx(12 * 100e-6 * 2 * 11.6).epsilon(2e-2));  // all of the charge comes from the source
}

TEST_CASE("a saturating choke lets more current through", "[engine][scene]") {
    const Circuit c = circuit("boost");
    const ConnectionPeaks straight = connect_hot(c, {15, {}, {}});
    const ConnectionPeaks bent = connect_hot(c, {15, Saturation{20, 0.7}, {}});
    CHECK_FALSE(straight.saturated);
    CHECK(bent.saturated);
    CHECK(bent.rectifier_current > 1.2 * straight.rectifier_current);
    CHECK(connect_hot(c, {15, Saturation{1e4, 0.7}, {}}).rectifier_current == Approx(straight.rectifier_current).epsilon(1e-9));
}

TEST_CASE("nothing reaches the output of a converter whose switch stands between", "[engine][scene]") {
    for (const char* name : {"buck", "inverting", "zeta", "flyback"}) {
        INFO(name);
        const ConnectionPeaks peaks = connect_hot(circuit(name), {15, {}, {}});
        CHECK(peaks.output.highest < 1e-6);
        CHECK(peaks.rectifier_current < 1e-6);
        CHECK(peaks.input.highest > 20);
    }
}

TEST_CASE("the waveforms of a connection begin at nothing and end at rest", "[engine][scene]") {
    const Circuit c = circuit("sepic");
    const Waveforms waves = connection_waveforms(c, {15, {}, {}}, 4000);
    const ConnectionPeaks peaks = connect_hot(c, {15, {}, {}});
    for (std::size_t k = 0; k < waves.names.size(); ++k) {
        INFO(waves.names[k]);
        REQUIRE(waves.columns[k].size() == 4000);
        if (waves.names[k].ends_with("voltage") && waves.names[k] != "rectifier.voltage") {
            CHECK(std::abs(waves.columns[k].front()) < 1e-9);
            CHECK(waves.columns[k].back() == Approx(waves.names[k].starts_with("output") ? waves.columns[k].back() : 15).epsilon(0.05));
        }
        double highest = 0;
        for (const double y : waves.columns[k]) highest = std::max(highest, y);
        if (waves.names[k] == "coupling_capacitor.voltage") CHECK(highest == Approx(peaks.coupling.highest).epsilon(1e-3));
        if (waves.names[k] == "source.current") CHECK(highest == Approx(peaks.source_current).epsilon(1e-2));
    }
}
