// SPDX-License-Identifier: GPL-3.0-or-later
// Verdicts where not everything is known: what holds at the worst, what breaks at the best, and what lies between.
#include <catch2/catch.hpp>
#include <cmath>

#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

const Rulebook& house() { return *find_rulebook("house"); }

Finding finding_of(const JudgedPart& part, const std::string& id) {
    const SeatReport report = judge_part(part, house());
    const Finding* found = find_rule(report, id);
    REQUIRE(found != nullptr);
    return *found;
}

JudgedPart across(double volts, const std::string& rating, Known known = Known::datasheet) {
    JudgedPart part = judged(lot_of("capacitor/aluminium", {{"U_R", rating}}, known), {seen(Stress::voltage_peak_repetitive, volts)});
    part.lot.part.figures.push_back(parse_figure(Symbol::ESR, "40 mΩ", Known::measured));
    return part;
}

}  // namespace

TEST_CASE("a 25 V aluminium capacitor holds at exactly 20.0 V and is rejected 1 mV above", "[engine][judge]") {
    // Common practice, no source: 80 % of the rated voltage.
    CHECK(finding_of(across(20.0, "25 V"), "aluminium-voltage").verdict == Verdict::holds);
    CHECK(finding_of(across(20.0 * (1 + 5e-10), "25 V"), "aluminium-voltage").verdict == Verdict::holds);
    const Finding above = finding_of(across(20.001, "25 V"), "aluminium-voltage");
    CHECK(above.verdict == Verdict::rejected);
    CHECK(words(above).line == "20.001 V across a 25 V part (80 %); the rule allows 20.000 V: 1 mV too much");
    CHECK(above.used == Approx(0.80004));
    CHECK(above.left == Approx(-0.001));
    CHECK(above.headroom == Approx(-0.00005));
}

TEST_CASE("a stress that is not a number proves nothing", "[engine][judge]") {
    CHECK(finding_of(across(std::nan(""), "25 V"), "aluminium-voltage").verdict == Verdict::unproven);
    CHECK(finding_of(across(HUGE_VAL, "25 V"), "aluminium-voltage").verdict == Verdict::rejected);
}

TEST_CASE("a figure that was only told decides nothing, in either direction", "[engine][judge]") {
    const Finding within = finding_of(across(15, "25 V", Known::told), "aluminium-voltage");
    CHECK(within.verdict == Verdict::unproven);
    CHECK(words(within).line == "15.0 V across a 25 V part (60 %); the rule allows 20.0 V: 5.0 V left, if U_R is as told");
    CHECK(words(within).settle == "vouch for U_R (25 V), told and not confirmed");
    CHECK(finding_of(across(30, "25 V", Known::told), "aluminium-voltage").verdict == Verdict::unproven);
}

TEST_CASE("a spread rejects only where even its best end breaks, and holds only where its worst does", "[engine][judge]") {
    JudgedPart part = judged(lot_of("capacitor/polymer", {{"T_max", "105 °C"}}), {});
    part.lot.part.figures.push_back(parse_figure(Symbol::ESR, "10 .. 20 .. 40 mΩ", Known::kind));
    const auto verdict = [&](double best, double worst) {
        part.best.stresses = {seen(Stress::hot_spot_temperature, kCelsiusZero + best)};
        part.worst.stresses = {seen(Stress::hot_spot_temperature, kCelsiusZero + worst)};
        return finding_of(part, "capacitor-hot-spot");
    };
    CHECK(verdict(60, 95).verdict == Verdict::holds);
    CHECK(verdict(60, 99).verdict == Verdict::unproven);
    CHECK(words(verdict(60, 99)).line == "hot spot at 99 °C in a 105 °C part; the rule allows 95 °C: 4 K too hot, at the worst that is possible");
    CHECK(verdict(96, 99).verdict == Verdict::rejected);
    CHECK(verdict(96, 99).stress->value == Approx(kCelsiusZero + 96));
    CHECK(verdict(99, 60).verdict == Verdict::unproven);  // the ends are ends of figures: either may be the hotter one
}

TEST_CASE("a figure not on record leaves its rules unproven, and says how much it may be", "[engine][judge]") {
    JudgedPart part = judged(lot_of("capacitor/film", {{"T_max", "105 °C"}, {"I_R~", "3.5 A @ 100 kHz"}}), {seen(Stress::ripple_current, 1.31)});
    // A hot spot of 45 °C and 250 K for each ohm: at most 95 °C means at most 0.2 Ω.
    part.probe = [](Symbol symbol, double value, const At*) -> std::optional<PartExposure> {
        if (symbol != Symbol::ESR) return std::nullopt;
        PartExposure out;
        out.stresses = {seen(Stress::hot_spot_temperature, kCelsiusZero + 45 + 250 * value), seen(Stress::ripple_current, 1.31)};
        return out;
    };
    part.best.stresses.push_back(seen(Stress::hot_spot_temperature, kCelsiusZero + 45));
    part.worst = part.best;
    const Finding hot = finding_of(part, "capacitor-hot-spot");
    CHECK(hot.verdict == Verdict::unproven);
    CHECK(hot.missing == "ESR");
    REQUIRE(hot.bound);
    CHECK(hot.bound->figure == Symbol::ESR);
    CHECK(*hot.bound->at_most <= 0.2);
    CHECK(*hot.bound->at_most > 0.189);  // rounded down to two digits, never up
    CHECK(words(hot).line == "hot spot at 45 °C in a 105 °C part; its ESR is not on record");
    CHECK(words(hot).settle == "an ESR of 190 mΩ or less at 100 kHz");
    const Finding ripple = finding_of(part, "capacitor-ripple");
    CHECK(words(ripple).line == "1.31 A ripple through a 3.5 A part (37 %); its ESR is not on record");
}

TEST_CASE("the bound found at one point is proved over the whole range before it is told", "[engine][judge]") {
    const At point = kAt;
    int proofs = 0;
    const HoldsAt holds = [&](double value, const At* only) -> std::optional<bool> {
        if (only) return value <= 3.0;  // the point alone would allow 3
        ++proofs;
        return value <= 2.0;  // somewhere else in the range only 2
    };
    const auto found = bound_between(0.1, 50, holds, &point);
    REQUIRE(found);
    CHECK(*found <= 2.0);
    CHECK(*found > 1.98);
    CHECK(proofs > 2);
    CHECK_FALSE(bound_between(0.1, 50, [](double, const At*) { return std::optional(false); }, &point));
    CHECK_FALSE(bound_between(0.1, 50, [](double, const At*) { return std::optional(true); }, &point));
}

TEST_CASE("a rating not on record is asked for by the value that would do", "[engine][judge]") {
    JudgedPart part = across(18.1, "25 V");
    std::erase_if(part.lot.part.figures, [](const Figure& figure) { return figure.symbol == Symbol::U_R; });
    const Finding finding = finding_of(part, "aluminium-voltage");
    CHECK(finding.verdict == Verdict::unproven);
    CHECK(words(finding).line == "18.1 V; its U_R is not on record");
    CHECK(words(finding).settle == "a U_R of 22.7 V or more, read off the part or its data sheet");
}

TEST_CASE("a pulled aluminium electrolytic never holds before C and ESR are measured", "[engine][judge]") {
    JudgedPart part = across(10, "35 V");
    part.lot.part.figures[1].known = Known::datasheet;
    part.lot.part.figures.push_back(parse_figure(Symbol::C, "470 µF", Known::datasheet));
    CHECK(find_rule(judge_part(part, house()), "unmeasured") == nullptr);
    part.lot.origin = Origin::pulled;
    const SeatReport report = judge_part(part, house());
    CHECK(report.verdict == Verdict::unproven);
    const Finding* unmeasured = find_rule(report, "unmeasured");
    REQUIRE(unmeasured);
    CHECK(words(*unmeasured).line == "pulled, and its C and ESR have not both been measured");
    CHECK(words(*unmeasured).settle == "measure its C at 120 Hz and measure its ESR at 100 kHz");
    for (Figure& figure : part.lot.part.figures)
        if (figure.symbol != Symbol::U_R) figure.known = Known::measured;
    CHECK(find_rule(judge_part(part, house()), "unmeasured") == nullptr);
}

TEST_CASE("a measurement of a part that ages expires", "[engine][judge]") {
    // The rulebook's own two years; common practice, no source.
    JudgedPart part = across(10, "35 V");
    part.lot.origin = Origin::pulled;
    part.lot.part.figures.push_back(parse_figure(Symbol::C, "470 µF", Known::measured));
    for (Figure& figure : part.lot.part.figures) figure.date = "2024-03-01";
    part.today = "2026-02-27";
    CHECK(find_rule(judge_part(part, house()), "expired") == nullptr);
    part.today = "2026-03-03";
    const SeatReport report = judge_part(part, house());
    const Finding* expired = find_rule(report, "expired");
    REQUIRE(expired);
    CHECK(expired->verdict == Verdict::unproven);
    CHECK(words(*expired).line == "ESR was measured on 2024-03-01, longer ago than 2 years");
}

TEST_CASE("a suspect lot is unproven whatever its figures say", "[engine][judge]") {
    JudgedPart part = across(10, "35 V");
    part.lot.suspect = true;
    part.lot.suspect_why = "breakdown measured at 31 V, below its rating";
    const SeatReport report = judge_part(part, house());
    CHECK(report.verdict == Verdict::unproven);
    CHECK(words(report.findings.front()).line == "breakdown measured at 31 V, below its rating");
}

TEST_CASE("a part outside its family's models is not covered, which is not the same as rejected", "[engine][judge]") {
    JudgedPart part = judged(lot_of("switch", {{"V_DSS", "20 V"}}), {seen(Stress::voltage_peak_repetitive, 60)});
    part.lot.part.attributes["polarity"] = "P";
    const SeatReport report = judge_part(part, house());
    CHECK(report.verdict == Verdict::not_covered);
    CHECK(line(report) == "Q1  417-H  not covered  polarity P: the models are those of an N-channel MOSFET");
    part.lot.part.attributes["polarity"] = "N";
    CHECK(judge_part(part, house()).verdict == Verdict::rejected);
    for (const char* other : {"IGBT", "bipolar NPN", "darlington"}) {
        part.lot.part.attributes["technology"] = other;
        CHECK(judge_part(part, house()).verdict == Verdict::not_covered);
    }
}

TEST_CASE("a rulebook that has no rule for a part does not make it hold", "[engine][judge]") {
    Rulebook book = house();
    std::erase_if(book.rules, [](const Rule& rule) { return rule.selects.starts_with("capacitor"); });
    CHECK(judge_part(across(10, "35 V"), book).verdict == Verdict::not_covered);
}

TEST_CASE("an empty seat and a bare element are unproven", "[engine][judge]") {
    CHECK(line(judge_empty(Seat::rectifier, "D1", false, "house")) == "D1  unproven  nothing is fitted");
    CHECK(line(judge_empty(Seat::rectifier, "D1", true, "house")) == "D1  unproven  a bare circuit element stands here, no part is chosen");
}

TEST_CASE("a capacitor of unknown kind is rejected only where every kind would be", "[engine][judge]") {
    const auto verdict = [](double volts) {
        JudgedPart part = across(volts, "20 V");
        part.lot.part.attributes.clear();
        return finding_of(part, "capacitor-voltage");
    };
    CHECK(verdict(10).verdict == Verdict::holds);  // half: even a tantalum's
    CHECK(verdict(15).verdict == Verdict::unproven);
    CHECK(words(verdict(15)).settle == "its kind (technology), seen on the part itself");
    CHECK(verdict(16.1).verdict == Verdict::rejected);
}

TEST_CASE("V_DSS counts for less in the cold", "[engine][judge]") {
    // About 0.1 %/K, from memory (data-sheet experience): 55 V are 53.075 V at -10 °C.
    JudgedPart part = judged(lot_of("switch", {{"V_DSS", "55 V"}}), {seen(Stress::voltage_peak_repetitive, 43)});
    CHECK(finding_of(part, "switch-voltage").verdict == Verdict::holds);
    part.lowest_ambient = kCelsiusZero - 10;
    const Finding cold = finding_of(part, "switch-voltage");
    CHECK(cold.verdict == Verdict::rejected);
    CHECK(cold.rating == Approx(53.075));
    CHECK(cold.printed == 55);
    CHECK(words(cold).line == "43.0 V across a 55 V part (81 % of the 53.1 V that count here); the rule allows 42.5 V: 0.5 V too much");
}

TEST_CASE("I_D counts at the case temperature that the part really has", "[engine][judge]") {
    // P = (T_jmax − T_case)/R_th(j-c) = I²·R: the current falls with √(T_jmax − T_case). 100 A at 25 °C and 175 °C are 70.7 A at 100 °C.
    JudgedPart part = judged(lot_of("switch", {{"I_D", "100 A"}, {"T_jmax", "175 °C"}, {"R_th(j-c)", "1 K/W"}}),
                             {seen(Stress::current_rms, 20), seen(Stress::power, 10), seen(Stress::junction_temperature, kCelsiusZero + 110)});
    CHECK(finding_of(part, "switch-current").rating == Approx(100 * std::sqrt(0.5)));
    std::erase_if(part.best.stresses, [](const StressValue& one) { return one.stress != Stress::current_rms; });
    part.worst = part.best;
    CHECK(finding_of(part, "switch-current").verdict == Verdict::unproven);  // no temperature, no case rating
    part.best.stresses[0].value = part.worst.stresses[0].value = 90;
    CHECK(finding_of(part, "switch-current").verdict == Verdict::rejected);  // too much even for a cool case
}

TEST_CASE("where heat runs away no junction temperature is told, and the rule is broken", "[engine][judge]") {
    JudgedPart part = judged(lot_of("rectifier/schottky", {{"T_jmax", "150 °C"}}),
                             {seen(Stress::runaway_gain, 1.4), seen(Stress::junction_temperature, kCelsiusZero + 90)});
    part.runaway_best = part.runaway_worst = true;
    const Finding finding = finding_of(part, "rectifier-temperature");
    CHECK(finding.verdict == Verdict::rejected);
    CHECK_FALSE(finding.stress);
    CHECK(words(finding).line == "no stable temperature exists: leakage and heat drive each other up");
    part.runaway_best = false;
    CHECK(finding_of(part, "rectifier-temperature").verdict == Verdict::unproven);
}

TEST_CASE("findings stand with the gravest first, then the tightest", "[engine][judge]") {
    JudgedPart part = judged(lot_of("switch", {{"V_DSS", "55 V"}, {"V_GSS", "20 V"}, {"I_DM", "16 A"}, {"R_DS(on)", "17 mΩ @ 10 V"}}),
                             {seen(Stress::voltage_peak_repetitive, 46), seen(Stress::gate_voltage, 15), seen(Stress::current_peak, 25),
                              seen(Stress::drive_voltage_lowest, 11)});
    std::vector<std::string> order;
    for (const Finding& finding : judge_part(part, house()).findings) order.push_back(std::string(to_string(finding.verdict)) + " " + finding.rule.id);
    CHECK(order == std::vector<std::string>{"rejected switch-peak-current", "rejected switch-voltage", "unproven switch-current", "unproven switch-temperature",
                                            "holds switch-gate-voltage", "holds switch-drive"});
}

TEST_CASE("life is judged only where a life is asked for", "[engine][judge]") {
    JudgedPart part = across(10, "35 V");
    part.best.stresses.push_back(seen(Stress::life, 3600 * 100.0));
    part.worst = part.best;
    CHECK(finding_of(part, "aluminium-life").verdict == Verdict::rejected);
    part.life_required.reset();
    CHECK(find_rule(judge_part(part, house()), "aluminium-life") == nullptr);
}
