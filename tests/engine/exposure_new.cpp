// SPDX-License-Identifier: GPL-3.0-or-later
#include <catch2/catch.hpp>

#include "engine/answer/judge.hpp"
#include "engine/converter/read.hpp"

using namespace binwright;

TEST_CASE("a new converter of every topology can be judged before anything is chosen", "[engine][answer]") {
    for (const Topology& topology : topologies()) {
        INFO(topology.name);
        NewConverter asked{"new", {10, 15}, {12, 12}, {0.1, 1}, 100e3};
        if (topology.name == "buck") asked.output_voltage = {5, 5};
        if (topology.name == "boost") asked.output_voltage = {24, 24};
        const Setup setup = assemble(read_converter(new_converter_text(topology, asked), "new.toml"), [](const std::string&) { return std::optional<Lot>(); });
        const CheckReport report = check(setup, *find_rulebook("house"));
        CHECK(report.verdict == Verdict::unproven);  // nothing is fitted
        REQUIRE(report.converter.size() == 1);
        CHECK(report.converter.front().verdict == Verdict::holds);  // and the whole range is reached
        CHECK(report.exposure.efficiency_total > 0.7);
    }
}

TEST_CASE("a flyback's core is charged with the swing of its magnetising current", "[engine][answer][loss]") {
    NewConverter asked{"new", {12, 12}, {12, 12}, {1, 1}, 100e3};
    std::string text = new_converter_text(*find_topology("flyback"), asked);
    const std::string at = "[winding.primary]\n";
    text.insert(text.find(at) + at.size(), "turns = 20\ncore_area = \"60 mm²\"\ncore_volume = \"3000 mm³\"\nsteinmetz = [3.2, 1.4, 2.5]\n");
    const Setup setup = assemble(read_converter(text, "new.toml"), [](const std::string&) { return std::optional<Lot>(); });
    const Exposure seen = expose(setup, End::typical, Allowances{});
    double core = -1;
    for (const Loss& loss : seen.losses)
        if (loss.name == "primary winding core") core = loss.power;
    // Faraday's law: the flux swings by V·t_on/N whatever the inductance; Steinmetz at half of it.
    const Circuit circuit = circuit_of(setup, End::typical, Allowances{}, seen.hottest);
    const SteadyState state = solve(circuit, point_of(setup, seen.hottest));
    const double drop = state.switch_.current_average / state.duty * (circuit.switch_resistance + circuit.primary.resistance);
    const double flux = (12 - drop) * state.duty / 100e3 / (2 * 20 * 60e-6);
    const double expected = 3000e-9 * 3.2 * std::pow(100e3, 1.4) * std::pow(flux, 2.5);
    CHECK(core == Approx(expected).epsilon(0.01));  // the core's own loss moves the duty by some thousandths
}
