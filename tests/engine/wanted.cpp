// SPDX-License-Identifier: GPL-3.0-or-later
// What is wanted in a seat: a part exactly on every line holds, by the whole check; a part 1 % worse in any line does not.
#include "engine/answer/wanted.hpp"

#include <catch2/catch.hpp>

#include "engine/words/wanted_words.hpp"
#include "engine/words/words.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

Setup boost(const std::vector<std::string>& changes = {}) {
    std::vector<std::string> all = {"output_voltage=24 V", "output_current=2 A", "ambient=45 °C", "operating.output_ripple=200 mV", "operating.life=20000 h"};
    all.insert(all.end(), changes.begin(), changes.end());
    return setup_of(supply_text("boost"), all);
}

Verdict verdict_with(const Setup& setup, Seat seat, const Part& part, int count, const Rulebook& book) {
    Lot lot;
    lot.part = part;
    lot.count = count;
    for (const SeatReport& report : check(with_fitted(setup, seat, {Fitted{lot, count}}), book).seats)
        if (report.seat == seat) {
            for (const Finding& finding : report.findings)
                if (finding.verdict != Verdict::holds) UNSCOPED_INFO(block(finding));
            return report.verdict;
        }
    throw std::runtime_error("the seat is not judged");
}

void on_the_line(const Setup& setup, Seat seat, const Rulebook& book, const std::string& technology = "") {
    const Wanted answer = wanted(setup, seat, book, technology);
    INFO(wanted_line(answer));
    REQUIRE(answer.found);
    CHECK(answer.lines.size() >= 2);
    CHECK(verdict_with(setup, seat, answer.part, answer.count, book) == Verdict::holds);
    for (const WantedLine& line : answer.lines) {
        INFO(info(line.figure).name);
        CHECK(verdict_with(setup, seat, worse_in(answer.part, line.figure, 0.01), answer.count, book) != Verdict::holds);
        CHECK_FALSE(line.rules.empty());
    }
}

}  // namespace

TEST_CASE("a part exactly on what is wanted holds and 1 % worse in any line does not", "[engine][wanted]") {
    const Rulebook& house = *find_rulebook("house");
    SECTION("switch") { on_the_line(boost(), Seat::switch_, house); }
    SECTION("rectifier") { on_the_line(boost(), Seat::rectifier, house); }
    SECTION("input capacitor") { on_the_line(boost(), Seat::input_capacitor, house); }
    SECTION("output capacitor") { on_the_line(boost(), Seat::output_capacitor, house); }
    SECTION("two output capacitors in parallel") { on_the_line(boost({"seat.output_capacitor.count=2"}), Seat::output_capacitor, house); }
    SECTION("a film capacitor where a polymer one is fitted") { on_the_line(boost(), Seat::output_capacitor, house, "film"); }
}

TEST_CASE("what is wanted by a published rulebook holds by that rulebook", "[engine][wanted][published]") {
    on_the_line(boost(), Seat::switch_, *find_rulebook("gjb-z-35:II"));
    on_the_line(boost(), Seat::rectifier, *find_rulebook("ecss-q-st-30-11c"));
}

TEST_CASE("what does not hold as fitted is made better until it does", "[engine][wanted]") {
    Lot poor = find_specimen("rectifier").value();
    for (Figure& figure : poor.part.figures)
        if (figure.symbol == Symbol::I_R) figure.value = {1, 1, 1};  // runs away
    const Setup setup = with_fitted(boost(), Seat::rectifier, {Fitted{poor, 1}});
    CHECK(verdict_with(setup, Seat::rectifier, poor.part, 1, *find_rulebook("house")) == Verdict::rejected);
    on_the_line(setup, Seat::rectifier, *find_rulebook("house"));
}

TEST_CASE("where no part of a kind is permitted nothing is wanted of it", "[engine][wanted]") {
    const Wanted answer = wanted(boost(), Seat::input_capacitor, *find_rulebook("mil-hdbk-338b:I"));
    CHECK_FALSE(answer.found);
    CHECK(answer.lines.empty());
    CHECK(wanted_line(answer) == boost().converter.reference(Seat::input_capacitor) + ": no aluminium capacitor holds here, whatever its ratings");
    CHECK(answer.report.verdict == Verdict::rejected);
    CHECK_THROWS_AS(wanted(boost(), Seat::input_capacitor, *find_rulebook("house"), "films"), InputError);
}

TEST_CASE("a wanted line is rounded to the safe side", "[engine][wanted][words]") {
    WantedLine line;
    line.figure = Symbol::V_RRM;
    line.at_least = true;
    line.bounds = {parse_figure(Symbol::V_RRM, "42.61 V", Known::datasheet)};
    line.usual = 45;
    CHECK(wanted_text(line) == "42.7 V or more (45 V can be had)");
    line.bounds = {parse_figure(Symbol::V_RRM, "45 V", Known::datasheet)};
    CHECK(wanted_text(line) == "45 V or more");
    line = {};
    line.figure = Symbol::ESR;
    line.bounds = {parse_figure(Symbol::ESR, "33.79 mΩ @ 100 kHz", Known::datasheet)};
    CHECK(wanted_text(line) == "33.7 mΩ at 100 kHz or less");
    line.figure = Symbol::I_FAV;
    line.at_least = true;
    line.bounds = {parse_figure(Symbol::I_FAV, "both legs 3.441 A", Known::datasheet)};
    CHECK(wanted_text(line) == "1.73 A or more for each leg");
}
