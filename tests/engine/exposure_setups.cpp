// SPDX-License-Identifier: GPL-3.0-or-later
// From files and lots to what is computed: nothing is taken in silence, and heat that has nowhere to go is found out.
#include <catch2/catch.hpp>
#include <cmath>

#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

const At kPoint{12, 12, 2, 100e3, kCelsiusZero + 25};

Setup with_lot(const Setup& setup, Seat seat, Lot lot, int count = 1) { return with_fitted(setup, seat, {{std::move(lot), count}}); }

}  // namespace

TEST_CASE("lots not found and lots of another family are told together with their places", "[engine][exposure]") {
    const std::vector<std::string> changes = {"seat.switch.fitted=999-X", "seat.rectifier.fitted=film"};
    try {
        (void)setup_of(supply_text(), changes);
        FAIL("no fault was found");
    } catch (const InputError& error) {
        REQUIRE(error.faults.size() == 2);
        CHECK(error.faults[0].message == "the bin has no lot or part \"999-X\"");
        CHECK(error.faults[0].field == "seat.switch.fitted");
        CHECK(error.faults[1].message == "\"film\" is a capacitor, and the seat takes a rectifier");
    }
}

TEST_CASE("typed figures stand before those of the part and bare elements are used exactly", "[engine][exposure]") {
    const Setup typed = setup_of(supply_text("sepic", "[seat.switch.figures]\n\"R_DS(on)\" = \"40 mΩ\"\n"));
    const Circuit circuit = circuit_of(typed, End::worst, {}, kPoint);
    CHECK(circuit.switch_resistance == Approx(40e-3));
    std::string text = supply_text();
    const std::string film = "[seat.coupling_capacitor]\nfitted = \"film\"\n";
    text.replace(text.find(film), film.size(), "[seat.coupling_capacitor.element]\ncapacitance = \"100 µF\"\nresistance = \"20 mΩ\"\n");
    for (const End end : {End::best, End::typical, End::worst}) {
        const Circuit bare = circuit_of(setup_of(text), end, {}, kPoint);
        REQUIRE(bare.coupling_capacitor.size() == 1);
        CHECK(bare.coupling_capacitor[0].capacitance == Approx(100e-6).epsilon(1e-14));
        CHECK(bare.coupling_capacitor[0].resistance == Approx(20e-3).epsilon(1e-14));
    }
    text.erase(text.find("[seat.coupling_capacitor.element]"));
    CHECK_THROWS_AS(circuit_of(setup_of(text), End::worst, {}, kPoint), InputError);
}

TEST_CASE("parts in parallel share and every kind of a bank is a branch of its own", "[engine][exposure]") {
    const Setup one = setup_of(supply_text());
    const Setup two = with_fitted(one, Seat::output_capacitor, {{*find_specimen("polymer"), 2}, {*find_specimen("aluminium"), 1}});
    const Circuit circuit = circuit_of(two, End::typical, {}, kPoint);
    REQUIRE(circuit.output.size() == 2);
    CHECK(circuit.output[0].capacitance == Approx(2 * 940e-6));
    CHECK(circuit.output[0].resistance == Approx(3e-3));
    CHECK(circuit.output[1].capacitance == Approx(680e-6));
    const Exposure exposure = expose(two, End::typical, {});
    REQUIRE(exposure.seats.at(Seat::output_capacitor).size() == 2);
    const double strong = exposure.seats.at(Seat::output_capacitor)[0].find(Stress::ripple_current)->value;
    const double weak = exposure.seats.at(Seat::output_capacitor)[1].find(Stress::ripple_current)->value;
    CHECK(strong > 3 * weak);  // 6 mΩ a piece beside 32 mΩ
    CHECK(circuit_of(with_lot(one, Seat::switch_, *find_specimen("switch"), 2), End::typical, {}, kPoint).switch_resistance ==
          Approx(0.5 * circuit_of(one, End::typical, {}, kPoint).switch_resistance));
    CHECK(with_fitted(one, Seat::switch_, {}).fitted.count(Seat::switch_) == 0);
}

TEST_CASE("a pulled electrolytic without C and ESR measured is worn at its worst end", "[engine][exposure]") {
    Lot lot = *find_specimen("aluminium");
    lot.origin = Origin::pulled;
    const Setup setup = with_lot(setup_of(supply_text()), Seat::output_capacitor, lot);
    // The makers' own end of life: 20 % of C lost, twice the ESR.
    const CapacitorValues worn = circuit_of(setup, End::worst, {}, kPoint).output[0], fresh = circuit_of(setup, End::best, {}, kPoint).output[0];
    CHECK(worn.capacitance == Approx(0.8 * 680e-6));
    CHECK(worn.resistance == Approx(64e-3));
    CHECK(fresh.capacitance == Approx(680e-6));
    CHECK(fresh.resistance == Approx(32e-3));
    std::erase_if(lot.part.figures, [](const Figure& figure) { return figure.symbol == Symbol::ESR || figure.symbol == Symbol::C; });
    lot.part.figures.push_back(parse_figure(Symbol::ESR, "41 mΩ @ 100 kHz", Known::measured));
    lot.part.figures.push_back(parse_figure(Symbol::C, "640 µF", Known::measured));
    CHECK(circuit_of(with_lot(setup, Seat::output_capacitor, lot), End::worst, {}, kPoint).output[0].resistance == Approx(41e-3));
}

TEST_CASE("a shared sink runs away beyond one resistance and not below it", "[engine][exposure]") {
    const auto look_at = [](double sink) {
        return expose(setup_of(supply_text(), {"seat.rectifier.fitted=leaky", "heatsink.small.resistance=" + std::to_string(sink) + " K/W"}), End::worst, {});
    };
    REQUIRE_FALSE(look_at(1).runaway);
    REQUIRE(look_at(40).runaway);
    double low = 1, high = 40;
    for (int k = 0; k < 10; ++k) {
        const double middle = 0.5 * (low + high);
        (look_at(middle).runaway ? high : low) = middle;
    }
    double before = 0;
    for (const double share : {0.8, 0.9, 0.95, 0.99}) {  // from the cool side
        const Exposure exposure = look_at(share * low);
        CHECK_FALSE(exposure.runaway);
        const double gain = exposure.seats.at(Seat::rectifier)[0].find(Stress::runaway_gain)->value;
        CHECK(gain < 1);
        CHECK(gain > before);
        before = gain;
    }
    CHECK(before > 0.5);
    for (const double share : {1.3, 1.1, 1.05, 1.01}) {  // from the hot side
        const Exposure exposure = look_at(share * high);
        CHECK(exposure.runaway);
        CHECK(exposure.seats.at(Seat::rectifier)[0].find(Stress::runaway_gain)->value > 1);
    }
}

TEST_CASE("an enclosure warms everything in it by all that is lost in it", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text("sepic", "[enclosure]\nresistance = \"1.5 K/W\"\n"));
    const Bench bench = bench_of(setup, End::worst, {});
    Solver solver;
    const At at{10.5, 15, 2, 100e3, kCelsiusZero + 30};
    const Operated operated = operate(bench, at, solver);
    REQUIRE(operated.stable);
    CHECK(operated.air == Approx(at.ambient + 1.5 * total(operated.losses)).epsilon(1e-6));
    CHECK(operated.state.input_power == Approx(operated.state.output_power + total(operated.losses)).epsilon(1e-6));
}

TEST_CASE("a junction without its thermal resistance is told and the rest still computed", "[engine][exposure]") {
    Lot lot = *find_specimen("rectifier");
    std::erase_if(lot.part.figures, [](const Figure& figure) { return figure.symbol == Symbol::R_thjc; });
    const Exposure exposure = expose(with_lot(setup_of(supply_text()), Seat::rectifier, lot), End::worst, {});
    const PartExposure& part = exposure.seats.at(Seat::rectifier)[0];
    CHECK(part.find(Stress::junction_temperature) == nullptr);
    CHECK(part.find(Stress::voltage_peak_repetitive) != nullptr);
    bool told = false;
    for (const auto& [stress, figure] : part.missing) told = told || (stress == Stress::junction_temperature && figure == "R_th(j-c)");
    CHECK(told);
}

TEST_CASE("electrical points take pairs and say which of them they do not understand", "[engine][exposure]") {
    const Setup setup = setup_of(supply_text());
    const ElectricalReport asked = electrical(setup, {"input_voltage=11 V", "duty=0.4"});
    REQUIRE(asked.points.size() == 1);
    CHECK(asked.points[0].state.duty == Approx(0.4));
    CHECK(asked.points[0].at.input_voltage == 11);
    CHECK_THROWS_AS(electrical(setup, {"input_volts=11 V"}), InputError);
    CHECK_THROWS_AS(electrical(setup, {"duty=0.4", "output_voltage=12 V"}), InputError);
    const ElectricalReport range = electrical(setup, {});
    const auto worst = [&](const std::string& name) {
        for (const auto& one : range.worst)
            if (one.name == name) return one.value;
        return std::nan("");
    };
    for (const ElectricalPoint& point : range.points) {
        CHECK(point.state.switch_.voltage_peak <= worst("switch.voltage_peak"));
        CHECK(point.state.output_ripple <= worst("output_ripple"));
    }
}

TEST_CASE("a point of the range that cannot be computed is named and not left out", "[engine][exposure]") {
    // The network is made for 1 kHz to 5 MHz; a range that leaves it is no range to say of that everything holds.
    Setup setup = setup_of(supply_text());
    setup.converter.operating.frequency = {100e3, 6e6};
    CHECK_THROWS_AS(expose(setup, End::worst, {}), OutsideModel);
    CHECK_THROWS_WITH(expose(setup, End::worst, {}), Catch::Matchers::StartsWith("at input 10.5 V, output 8.73 V and 100 mA: "));
    // Nothing drawn, and an on-time that may not be shorter: the output climbs, and that is no regulation.
    const Setup idle = setup_of(supply_text(), {"operating.output_current=[\"0 A\", \"2.5 A\"]"});
    const Exposure exposure = expose(idle, End::worst, {});
    const StressValue* regulation = exposure.converter.find(Stress::regulation);
    REQUIRE(regulation != nullptr);
    CHECK(regulation->value < 1);
    CHECK(regulation->at.output_current == Approx(2.5e-3));  // no load counts as a thousandth of the highest
    REQUIRE_FALSE(regulation->rests_on.empty());
    CHECK(regulation->rests_on.front().find("least load") != std::string::npos);
}
