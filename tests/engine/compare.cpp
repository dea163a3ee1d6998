// SPDX-License-Identifier: GPL-3.0-or-later
// One lot under several rulebooks, and two lots rule by rule.
#include "engine/answer/compare.hpp"

#include <catch2/catch.hpp>

#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

TEST_CASE("a lot stands under each rulebook as that rulebook alone judges it", "[engine][compare]") {
    const Setup setup = setup_of(supply_text("boost"));
    std::vector<const Rulebook*> books;
    for (const char* name : {"house", "gjb-z-35:I", "eee-inst-002", "mil-dtl-917"}) books.push_back(find_rulebook(name));
    const std::vector<UnderBook> answers = under_books(setup, Seat::rectifier, books);
    REQUIRE(answers.size() == 4);
    for (const UnderBook& one : answers) {
        INFO(one.book->name);
        for (const SeatReport& report : check(setup, *one.book).seats)
            if (report.seat == Seat::rectifier) CHECK(report.verdict == one.report.verdict);
    }
    bool voltage = false;
    for (const StressUnderBooks& one : by_stress(answers)) {
        for (std::size_t k = 1; k < one.entries.size(); ++k)
            if (one.entries[k].finding.limit && one.entries[k].finding.rule.bound != BoundKind::at_least) CHECK(*one.entries[k - 1].finding.limit <= *one.entries[k].finding.limit);
        if (one.stress != Stress::voltage_peak_repetitive) continue;
        voltage = true;
        REQUIRE(one.entries.size() == 4);
        // V_RRM 60 V at 0.60 (GJB/Z 35-93, 6.2, level I), 0.70 (EEE-INST-002, S1), 0.80 (house), and the printed rating.
        CHECK(one.entries[0].finding.limit == Approx(36));
        CHECK(one.entries[1].finding.limit == Approx(42));
        CHECK(one.entries[2].finding.limit == Approx(48));
        CHECK(one.entries[3].finding.limit == Approx(60));
    }
    CHECK(voltage);
}

TEST_CASE("two lots stand side by side rule by rule and the one with more room is told", "[engine][compare]") {
    const Rulebook& house = *find_rulebook("house");
    const auto report = [&](const std::string& volts, const std::string& surge) {
        std::vector<std::pair<std::string, std::string>> figures = {{"V_RRM", volts}};
        if (!surge.empty()) figures.emplace_back("I_FSM", surge);
        std::vector<StressValue> sees = {seen(Stress::voltage_peak_repetitive, 40), seen(Stress::current_average, 2)};
        if (!surge.empty()) sees.push_back(seen(Stress::current_surge, 20));
        return judge_part(judged(lot_of("rectifier/schottky", figures), sees), house);
    };
    const std::vector<SideBySide> rules = side_by_side(report("60 V", "100 A"), report("45 V", ""));
    REQUIRE(rules.size() >= 3);
    const auto of = [&](const std::string& id) {
        const auto found = std::find_if(rules.begin(), rules.end(), [&](const SideBySide& one) { return one.rule.id == id; });
        REQUIRE(found != rules.end());
        return *found;
    };
    CHECK(of("rectifier-voltage").better == -1);
    CHECK(of("rectifier-voltage").first->verdict == Verdict::holds);
    CHECK(of("rectifier-voltage").second->verdict == Verdict::rejected);
    CHECK_FALSE(of("rectifier-surge").second.has_value());
    CHECK(of("rectifier-current").better == 0);
    const auto rank = [&](const std::string& id) { return std::find_if(rules.begin(), rules.end(), [&](const SideBySide& one) { return one.rule.id == id; }) - rules.begin(); };
    CHECK(rank("rectifier-voltage") < rank("rectifier-current"));
}

TEST_CASE("a lot that holds at the worst end of the others alone is no more than unproven in a ranking too", "[engine][rank]") {
    // The surge of the hot connection is greater where windings and capacitors are at their best: 36.8 A against 35.6 A here, and 80 % of
    // I_FSM lie between.
    const Setup setup = setup_of(supply_text("boost"), {"output_voltage=24 V", "output_current=2 A", "ambient=45 °C"});
    const Rulebook& house = *find_rulebook("house");
    Lot lot = find_specimen("rectifier").value();
    lot.part.figures.push_back(parse_figure(Symbol::I_FSM, "45 A", Known::datasheet));
    const std::vector<Candidate> ranked = rank(setup, Seat::rectifier, {lot}, house);
    REQUIRE(ranked.size() == 1);
    CHECK(ranked.front().report.verdict == Verdict::unproven);
    for (const SeatReport& report : check(with_fitted(setup, Seat::rectifier, {Fitted{lot, 1}}), house).seats)
        if (report.seat == Seat::rectifier) CHECK(report.verdict == ranked.front().report.verdict);
}
