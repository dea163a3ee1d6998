// SPDX-License-Identifier: GPL-3.0-or-later
// Both ways of computing approach the closed formulas as capacitances grow. Where the two ever differ, this shows which
// of them left the physics.
#include <catch2/catch.hpp>
#include <functional>

#include "tests/reference/closed_formulas.hpp"
#include "tests/reference/engine_side.hpp"

using namespace reference;

namespace {

/// The same inductances and loads on which the formulas were checked: two continuous, two discontinuous a kind.
std::vector<Ideal> ideals() {
    std::vector<Ideal> list;
    for (const Kind kind :
         {Kind::buck, Kind::boost, Kind::inverting, Kind::sepic, Kind::cuk, Kind::zeta, Kind::flyback}) {
        const bool flyback = kind == Kind::flyback;
        const double n = flyback ? 1.0 / 3 : 1, s = flyback ? 9 : 1;
        list.push_back({kind, 12, 0.4, 10, 1e5, 47e-6 * s, 68e-6, n, 0, 0, 0});
        list.push_back({kind, 24, 0.6, 8, 1e5, 100e-6 * s, 82e-6, n, 0, 0, 0});
        list.push_back({kind, 12, 0.35, 60, 1e5, 10e-6 * s, 15e-6, n, 0, 0, 0});
        list.push_back({kind, 20, 0.25, 90, 1e5, 15e-6 * s, 8e-6, n, 0, 0, 0});
    }
    return list;
}

std::string say(const Ideal& c) {
    return std::string(topology_name(c.kind)) + " at " + std::to_string(c.vin) + " V, duty " + std::to_string(c.duty) +
           ", " + std::to_string(c.load) + " ohm, L1 " + std::to_string(c.L1 * 1e6) + " uH, L2 " +
           std::to_string(c.L2 * 1e6) + " uH";
}

using Figures = std::map<std::string, double>;

Figures in_time(const Converter& c) {
    Figures f;
    for (const auto& figure : integrate(c).figures) f[figure.name] = figure.value;
    return f;
}
Figures by_engine(const Converter& c) {
    return figures_of(binwright::solve(circuit_of(c), point_of(c)));
}

/// Largest difference to the formulas, relative to the figure or to 1 % of the largest current or voltage.
std::pair<double, std::string> difference(const Ideal& ideal, const std::function<Figures(const Converter&)>& way,
                                          bool voltages) {
    Figures got = way(ideal_converter(ideal));
    if (got.count("coupling_capacitor.voltage_max"))
        got["coupling ripple"] = got["coupling_capacitor.voltage_max"] - got["coupling_capacitor.voltage_min"];
    const Figures formulas = closed_formulas(ideal);
    const double most = formulas.at("switch.current_peak");
    std::pair<double, std::string> worst{0, ""};
    for (const auto& [name, value] : formulas) {
        const bool current = name.find("current") != std::string::npos;
        if (!voltages && !current) continue;
        const double error = std::abs(got.at(name) - value) / std::max(std::abs(value), current ? 0.01 * most : 1e-12);
        if (!(error <= worst.first)) worst = {error, name};
    }
    return worst;
}

void check_limit(const std::function<Figures(const Converter&)>& way) {
    for (Ideal ideal : ideals()) {
        INFO(say(ideal));
        ideal.Cin = 1 / ideal.load;  // a ripple of the order of T/(R·C) = 1e-5
        ideal.Cs = four_elements(ideal.kind) ? 1 / ideal.load : 0;
        ideal.Co = 1 / ideal.load;
        const auto [error, name] = difference(ideal, way, true);
        INFO("largest difference in " << name);
        CHECK(error < 1e-4);
    }
}

void check_slope(const std::function<Figures(const Converter&)>& way) {
    for (const Ideal& start : ideals()) {
        INFO(say(start));
        std::vector<double> errors;
        for (const double grow : {1.0, 10.0, 100.0}) {
            Ideal ideal = start;
            ideal.Cin = 200e-6 * grow;
            ideal.Cs = four_elements(ideal.kind) ? 200e-6 * grow : 0;
            ideal.Co = 400e-6 * grow;
            errors.push_back(difference(ideal, way, true).first);
        }
        INFO("differences " << errors[0] << ", " << errors[1] << ", " << errors[2]
                            << " at 1, 10 and 100 times the capacitance");
        CHECK(errors[0] < 0.1);
        CHECK(std::log10(errors[0] / errors[2]) / 2 >= 0.9);
    }
}

}  // namespace

TEST_CASE("integration in time approaches the closed formulas with large capacitors", "[reference][formulas]") {
    check_limit(in_time);
}
TEST_CASE("integration in time differs from the closed formulas in proportion to the ripple", "[reference][formulas]") {
    check_slope(in_time);
}
TEST_CASE("the engine approaches the closed formulas with large capacitors", "[reference][network][formulas]") {
    check_limit(by_engine);
}
TEST_CASE("the engine differs from the closed formulas in proportion to the ripple", "[reference][network][formulas]") {
    check_slope(by_engine);
}
TEST_CASE("integration in time balances its energy in every case", "[reference]") {
    for (const auto& c : read_cases(BINWRIGHT_SOURCE "/tests/reference/cases.csv")) {
        INFO(describe(c));
        CHECK(std::abs(integrate(c).balance) < 1e-10);
    }
}
