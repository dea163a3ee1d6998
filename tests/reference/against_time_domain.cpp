// SPDX-License-Identifier: GPL-3.0-or-later
// Every stress of every case in cases.csv, and of some hundred random converters: the engine's periodic steady state
// against integration in time by GSL.
#include <catch2/catch.hpp>
#include <random>

#include "tests/reference/engine_side.hpp"
#include "tests/reference/topologies.hpp"

using namespace reference;

namespace {

constexpr Kind kAll[] = {Kind::buck, Kind::boost, Kind::inverting, Kind::sepic, Kind::cuk, Kind::zeta, Kind::flyback};

/// Ordinary proportions: both modes, coupled and separate windings, any source and load, ripples up to 30 %.
Converter random_converter(int number, std::mt19937& random) {
    const auto share = [&random] { return static_cast<double>(random()) / 4294967296.0; };
    const auto between = [&share](double low, double high) { return low + (high - low) * share(); };
    const auto decade = [&share](double low, double high) { return low * std::pow(high / low, share()); };
    const auto one_in = [&random](unsigned n) { return random() % n == 0; };
    Converter c;
    c.name = "random " + std::to_string(number);
    c.kind = kAll[number % 7];
    const bool four = four_elements(c.kind), flyback = c.kind == Kind::flyback;
    c.f = decade(20e3, 1e6);
    c.vin = between(5, 48);
    const double ratio = c.kind == Kind::buck    ? between(0.1, 0.9)
                         : c.kind == Kind::boost ? between(1.1, 3.5)
                                                 : decade(0.3, 3);
    const double v_out = c.vin * ratio, i_out = decade(0.05, 5), load = v_out / i_out,
                 i_in = std::max(ratio, 1.0) * i_out;
    const auto ohms = [&] { return 1e-3 * load * decade(0.3, 5); };
    c.n = flyback ? decade(0.3, 3) : 1;
    c.L1 = 0.25 * c.vin / i_in / c.f * decade(0.3, 5);
    c.L2 = four ? c.L1 * decade(0.4, 2.5) : 0;
    if (flyback) c.k = one_in(3) ? between(0.97, 0.998) : 1;
    if (four && !one_in(3)) {
        c.k = one_in(2) ? between(0.2, 0.7) : between(0.9, 0.99);
        if (c.k > 0.7) c.L2 = c.L1 * between(0.97, 1.03);
    }
    c.R1 = ohms();
    c.R2 = ohms();
    c.r_switch = ohms();
    c.r_sense = one_in(2) ? ohms() : 0;
    c.vt0 = between(0, 0.8);
    c.rd = ohms();
    const auto bank = [&](double ripple) {
        std::vector<Capacitor> branches(one_in(4) ? 2 : 1);
        for (auto& branch : branches)
            branch = {i_in / c.f / (ripple * c.vin) * decade(0.3, 3),
                      branches.size() == 1 && one_in(8) ? 0 : 1e-3 * load * decade(0.3, 20)};
        return branches;
    };
    c.cin = bank(0.02);
    if (four) c.cs = bank(decade(0.01, 0.3));
    c.co = bank(0.01);
    if (one_in(3)) {
        c.feed = Feed::stiff;
    } else if (one_in(2)) {
        c.feed = Feed::impedance;
        c.source_R = ohms();
        c.source_L = one_in(2) ? c.L1 * decade(0.01, 0.2) : 0;
    }
    c.load = static_cast<LoadKind>(random() % 3);
    if (one_in(4)) {
        c.duty = between(0.1, 0.75);
        c.load = LoadKind::resistance;
    } else {
        c.vout = v_out;
    }
    c.load_value = c.load == LoadKind::current ? i_out : c.load == LoadKind::resistance ? load : v_out * i_out;
    return c;
}

}  // namespace

TEST_CASE("every stress agrees with integration in time", "[reference][network]") {
    std::map<Kind, int> count;
    for (const auto& c : read_cases(BINWRIGHT_SOURCE "/tests/reference/cases.csv")) {
        ++count[c.kind];
        DYNAMIC_SECTION(c.name) {
            INFO(describe(c));
            const auto state = binwright::solve(circuit_of(c), point_of(c));
            CHECK(state.reached);
            CHECK(differences(integrate(c), state, 1e-6) == "");
        }
    }
    for (const Kind kind : kAll) {
        INFO(topology_name(kind));
        CHECK(count[kind] >= 6);
    }
}

TEST_CASE("random converters agree with integration in time in every stress", "[reference][network]") {
    std::mt19937 random(20240229);
    int compared = 0;
    for (int number = 0; number < 210; ++number) {
        const Converter c = random_converter(number, random);
        INFO(describe(c));
        Solution expected;
        try {
            expected = integrate(c);
        } catch (const std::runtime_error&) {
            continue;  // the outward search for the duty left the region where this load can be carried
        }
        ++compared;
        const auto state = binwright::solve(circuit_of(c), point_of(c));
        CHECK(state.reached);
        CHECK(differences(expected, state, 1e-6) == "");
    }
    CHECK(compared >= 205);
}
