// SPDX-License-Identifier: GPL-3.0-or-later
// What is not known of one part must not let another hold.
#include <catch2/catch.hpp>

#include "engine/words/words.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

Setup without(Setup setup, Seat seat, Symbol symbol) {
    std::vector<Fitted> fitted = setup.fitted.at(seat);
    std::erase_if(fitted.front().lot.part.figures, [&](const Figure& figure) { return figure.symbol == symbol; });
    return with_fitted(setup, seat, fitted);
}

const Finding* finding_of(const CheckReport& report, Seat seat, const std::string& rule) {
    for (const SeatReport& one : report.seats)
        if (one.seat == seat)
            for (const Finding& finding : one.findings)
                if (finding.rule.id == rule) return &finding;
    return nullptr;
}

}  // namespace

TEST_CASE("a rectifier without its V_F leaves the currents of every seat unproven", "[engine][answer][unknown]") {
    const CheckReport report = check(without(setup_of(supply_text()), Seat::rectifier, Symbol::V_F), *find_rulebook("house"));
    const Finding* ripple = finding_of(report, Seat::output_capacitor, "capacitor-ripple");
    REQUIRE(ripple != nullptr);
    CHECK(ripple->verdict == Verdict::unproven);
    CHECK(words(*ripple).line.ends_with("V_F of D1 is not known"));
    CHECK(finding_of(report, Seat::output_capacitor, "polymer-voltage")->verdict == Verdict::holds);  // a regulated voltage does not depend on it
}

TEST_CASE("a rectifier whose heat is not known leaves the switch beside it on the sink unproven", "[engine][answer][unknown]") {
    const CheckReport report = check(without(setup_of(supply_text()), Seat::rectifier, Symbol::R_thjc), *find_rulebook("house"));
    const Finding* heat = finding_of(report, Seat::switch_, "switch-temperature");
    REQUIRE(heat != nullptr);
    CHECK(heat->verdict == Verdict::unproven);
    CHECK(words(*heat).line.ends_with("the heat of D1 on the same heatsink is not known"));
}

TEST_CASE("where a junction runs away in a box no capacitor in it holds on its temperature", "[engine][answer][unknown]") {
    std::string text = supply_text();
    text.replace(text.find("fitted    = \"rectifier\""), 23, "fitted    = \"leaky\"");
    text.insert(text.find("[seat.switch]"), "[enclosure]\nresistance = \"40 K/W\"\n");
    const CheckReport report = check(setup_of(text), *find_rulebook("house"));
    CHECK(report.exposure.runaway);
    for (const char* rule : {"capacitor-hot-spot", "polymer-life"})
        if (const Finding* finding = finding_of(report, Seat::output_capacitor, rule)) CHECK(finding->verdict != Verdict::holds);
    REQUIRE(finding_of(report, Seat::output_capacitor, "capacitor-hot-spot") != nullptr);
}

TEST_CASE("a clamp below what the switch blocks earns no credit and burns what there is", "[engine][answer][unknown]") {
    std::string text = supply_text("flyback", "[clamp]\nvoltage = \"20 V\"\npower = \"2 W\"\n");
    text.erase(text.find("overshoot = "), std::string("overshoot = \"4 V @ 9.5 A\"").size());
    text.insert(text.find("[winding.primary]"), "leakage = \"1 µH\"\n");
    const CheckReport report = check(setup_of(text), *find_rulebook("house"));
    const StressValue* seen = report.exposure.seats.at(Seat::switch_).front().find(Stress::voltage_peak_repetitive);
    REQUIRE(seen != nullptr);
    CHECK(seen->value > 1.15 * 30);  // 15 V + 15 V, and the assumed fifth
    REQUIRE_FALSE(seen->rests_on.empty());
    CHECK(seen->rests_on.front().starts_with("the clamp of 20 V lies below the "));
    for (const SeatReport& one : report.beside)
        if (one.reference == "clamp") CHECK(one.verdict == Verdict::rejected);
}

TEST_CASE("no load at all is judged as next to none and not refused", "[engine][answer][unknown]") {
    const CheckReport report = check(setup_of(supply_text(), {"operating.output_current=0 A .. 2.5 A", "drive.minimum_on_time=400 ns"}), *find_rulebook("house"));
    CHECK(report.verdict == Verdict::rejected);  // the shortest on-time delivers too much
    REQUIRE(report.converter.size() == 1);
    CHECK(report.converter.front().verdict == Verdict::rejected);
    bool told = false;
    for (const std::string& one : report.exposure.assumptions) told |= one.starts_with("a load of 0 A counted as 2.5 mA");
    CHECK(told);
    // Where nothing sets a shortest on-time, no load is regulated as well as any.
    const CheckReport free = check(setup_of(supply_text(), {"operating.output_current=0 A .. 2.5 A", "drive.minimum_on_time="}), *find_rulebook("house"));
    CHECK(free.converter.front().verdict == Verdict::holds);
}

TEST_CASE("one forward voltage at a small current is no ground to reject on", "[engine][answer][unknown]") {
    // 0.3 V at 0.1 A carried as a straight line to 10 A would be 9 V: a guess, that no part of the kind need come near.
    Setup setup = setup_of(supply_text());
    std::vector<Fitted> fitted = setup.fitted.at(Seat::rectifier);
    std::erase_if(fitted.front().lot.part.figures, [](const Figure& figure) { return figure.symbol == Symbol::V_F; });
    fitted.front().lot.part.figures.push_back(parse_figure(Symbol::V_F, "0.30 V @ 0.1 A, 25 °C", Known::datasheet));
    const CheckReport report = check(with_fitted(setup, Seat::rectifier, fitted), *find_rulebook("house"));
    for (const char* rule : {"rectifier-temperature", "rectifier-runaway"}) {
        INFO(rule);
        REQUIRE(finding_of(report, Seat::rectifier, rule) != nullptr);
        CHECK(finding_of(report, Seat::rectifier, rule)->verdict == Verdict::unproven);
    }
}

TEST_CASE("between two figures far apart the forward voltage stands above the straight line", "[engine][loss]") {
    // A junction's voltage goes with the logarithm of its current; what of the rise is logarithm two figures do not tell, so all
    // of it is taken: at the mean of (10 − 0.1)/ln 100 = 2.15 A the curve stands 0.25 V·(0.666 − 0.207) above the chord.
    Part part = lot_of("rectifier/schottky", {{"V_RRM", "60 V"}, {"I_F(AV)", "10 A"}, {"V_F", "0.30 V @ 0.1 A, 25 °C"}, {"V_F", "0.55 V @ 10 A, 25 °C"}}, Known::datasheet, "x").part;
    const RectifierModel worst = rectifier_model(part, 1, End::worst), best = rectifier_model(part, 1, End::best);
    REQUIRE(worst.threshold);
    CHECK(*worst.threshold - *best.threshold == Approx(0.25 * (std::log(21.5) / std::log(100.) - (2.15 - 0.1) / 9.9)).epsilon(0.01));
}
