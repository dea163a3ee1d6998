// SPDX-License-Identifier: GPL-3.0-or-later
// What every position sees: sums that add up, and a worst that nothing in the range beats.
#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "engine/answer/sight.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

TEST_CASE("input power less output power is the sum of the listed losses in every topology", "[engine][exposure]") {
    for (const Topology& topology : topologies()) {
        const std::string extra = topology.transformer ? "[clamp]\nvoltage = \"60 V\"\n" : "";
        const Setup setup = setup_of(supply_text(std::string(topology.name), extra));
        const Bench bench = bench_of(setup, End::worst, {});
        Solver solver;
        const OperatingRange& range = setup.converter.operating;
        for (const double vin : {range.input_voltage.lowest, range.input_voltage.highest})
            for (const double vout : {range.output_voltage.lowest, range.output_voltage.highest})
                for (const double current : {0.1, 0.5, 2.5}) {
                    const Operated operated = operate(bench, {vin, vout, current, 100e3, kCelsiusZero + 45}, solver);
                    INFO(topology.name << " " << vin << " V to " << vout << " V, " << current << " A");
                    REQUIRE(operated.stable);
                    const double lost = operated.state.input_power - operated.state.output_power;
                    CHECK(std::abs(total(operated.losses) - lost) <= 1e-6 * operated.state.input_power);
                    for (const Loss& loss : operated.losses) {
                        INFO(loss.name);
                        CHECK(loss.power > 0);
                    }
                }
    }
}

TEST_CASE("listed losses are those of the models at the temperatures found", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text());
    const Bench bench = bench_of(setup, End::worst, {});
    Solver solver;
    const At at{10.5, 15, 2.5, 100e3, kCelsiusZero + 45};
    const Operated operated = operate(bench, at, solver);
    const auto listed = [&](const std::string& name) {
        for (const Loss& loss : operated.losses)
            if (loss.name == name) return loss.power;
        return 0.0;
    };
    const double hot = *operated.junction(bench, Seat::switch_), warm = *operated.junction(bench, Seat::rectifier);
    const SwitchLoss transistor = switch_loss(*bench.models.switch_, 1, {12, 10}, operated.state.switch_, 100e3, hot);
    CHECK(listed("switch conduction") == Approx(transistor.conduction).epsilon(1e-5));
    CHECK(listed("switch overlap") == Approx(transistor.overlap).epsilon(1e-4));
    CHECK(listed("switch output charge") == Approx(transistor.output).epsilon(1e-4));
    const RectifierLoss diode = rectifier_loss(*bench.models.rectifier, operated.state.rectifier, operated.state.reverse_profile, 100e3, warm);
    CHECK(listed("rectifier forward") == Approx(diode.forward).epsilon(1e-5));
    CHECK(listed("rectifier leakage") == Approx(diode.reverse).epsilon(1e-4));
    CHECK(listed("rectifier junction charge") == Approx(diode.junction).epsilon(1e-4));
    CHECK(listed("primary winding core") == Approx(0.4).epsilon(1e-4));
    CHECK(listed("secondary winding core") == Approx(0.4).epsilon(1e-4));
    // The junctions stand where these losses put them: 6 K/W shared, 1.2 K/W pads, 1.1 K/W inside the switch.
    const double sink = kCelsiusZero + 45 + 6 * (operated.seat_power(Seat::switch_) + operated.seat_power(Seat::rectifier));
    CHECK(hot == Approx(sink + 2.3 * operated.seat_power(Seat::switch_)).epsilon(1e-6));
}

TEST_CASE("losses returned to the network raise its currents", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text());
    const At at{10.5, 15, 2.5, 100e3, kCelsiusZero + 45};
    const Bench bench = bench_of(setup, End::worst, {});
    Solver solver;
    const double with = operate(bench, at, solver).state.coupling.current_rms;
    const double without = solve(circuit_of(setup, End::worst, {}, at), point_of(setup, at)).coupling.current_rms;
    CHECK(with > 1.01 * without);
    CHECK(with < 1.15 * without);
}

TEST_CASE("every stress is the sum of its terms", "[engine][exposure]") {
    for (const End end : {End::best, End::typical, End::worst}) {
        const Exposure exposure = expose(setup_of(supply_text()), end, {});
        int seen = 0;
        for (const auto& [seat, parts] : exposure.seats)
            for (const PartExposure& part : parts)
                for (const StressValue& value : part.stresses) {
                    double sum = 0;
                    for (const Term& term : value.made_of) sum += term.value;
                    INFO(to_string(seat) << " " << info(value.stress).name);
                    CHECK(std::abs(sum - value.value) <= 1e-9 * std::abs(value.value));
                    CHECK(std::isfinite(value.value));
                    CHECK_FALSE(value.made_of.empty());
                    CHECK(value.at.input_voltage >= 10.5);
                    CHECK(value.at.output_voltage <= 15 * 1.03 * (1 + 1e-12));
                    ++seen;
                }
        CHECK(seen >= 30);
        CHECK(std::abs(total(exposure.losses)) > 0);
        CHECK(exposure.efficiency_total > 0.6);
        CHECK(exposure.efficiency_total < 1);
    }
}

TEST_CASE("no random point of the range beats the reported worst", "[engine][exposure]") {
    for (const char* name : {"sepic", "boost", "buck", "zeta"}) {
        const Setup setup = setup_of(supply_text(name));
        const Exposure exposure = expose(setup, End::worst, {});
        std::vector<Bench> benches(2, bench_of(setup, End::worst, {}));
        benches[0].primary_factor = benches[0].secondary_factor = 0.9;
        benches[1].primary_factor = benches[1].secondary_factor = 1.1;
        const Sight sight = sight_of(benches[0]);
        Solver solvers[2];
        std::mt19937 random(20240607);
        std::uniform_real_distribution<double> share(0, 1);
        const OperatingRange& range = setup.converter.operating;
        for (int k = 0; k < 2000; ++k) {
            const int v = k % 2;
            At at{10.5 + 4.5 * share(random), 0, 0.1 * std::pow(25, share(random)), 100e3, kCelsiusZero - 10 + 55 * share(random)};
            const double lowest = range.output_voltage.lowest * 0.97, highest = range.output_voltage.highest * 1.03;
            at.output_voltage = lowest + (highest - lowest) * share(random);
            const std::vector<double> values = look(benches[v], sight, at, operate(benches[v], at, solvers[v]));
            for (std::size_t j = 0; j < values.size(); ++j) {
                const StressKey& key = sight.keys[j];
                const PartExposure& of = key.beside >= 0 ? exposure.beside.at(static_cast<std::size_t>(key.beside)) : exposure.seats.at(key.seat)[key.entry];
                const StressValue* worst = of.find(key.stress);
                REQUIRE(worst != nullptr);
                INFO(name << " " << to_string(key.seat) << " " << info(key.stress).name << " worst " << worst->value << " random " << values[j] << " at "
                          << at.input_voltage << " V, " << at.output_voltage << " V, " << at.output_current << " A, variant " << v);
                if (key.lowest_is_worst()) CHECK(values[j] >= worst->value - 1e-3 * std::abs(worst->value));
                else CHECK(values[j] <= worst->value + 1e-3 * std::abs(worst->value));
            }
        }
    }
}

TEST_CASE("losses returned to a branch of little current do not bend what others see", "[engine][exposure]") {
    // A buck at a twenty-fifth of its load with a core loss of half its output power: as one series resistance it would take the
    // output away, and leakage in a rectifier that hardly conducts would raise what the switch blocks to several times the input.
    const Setup setup = setup_of(supply_text("buck"));
    const Bench bench = bench_of(setup, End::worst, {});
    Solver solver;
    for (const double vin : {10.5, 12.873, 15.0})
        for (const double current : {0.1, 0.15, 0.3}) {
            const Operated operated = operate(bench, {vin, 8.24, current, 100e3, kCelsiusZero + 45}, solver);
            INFO(vin << " V, " << current << " A");
            CHECK(operated.state.reached);
            CHECK(operated.state.switch_.voltage_peak < vin * 1.03 + 0.7);
            CHECK(operated.state.input_power == Approx(operated.state.output_power + total(operated.losses)).epsilon(1e-6));
        }
}

TEST_CASE("the same question has the same answer to the last digit, and can be stopped", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text());
    const Exposure first = expose(setup, End::worst, {}), again = expose(setup, End::worst, {});
    for (const auto& [seat, parts] : first.seats)
        for (std::size_t entry = 0; entry < parts.size(); ++entry)
            for (const StressValue& value : parts[entry].stresses) {
                const StressValue* other = again.seats.at(seat)[entry].find(value.stress);
                REQUIRE(other != nullptr);
                CHECK(value.value == other->value);
                CHECK(value.at.output_current == other->at.output_current);
            }
    double last = 0;
    (void)expose(setup, End::worst, {}, [&](double share) {
        CHECK(share >= last);
        CHECK(share <= 1);
        last = share;
        return true;
    });
    CHECK(last > 0.5);
    CHECK_THROWS_AS(expose(setup, End::worst, {}, [](double share) { return share < 0.3; }), Stopped);
}

TEST_CASE("losses add up with coupled and with leaking windings too", "[engine][exposure]") {
    struct Case {
        const char* topology;
        std::vector<std::string> changes;
    };
    for (const Case& one : {Case{"sepic", {"winding.coupling=0.95"}}, Case{"cuk", {"winding.coupling=0.6"}}, Case{"zeta", {"winding.coupling=0.9"}},
                            Case{"flyback", {"winding.leakage=0.3 uH"}}, Case{"flyback", {"winding.coupling=0.98"}}}) {
        std::vector<std::string> changes = one.changes;
        std::string text = supply_text(one.topology, std::string(one.topology) == "flyback" ? "[clamp]\nvoltage = \"60 V\"\n" : "");
        if (const auto at = text.find("coupling = 0.0\n"); at != std::string::npos) text.erase(at, 15);
        const Setup setup = setup_of(text, changes);
        const Bench bench = bench_of(setup, End::worst, {});
        Solver solver;
        for (const double current : {0.2, 2.0}) {
            const Operated operated = operate(bench, {12, 12, current, 100e3, kCelsiusZero + 45}, solver);
            INFO(one.topology << " " << one.changes.front() << " " << current << " A");
            double sum = total(operated.losses);
            std::string list;
            for (const Loss& loss : operated.losses) list += loss.name + " " + std::to_string(loss.power) + "\n";
            INFO(list);
            CHECK(std::abs(sum - operated.state.input_power + operated.state.output_power) <= 1e-6 * operated.state.input_power);
        }
    }
}

TEST_CASE("a resonance of the input filter inside the range of frequencies is found and told", "[engine][exposure]") {
    // By hand: 1 µH and 4.7 µF resonate at 73.4 kHz; there, and at half of it, the input capacitor carries several times as much.
    Setup setup = setup_of(supply_text("boost"), {"operating.frequency=[\"30 kHz\", \"110 kHz\"]"});
    Lot small = *find_specimen("film");
    for (Figure& figure : small.part.figures)
        if (figure.symbol == Symbol::C) figure.value = {4.7e-6, 4.7e-6, 4.7e-6};
    setup = with_fitted(setup, Seat::input_capacitor, {{small, 1}});
    const Exposure exposure = expose(setup, End::worst, {});
    const StressValue* ripple = exposure.seats.at(Seat::input_capacitor)[0].find(Stress::ripple_current);
    REQUIRE(ripple != nullptr);
    CHECK(ripple->at.frequency == Approx(73.4e3).epsilon(0.02));
    const auto ends = [&](const char* f) {
        const Setup at = with_fitted(setup_of(supply_text("boost"), {std::string("operating.frequency=") + f}), Seat::input_capacitor, {{small, 1}});
        return expose(at, End::worst, {}).seats.at(Seat::input_capacitor)[0].find(Stress::ripple_current)->value;
    };
    CHECK(ripple->value > 3 * ends("110 kHz"));
    bool told = false;
    for (const std::string& warning : exposure.warnings) told = told || warning.find("resonant at 73.4 kHz") != std::string::npos;
    CHECK(told);
    for (const std::string& warning : expose(setup_of(supply_text("boost")), End::worst, {}).warnings) CHECK(warning.find("resonant") == std::string::npos);
}
