// SPDX-License-Identifier: GPL-3.0-or-later
// What a surge at the input does to every position, and what cannot be told for want of a figure.
#include <catch2/catch.hpp>
#include <cmath>

#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

const StressValue* single(const Exposure& exposure, Seat seat) { return exposure.seats.at(seat).front().find(Stress::voltage_peak_single); }

bool lacks(const Exposure& exposure, Seat seat, Stress stress, const std::string& figure) {
    for (const auto& [one, what] : exposure.seats.at(seat).front().missing)
        if (one == stress && what == figure) return true;
    return false;
}

Setup without(Setup setup, Seat seat, Symbol symbol) {
    std::vector<Fitted> fitted = setup.fitted.at(seat);
    std::erase_if(fitted.front().lot.part.figures, [&](const Figure& figure) { return figure.symbol == symbol; });
    return with_fitted(setup, seat, fitted);
}

}  // namespace

TEST_CASE("a surge reaches switch and rectifier wherever the input does", "[engine][exposure]") {
    // By hand: a buck blocks its input in both; with 40 V at the input and overshoots of 20 % and 30 % (house rules) they see
    // 48 V and 52 V, give or take drops and ripple.
    const std::vector<std::string> surge = {"source.surge=40 V"};
    std::string text = supply_text("buck");
    text.erase(text.find("overshoot = "), std::string("overshoot = \"4 V @ 9.5 A\"").size());
    const Exposure buck = expose(setup_of(text, surge), End::worst, {});
    REQUIRE(single(buck, Seat::switch_) != nullptr);
    CHECK(single(buck, Seat::switch_)->value == Approx(48).epsilon(0.03));
    REQUIRE(single(buck, Seat::rectifier) != nullptr);
    CHECK(single(buck, Seat::rectifier)->value == Approx(52).epsilon(0.03));
    CHECK(single(buck, Seat::input_capacitor)->value == Approx(40).epsilon(0.02));
    CHECK(single(buck, Seat::output_capacitor)->value < 9);
    // A sepic blocks input plus output.
    const Exposure sepic = expose(setup_of(supply_text(), surge), End::worst, {});
    CHECK(single(sepic, Seat::rectifier)->value == Approx(1.3 * (40 + 15.45)).epsilon(0.04));
    CHECK(single(sepic, Seat::coupling_capacitor)->value == Approx(40).epsilon(0.05));
    // Through a boost's choke and rectifier a surge above the output arrives there.
    const Exposure boost = expose(setup_of(supply_text("boost"), surge), End::worst, {});
    CHECK(single(boost, Seat::output_capacitor)->value >= 39.9);
    CHECK(single(boost, Seat::switch_)->value >= 40);
    // Without a surge, and never connected hot, there is no such event in switch and rectifier.
    CHECK(single(expose(setup_of(supply_text("boost"), {"source.switched=false"}), End::worst, {}), Seat::switch_) == nullptr);
}

TEST_CASE("the hot connection decides where it does more than the converter at work", "[engine][exposure]") {
    // A lead of 1 µH and 30 mΩ on 10 µF without ESR to speak of rings 15 V to V·(1 + exp(−πζ/√(1 − ζ²))) = 27.9 V
    // (series resonant circuit); at work the same capacitor sees 15 V and some ripple.
    std::string text = supply_text("buck");
    const std::string aluminium = "[seat.input_capacitor]\nfitted = \"aluminium\"\n";
    text.replace(text.find(aluminium), aluminium.size(), "[seat.input_capacitor.element]\ncapacitance = \"10 µF\"\nresistance = \"0.1 mΩ\"\n");
    const Exposure hot = expose(setup_of(text), End::worst, {});
    const StressValue* seen = single(hot, Seat::input_capacitor);
    REQUIRE(seen != nullptr);
    CHECK(seen->value == Approx(27.9).epsilon(0.005));
    CHECK(seen->made_of.front().name == "input");
    CHECK(seen->made_of.back().name == "ring of the hot connection");
    CHECK(single(hot, Seat::switch_)->value >= seen->value - 0.01);  // open, it stands between that and nothing
    const Exposure cold = expose(setup_of(text, {"source.switched=false"}), End::worst, {});
    CHECK(single(cold, Seat::input_capacitor)->value < 16);
    // No [source]: a lead is assumed, and the answer says so.
    std::string bare = text;
    bare.erase(bare.find("[source]"), bare.find("[winding]") - bare.find("[source]"));
    const Exposure assumed = expose(setup_of(bare), End::worst, {});
    REQUIRE_FALSE(single(assumed, Seat::input_capacitor)->rests_on.empty());
    CHECK(single(assumed, Seat::input_capacitor)->rests_on.front() == "connected hot through 30 mΩ and 1 µH: the file gives no source");
    // A boost's output is filled through its rectifier, which carries the surge.
    const Exposure boost = expose(setup_of(supply_text("boost")), End::worst, {});
    const StressValue* surge = boost.seats.at(Seat::rectifier).front().find(Stress::current_surge);
    REQUIRE(surge != nullptr);
    CHECK(surge->value > 15);
}

TEST_CASE("a loss whose figure is missing leaves the junction temperature unproven", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text());
    CHECK(lacks(expose(without(setup, Seat::switch_, Symbol::C_oss), End::worst, {}), Seat::switch_, Stress::junction_temperature, "C_oss"));
    CHECK(lacks(expose(without(setup, Seat::rectifier, Symbol::C_j), End::worst, {}), Seat::switch_, Stress::junction_temperature, "C_j of the rectifier"));
    CHECK(lacks(expose(without(setup, Seat::rectifier, Symbol::I_R), End::worst, {}), Seat::rectifier, Stress::runaway_gain, "I_R"));
    CHECK(lacks(expose(without(setup, Seat::switch_, Symbol::R_thjc), End::worst, {}), Seat::switch_, Stress::junction_temperature, "R_th(j-c)"));
    const Exposure weak = expose(setup_of(supply_text(), {"drive.voltage=4.6 V"}), End::worst, {});  // plateau: 1.6 times 3 V
    CHECK(lacks(weak, Seat::switch_, Stress::junction_temperature, "a drive voltage above the gate plateau"));
    bool told = false;
    for (const std::string& one : weak.not_included) told = told || one.find("plateau of 4.8 V") != std::string::npos;
    CHECK(told);
}

TEST_CASE("the coupling capacitor stands at the voltage that its windings tie it to", "[engine][exposure]") {
    // Mean of the coupling capacitor: V_in in a sepic, V_in + V_out in a cuk, V_out in a zeta (formula tables of textbooks; the
    // windings carry no mean voltage). A class 2 ceramic there loses capacitance accordingly: planning figures, a quarter left at the
    // rated voltage, half at half of it.
    const At at{12, 8, 1, 100e3, kCelsiusZero + 25};
    const auto chip = [](const std::string& name) -> std::optional<Lot> {
        if (name != "film") return find_specimen(name);
        return lot_of("capacitor/ceramic 2", {{"C", "22 µF"}, {"U_R", "24 V"}, {"ESR", "3 mΩ"}}, Known::datasheet, name);
    };
    const auto left = [&](const std::string& topology) {
        const Setup setup = assemble(read_converter(supply_text(topology), "supply.toml"), chip);
        return circuit_of(setup, End::worst, {}, at).coupling_capacitor.front().capacitance / 22e-6;
    };
    CHECK(left("sepic") == Approx(0.5));
    CHECK(left("cuk") == Approx(0.5 - 0.25 * (20.0 / 24 - 0.5) / 0.5));
    CHECK(left("zeta") == Approx(1 - 0.5 * (8.0 / 24) / 0.5));
}

TEST_CASE("core loss by Steinmetz follows the ripple of the point and is told where nothing is given", "[engine][exposure]") {
    std::string text = supply_text("buck");
    const std::string given = "core_loss  = \"0.4 W\"";
    text.replace(text.find(given), given.size(), "turns = 18\ncore_area = \"65 mm2\"\ncore_volume = \"4200 mm3\"\nsteinmetz = [2, 1.3, 2.5]");
    const Setup setup = setup_of(text);
    const Bench bench = bench_of(setup, End::worst, {});
    Solver solver;
    const auto core = [&](double vin) {
        const Operated operated = operate(bench, {vin, 5, 2, 100e3, kCelsiusZero + 45}, solver);
        const double swing = operated.state.primary.current_peak - operated.state.primary.current_min;
        const double flux = 33e-6 * swing / (2 * 18 * 65e-6);
        for (const Loss& loss : operated.losses)
            if (loss.name == "primary winding core") {
                CHECK(loss.power == Approx(4200e-9 * 2 * std::pow(100e3, 1.3) * std::pow(flux, 2.5)).epsilon(1e-3));
                return loss.power;
            }
        return 0.0;
    };
    CHECK(core(15) > 1.2 * core(10.5));
    std::string bare = supply_text("buck");
    bare.erase(bare.find(given), given.size());
    bool told = false;
    for (const std::string& one : expose(setup_of(bare), End::worst, {}).not_included) told = told || one.find("core loss") == 0;
    CHECK(told);
}
