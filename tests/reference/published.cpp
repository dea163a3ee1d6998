// SPDX-License-Identifier: GPL-3.0-or-later
// The engine against published worked examples (worked_examples.tsv, which names the source of every row).
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>

#include "tests/reference/engine_side.hpp"

using namespace reference;

namespace {

struct Example {
    std::map<std::string, std::string> cell;
    std::map<std::string, double> circuit;
    std::vector<std::pair<std::string, std::string>> expected;
    double tolerance = 0;
    bool absolute = false;
};

std::vector<Example> read_examples() {
    std::ifstream file(BINWRIGHT_SOURCE "/tests/reference/worked_examples.tsv");
    REQUIRE(file);
    std::vector<Example> examples;
    std::vector<std::string> names;
    for (std::string line; std::getline(file, line);) {
        if (line.empty() || line[0] == '#') continue;
        std::vector<std::string> cells;
        std::istringstream stream(line);
        for (std::string cell; std::getline(stream, cell, '\t');) cells.push_back(cell);
        if (names.empty()) {
            names = cells;
            continue;
        }
        cells.resize(names.size());
        Example e;
        for (size_t k = 0; k < names.size(); ++k) e.cell[names[k]] = cells[k];
        const auto pairs = [](const std::string& text) {
            std::vector<std::pair<std::string, std::string>> list;
            std::istringstream words(text);
            for (std::string word; words >> word;) {
                const auto at = word.find('=');
                REQUIRE(at != std::string::npos);
                list.emplace_back(word.substr(0, at), word.substr(at + 1));
            }
            return list;
        };
        for (const auto& [name, value] : pairs(e.cell["circuit"])) e.circuit[name] = std::stod(value);
        e.expected = pairs(e.cell["expected"]);
        e.absolute = e.cell["tolerance"].rfind("abs ", 0) == 0;
        e.tolerance = std::stod(e.absolute ? e.cell["tolerance"].substr(4) : e.cell["tolerance"]);
        examples.push_back(e);
    }
    return examples;
}

Converter converter_of(const Example& e) {
    const auto given = [&e](const char* name) { return e.circuit.count(name) > 0; };
    const auto get = [&e](const char* name, double otherwise) {
        const auto found = e.circuit.find(name);
        return found == e.circuit.end() ? otherwise : found->second;
    };
    Converter c;
    c.name = e.cell.at("id");
    for (int k = 0; k < 7; ++k)
        if (e.cell.at("topology") == topology_name(static_cast<Kind>(k))) c.kind = static_cast<Kind>(k);
    const bool four = c.kind == Kind::sepic || c.kind == Kind::cuk || c.kind == Kind::zeta;
    c.vin = get("V", 0);
    c.f = get("f", 0);
    if (given("Vo")) c.vout = get("Vo", 0);
    c.duty = get("D", 0);
    c.load = given("R") ? LoadKind::resistance : given("P") ? LoadKind::power : LoadKind::current;
    c.load_value = given("R") ? get("R", 0) : given("P") ? get("P", 0) : get("I", 0);
    c.L1 = get("L1", 1000 / c.f);
    if (four) c.L2 = get("L2", 1000 / c.f);
    c.k = c.kind == Kind::flyback ? 1 : 0;
    c.n = get("n", 1);
    c.vt0 = get("vt0", 0);
    c.r_switch = get("rsw", 0);
    c.cin = {{get("Cin", 1000 / c.f), 0}};
    if (four) c.cs = {{get("Cs", 1000 / c.f), 0}};
    c.co = {{get("Co", 1000 / c.f), 0}};
    return c;
}

binwright::SteadyState run(const Converter& c, double ton = 0) {
    auto circuit = circuit_of(c);
    circuit.minimum_on_time = ton;
    return binwright::solve(circuit, point_of(c));
}

}  // namespace

TEST_CASE("published worked examples of converters come out within their rounding", "[reference][network][published]") {
    const auto examples = read_examples();
    REQUIRE(examples.size() >= 35);
    for (const auto& e : examples) {
        DYNAMIC_SECTION(e.cell.at("id")) {
            const Converter c = converter_of(e);
            INFO("source: " << e.cell.at("source") << " (" << e.cell.at("known") << ") " << e.cell.at("note"));
            INFO(describe(c));
            const auto within = [&e](double value) { return e.absolute ? e.tolerance : e.tolerance * std::abs(value); };
            for (const auto& [name, text] : e.expected) {
                INFO(name << " should be " << text);
                if (name == "mode") {
                    CHECK(std::string(binwright::to_string(run(c).mode)) == text);
                    continue;
                }
                const double value = std::stod(text);
                if (name == "border_L1") {  // the mode changes at this inductance
                    Converter above = c, below = c;
                    above.L1 = value + within(value);
                    below.L1 = value - within(value);
                    CHECK(binwright::to_string(run(above).mode) == "continuous");
                    CHECK(binwright::to_string(run(below).mode) == "discontinuous");
                    continue;
                }
                if (name == "least_duty") {  // below it the shortest on-time delivers too much
                    Converter c2 = c;
                    c2.vout = c.vin / (1 - (value + within(value)));
                    CHECK(run(c2, e.circuit.at("ton")).reached);
                    c2.vout = c.vin / (1 - (value - within(value)));
                    CHECK_FALSE(run(c2, e.circuit.at("ton")).reached);
                    continue;
                }
                if (name == "highest_output") {  // asked for more, the engine says what can be had
                    Converter more = c;
                    more.vout = 2 * value;
                    const auto state = run(more);
                    CHECK_FALSE(state.reached);
                    CHECK(std::abs(state.highest_output - value) <= within(value));
                    continue;
                }
                if (name == "duty_of_highest") {  // less on both sides of it
                    const double top = run(c).output_voltage_average;
                    for (const double step : {-0.02, 0.02}) {
                        Converter beside = c;
                        beside.duty = value + step;
                        CHECK(run(beside).output_voltage_average < top);
                    }
                    continue;
                }
                const auto state = run(c);
                REQUIRE(state.reached);
                auto f = figures_of(state);
                for (const char* winding : {"primary", "secondary", "magnetising"})
                    f[std::string(winding) + ".ripple"] =
                        f[std::string(winding) + ".current_peak"] - f[std::string(winding) + ".current_min"];
                f["coupling.ripple"] = f["coupling_capacitor.voltage_max"] - f["coupling_capacitor.voltage_min"];
                f["output_ripple_share"] = f["output_ripple"] / f["output_voltage_average"];
                f["efficiency"] = f["output_power"] / f["input_power"];
                REQUIRE(f.count(name) == 1);
                INFO("the engine says " << f[name]);
                // Where zero is expected: relative to the largest current.
                const double room = value == 0 ? e.tolerance * f["switch.current_peak"] : within(value);
                CHECK(std::abs(f[name] - value) <= room);
            }
        }
    }
}
