// SPDX-License-Identifier: GPL-3.0-or-later
// What the regulated duty is where regulation is not a matter of course: a gain curve that folds back, a duty limit, a
// shortest on-time.
#include <catch2/catch.hpp>
#include <cmath>

#include "engine/network/steady_state.hpp"

using namespace binwright;

namespace {

/// Lossy enough that the output falls again at high duty.
Circuit lossy(const Topology& topology) {
    Circuit c;
    c.topology = &topology;
    c.primary = {100e-6, 0.2};
    c.secondary = {100e-6, 0.2};
    c.coupling = topology.transformer ? 1 : 0;
    c.switch_resistance = 0.1;
    c.rectifier_drop = 0.5;
    c.rectifier_resistance = 0.05;
    c.input = {{220e-6, 0.02}};
    if (has_secondary(topology) && !topology.transformer) c.coupling_capacitor = {{100e-6, 0.02}};
    c.output = {{470e-6, 0.02}};
    return c;
}

OperatingPoint point(LoadKind load, double value) {
    OperatingPoint p{};
    p.input_voltage = 12;
    p.load = load;
    p.load_value = value;
    p.frequency = 100e3;
    return p;
}

double output_at(const Circuit& circuit, OperatingPoint p, double duty) {
    p.output_voltage.reset();
    p.duty = duty;
    return solve(circuit, p).output_voltage_average;
}

}  // namespace

TEST_CASE("where the gain curve folds back the lower duty is taken, and its top is the highest output",
          "[engine][network]") {
    for (const auto& topology : topologies()) {
        if (topology.name == "buck") continue;  // its curve does not fold back
        const Circuit circuit = lossy(topology);
        auto p = point(LoadKind::resistance, 10);
        INFO(topology.name);
        p.output_voltage = 1000;
        const auto beyond = solve(circuit, p);
        REQUIRE_FALSE(beyond.reached);
        double top = 0, top_duty = 0;
        for (double duty = 0.01; duty < 0.995; duty += 0.005) {
            const double v = output_at(circuit, p, duty);
            if (v > top) {
                top = v;
                top_duty = duty;
            }
        }
        INFO("highest " << beyond.highest_output << ", seen on the curve " << top << " at duty " << top_duty);
        CHECK(beyond.highest_output >= top * (1 - 1e-9));
        CHECK(beyond.highest_output < top * 1.002);
        for (const double share : {0.5, 0.9, 0.99}) {
            p.output_voltage = share * beyond.highest_output;
            const auto state = solve(circuit, p);
            INFO("asked for " << *p.output_voltage);
            REQUIRE(state.reached);
            CHECK(state.duty < top_duty + 0.005);
            for (double duty = 0.02; duty < state.duty - 1e-6; duty += 0.02)
                CHECK(output_at(circuit, p, duty) < *p.output_voltage);
        }
    }
}

TEST_CASE("a duty limit caps the output at what that duty gives", "[engine][network]") {
    for (const auto& topology : topologies()) {
        Circuit circuit = lossy(topology);
        circuit.maximum_duty = 0.45;
        auto p = point(LoadKind::resistance, 10);
        INFO(topology.name);
        const double limit = output_at(circuit, p, 0.45);
        p.output_voltage = limit * 1.02;
        const auto beyond = solve(circuit, p);
        CHECK_FALSE(beyond.reached);
        CHECK(std::abs(beyond.highest_output / limit - 1) < 1e-6);
        p.output_voltage = limit * 0.999;
        CHECK(solve(circuit, p).reached);
    }
}

TEST_CASE("below the load that the shortest on-time delivers, the least load that regulates is told",
          "[engine][network]") {
    for (const auto& topology : topologies()) {
        Circuit circuit = lossy(topology);
        circuit.minimum_on_time = 1e-6;
        auto p = point(LoadKind::current, 1e-3);
        p.output_voltage = topology.name == "buck" ? 5 : 24;
        INFO(topology.name);
        const auto light = solve(circuit, p);
        CHECK_FALSE(light.reached);
        REQUIRE(light.least_load > p.load_value);
        p.load_value = light.least_load * 1.001;
        const auto enough = solve(circuit, p);
        CHECK(enough.reached);
        CHECK(std::abs(enough.duty / p.frequency / circuit.minimum_on_time - 1) < 2e-3);
        p.load_value = light.least_load * 0.999;
        CHECK_FALSE(solve(circuit, p).reached);
    }
}
