// SPDX-License-Identifier: GPL-3.0-or-later
// The rule language piece by piece: what each kind of bound, condition and rank means for a verdict and for its words.
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>

#include "engine/answer/rating.hpp"
#include "engine/rule/stresses.hpp"
#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

const std::string kHead = "kind = \"rulebook\"\nformat = 1\n";

std::string rule(const std::string& id, const std::string& selects, const std::string& rest) {
    return "[[rule]]\nid = \"" + id + "\"\nfor = \"" + selects + "\"\n" + rest + "\nwhy = \"a reason to speak of\"\nsource = \"common practice\"\n";
}

Rulebook read(const std::string& text, const std::string& level = "") { return read_rulebook(kHead + text, "mine.toml", level); }

std::vector<std::string> faults_of(const std::string& text) {
    std::vector<std::string> out;
    try {
        static_cast<void>(read_rulebook(text, "mine.toml"));
    } catch (const InputError& error) {
        for (const Fault& fault : error.faults) out.push_back(to_string(fault));
    }
    return out;
}

Finding only(const SeatReport& report, const std::string& id) {
    const Finding* found = find_rule(report, id);
    REQUIRE(found != nullptr);
    return *found;
}

JudgedPart hot(double junction, const std::string& rating) {
    return judged(lot_of("rectifier/schottky", {{"T_jmax", rating}}), {seen(Stress::junction_temperature, kCelsiusZero + junction)});
}

const std::string kJunction = "stress = \"junction_temperature\"\n";
const std::string kVolts = "stress = \"voltage_peak_repetitive\"\nrating = \"U_R\"\n";

}  // namespace

TEST_CASE("the faults of levels and bases and conditions and expressions are told in one go with line and column", "[engine][rule]") {
    std::ifstream file(std::string(BINWRIGHT_SOURCE) + "/tests/broken/rulebook-ten-more-faults.toml");
    std::stringstream text;
    text << file.rdbuf();
    CHECK(faults_of(text.str()) == std::vector<std::string>{
                                       "mine.toml:4:12: there is no rulebook `hose` to build on; did you mean `house`?",
                                       "mine.toml:6:12: there is no level `IV`",
                                       "mine.toml:13:11: `rule.at_most` says nothing of level `III`",
                                       "mine.toml:13:32: there is no level `IV`",
                                       "mine.toml:22:30: the temperatures of a bound rise from point to point",
                                       "mine.toml:23:11: there is no temperature `air_temperatur`; did you mean `air_temperature`?",
                                       "mine.toml:30:12: `T_jmax => 175 °C` compares nothing",
                                       "mine.toml:32:37: `below` is a distance below a rating, and this bound names none",
                                       "mine.toml:40:20: a temperature is no factor; only a difference of two is",
                                       "mine.toml:47:25: one rule is for parts of one family",
                                       "mine.toml:48:14: `permitted` is only ever written as false: what is permitted has a bound",
                                       "mine.toml:49:14: only capacitors are charged",
                                       "mine.toml:50:14: there is no rule `switch-voltag` to stand in for; did you mean `switch-voltage`?",
                                   });
}

TEST_CASE("of several bounds the lower or the greater counts and the finding tells both", "[engine][rule]") {
    const std::string both = "[{ at_most = \"110 °C\" }, { rating = \"T_jmax\", below = \"40 K\" }]";
    const Rulebook lower = read(rule("hot", "rectifier", kJunction + "lower_of = " + both)), greater = read(rule("hot", "rectifier", kJunction + "greater_of = " + both));
    CHECK(only(judge_part(hot(105, "175 °C"), lower), "hot").limit == Approx(kCelsiusZero + 110));
    CHECK(only(judge_part(hot(105, "125 °C"), lower), "hot").limit == Approx(kCelsiusZero + 85));
    CHECK(only(judge_part(hot(105, "175 °C"), greater), "hot").limit == Approx(kCelsiusZero + 135));
    const Finding broken = only(judge_part(hot(105, "125 °C"), lower), "hot");
    CHECK(broken.verdict == Verdict::rejected);
    CHECK(words(broken).line == "junction at 105 °C in a 125 °C part; the rule allows 85 °C: 20 K too hot");
    CHECK(words(broken).rule == "mine, hot: the lower of 110 °C and 40 K below T_jmax (common practice)");
    CHECK(words(broken).mend == "a part for 150 °C or higher (exactly: 145 °C)");
}

TEST_CASE("where a rating of several bounds is not on record a break of the others is a break and nothing holds", "[engine][rule]") {
    const std::string both = "[{ at_most = \"110 °C\" }, { rating = \"T_jmax\", below = \"40 K\" }]";
    const Rulebook lower = read(rule("hot", "rectifier", kJunction + "lower_of = " + both)), greater = read(rule("hot", "rectifier", kJunction + "greater_of = " + both));
    const auto verdict = [](const Rulebook& book, double junction) {
        JudgedPart part = judged(lot_of("rectifier/schottky", {}), {seen(Stress::junction_temperature, kCelsiusZero + junction)});
        return only(judge_part(part, book), "hot");
    };
    CHECK(verdict(lower, 120).verdict == Verdict::rejected);
    CHECK(verdict(lower, 100).verdict == Verdict::unproven);
    CHECK(verdict(lower, 100).missing == "T_jmax");
    CHECK(verdict(greater, 120).verdict == Verdict::unproven);
    CHECK(verdict(greater, 100).verdict == Verdict::unproven);
}

TEST_CASE("a bound over a temperature is linear between its points and ends at the last", "[engine][rule]") {
    // EEE-INST-002, section C1, table 4: solid tantalum 0.5 up to 70 °C, 0.3 at 110 °C.
    const Rulebook book = read(rule("v", "capacitor/tantalum", kVolts + "at_most = [[\"70 °C\", 0.5], [\"110 °C\", 0.3]]\nover = \"air_temperature\""));
    const auto at = [&](double air, double volts) {
        JudgedPart part = judged(lot_of("capacitor/tantalum", {{"U_R", "50 V"}, {"ESR", "50 mΩ"}}), {seen(Stress::voltage_peak_repetitive, volts), seen(Stress::air_temperature, kCelsiusZero + air)});
        return only(judge_part(part, book), "v");
    };
    CHECK(at(-10, 20).limit == Approx(25));
    CHECK(at(70, 20).limit == Approx(25));
    CHECK(at(90, 20).limit == Approx(20));
    CHECK(at(90, 20).verdict == Verdict::holds);
    CHECK(at(91, 20).verdict == Verdict::rejected);
    CHECK(at(110, 10).limit == Approx(15));
    CHECK(at(111, 0.1).verdict == Verdict::rejected);
    CHECK(words(at(111, 0.1)).line == "not permitted above 110 °C, and its air temperature reaches 111 °C");
    CHECK(words(at(90, 24)).rule == "mine, v: 50 % of U_R up to 70 °C, falling to 30 % at 110 °C, nothing above (by air temperature) (common practice)");
    JudgedPart unknown = judged(lot_of("capacitor/tantalum", {{"U_R", "50 V"}, {"ESR", "50 mΩ"}}), {seen(Stress::voltage_peak_repetitive, 10)});
    CHECK(only(judge_part(unknown, book), "v").verdict == Verdict::unproven);
    CHECK(only(judge_part(unknown, book), "v").missing == "air temperature");
    unknown.worst.stresses[0].value = unknown.best.stresses[0].value = 26;  // more than is allowed anywhere
    CHECK(only(judge_part(unknown, book), "v").verdict == Verdict::rejected);
}

TEST_CASE("an expression of two figures stands for a rating that nobody prints", "[engine][rule]") {
    const Rulebook book = read(rule("p", "rectifier", "stress = \"power\"\nrating = \"(T_jmax - 25 °C) / R_th(j-c)\"\nat_most = 0.5"));
    const auto at = [&](double watts, const std::vector<std::pair<std::string, std::string>>& figures) {
        JudgedPart part = judged(lot_of("rectifier/schottky", figures), {seen(Stress::power, watts)});
        return only(judge_part(part, book), "p");
    };
    const Finding found = at(31, {{"T_jmax", "150 °C"}, {"R_th(j-c)", "2 K/W"}});
    CHECK(found.rating == Approx(62.5));  // (150 − 25) K / 2 K/W
    CHECK(found.limit == Approx(31.25));
    CHECK(found.verdict == Verdict::holds);
    CHECK(at(32, {{"T_jmax", "150 °C"}, {"R_th(j-c)", "2 K/W"}}).verdict == Verdict::rejected);
    CHECK(at(1, {{"T_jmax", "150 °C"}}).missing == "R_th(j-c)");
    CHECK(at(1, {{"T_jmax", "150 °C"}}).verdict == Verdict::unproven);
    CHECK(words(found).rule == "mine, p: 50 % of (T_jmax - 25 °C) / R_th(j-c) (common practice)");
    for (const char* wrong : {"T_jmax / R_th(j-c)", "V_RRM / R_th(j-c)", "(T_jmax - 25 °C) / R_th(j-c", "T_jmax - 25 °C", "V_RRM * I_F", "V_RRM + I_F(AV)"}) {
        INFO(wrong);
        CHECK(faults_of(kHead + rule("p", "rectifier", "stress = \"power\"\nrating = \"" + std::string(wrong) + "\"\nat_most = 0.5")).size() == 1);
    }
    CHECK(faults_of(kHead + rule("p", "rectifier", "stress = \"power\"\nrating = \"V_RRM * I_F(AV)\"\nat_most = 0.5")).empty());
}

TEST_CASE("a spread of a figure in an expression is taken at its harmful end", "[engine][rule]") {
    const Expression surge = parse_expression("U_R / ESR", Family::capacitor, Unit::ampere);
    const Lot lot = lot_of("capacitor/tantalum", {{"U_R", "20 V"}, {"ESR", "50 .. 100 .. 200 mΩ"}});
    std::string missing;
    CHECK(value_of(surge, lot.part, true, missing) == Approx(100));
    CHECK(value_of(surge, lot.part, false, missing) == Approx(400));
    CHECK(missing.empty());
}

TEST_CASE("what is not permitted is rejected and what is not covered is neither held nor rejected", "[engine][rule]") {
    const Rulebook book = read(rule("use", "capacitor/aluminium", "permitted = false") + rule("row", "capacitor", kVolts.substr(0, kVolts.find("rating")) + "covered = false") +
                               rule("film-v", "capacitor/film", kVolts + "at_most = 0.6\ninstead_of = \"row\""));
    const auto judge = [&](const std::string& selector) {
        return judge_part(judged(lot_of(selector, {{"U_R", "35 V"}, {"ESR", "50 mΩ"}}), {seen(Stress::voltage_peak_repetitive, 20)}), book);
    };
    const SeatReport banned = judge("capacitor/aluminium");
    CHECK(banned.verdict == Verdict::rejected);
    CHECK(line(banned) == "C12  417-H  rejected  the rulebook does not permit an aluminium capacitor here");
    CHECK(words(banned.findings.front()).because == "a reason to speak of");
    CHECK(words(banned.findings.front()).mend == "a part of another kind");
    const SeatReport silent = judge("capacitor/polymer");
    CHECK(silent.verdict == Verdict::not_covered);
    CHECK(line(silent) == "C12  417-H  not covered  the rulebook says nothing of the repetitive peak voltage of a polymer capacitor");
    CHECK(judge("capacitor/film").verdict == Verdict::holds);
    CHECK(judge("capacitor").verdict == Verdict::not_covered);
}

TEST_CASE("a condition on a rating decides which rule applies and a rating not on record decides nothing", "[engine][rule]") {
    const Rulebook book = read(rule("warm", "rectifier", kJunction + "at_most = \"100 °C\"\nwhere = \"T_jmax >= 175 °C\"") +
                               rule("cool", "rectifier", kJunction + "rating = \"T_jmax\"\nbelow = \"60 K\"\nwhere = \"T_jmax < 175 °C\""));
    const auto ids = [&](const std::vector<std::pair<std::string, std::string>>& figures) {
        std::vector<std::string> out;
        for (const Applied& one : applied_rules(book, lot_of("rectifier/schottky", figures).part)) out.push_back(one.rule->id + (one.unknown.empty() ? "" : " if " + one.unknown));
        return out;
    };
    CHECK(ids({{"T_jmax", "175 °C"}}) == std::vector<std::string>{"warm"});
    CHECK(ids({{"T_jmax", "150 °C"}}) == std::vector<std::string>{"cool"});
    CHECK(ids({}) == std::vector<std::string>{"warm if T_jmax", "cool if T_jmax"});
    JudgedPart unknown = judged(lot_of("rectifier/schottky", {}), {seen(Stress::junction_temperature, kCelsiusZero + 120)});
    CHECK(only(judge_part(unknown, book), "warm").verdict == Verdict::unproven);  // 120 °C breaks it, were it to apply
    JudgedPart told = hot(90, "175 °C");
    told.lot.part.figures[0].known = Known::told;
    CHECK(only(judge_part(told, book), "warm").verdict == Verdict::unproven);
}

TEST_CASE("how a capacitor is charged decides between two rules", "[engine][rule]") {
    const Rulebook book = read(rule("stiff", "capacitor/tantalum", kVolts + "at_most = 0.33\ncharged_by = \"low impedance\"") +
                               rule("soft", "capacitor/tantalum", kVolts + "at_most = 0.7\ncharged_by = \"high impedance\""));
    const auto rule_at = [&](double ohms) {
        JudgedPart part = judged(lot_of("capacitor/tantalum", {{"U_R", "35 V"}}), {seen(Stress::voltage_peak_repetitive, 10), seen(Stress::series_resistance, ohms)});
        const SeatReport report = judge_part(part, book);
        REQUIRE(report.findings.size() == 1);
        return report.findings.front().rule.id;
    };
    CHECK(rule_at(29) == "stiff");  // 2.9 Ω/V; the border is 3 Ω/V
    CHECK(rule_at(31) == "soft");
    CHECK(applied_rules(book, lot_of("capacitor/tantalum", {}).part).front().rule->id == "stiff");  // not known: the delicate case
}

TEST_CASE("a more special rule says before which it goes and the tightest of several says so", "[engine][rule][words]") {
    const Rulebook book = read(rule("capacitor-voltage", "capacitor", kVolts + "at_most = 0.5") + rule("film-voltage", "capacitor/film", kVolts + "at_most = 0.8") +
                               rule("film-volts", "capacitor/film", "stress = \"voltage_peak_repetitive\"\nat_most = \"40 V\""));
    const SeatReport report = judge_part(judged(lot_of("capacitor/film", {{"U_R", "63 V"}, {"ESR", "9 mΩ"}}), {seen(Stress::voltage_peak_repetitive, 45)}), book);
    CHECK(find_rule(report, "capacitor-voltage") == nullptr);
    CHECK(words(only(report, "film-voltage")).beside == "the most special rule: it goes before capacitor-voltage");
    CHECK(words(only(report, "film-volts")).beside == "the tightest of 2 rules on this, before film-voltage");
    CHECK(report.verdict == Verdict::rejected);
}

TEST_CASE("rules that go before each other in a ring all stay", "[engine][rule]") {
    const Rulebook book = read(rule("a", "capacitor", kVolts + "at_most = 0.5\ninstead_of = \"b\"") + rule("b", "capacitor", kVolts + "at_most = 0.6\ninstead_of = \"c\"") +
                               rule("c", "capacitor", kVolts + "at_most = 0.7\ninstead_of = \"a\""));
    CHECK(rules_for(book, lot_of("capacitor/film", {}).part).size() == 3);
}

TEST_CASE("a rating counts at the case temperature or as printed as the rule says", "[engine][rule]") {
    const auto limit = [](const std::string& rated_at) {
        const Rulebook book = read(rule("p", "switch", "stress = \"power\"\nrating = \"P_tot\"\nat_most = 0.5\n" + rated_at));
        JudgedPart part = judged(lot_of("switch", {{"P_tot", "100 W"}, {"T_jmax", "150 °C"}, {"R_th(j-c)", "1 K/W"}}),
                                 {seen(Stress::power, 10), seen(Stress::junction_temperature, kCelsiusZero + 97.5)});
        return only(judge_part(part, book), "p").limit.value();
    };
    CHECK(limit("rated_at = \"25 °C\"") == Approx(50));
    CHECK(limit("rated_at = \"case\"") == Approx(25));  // a case of 87.5 °C lies half-way from 25 to 150 °C: half of the rating is left
    CHECK(limit("") == Approx(50));
}

TEST_CASE("a book with levels is read at one of them and says which", "[engine][rule]") {
    const std::string text = "levels = [\"I\", \"II\"]\nlevel = \"II\"\n" + rule("v", "capacitor", kVolts + "at_most = { I = 0.5, II = 0.6 }") +
                             rule("use", "capacitor/aluminium", "permitted = false\nat_levels = [\"I\"]");
    CHECK(read(text).name == "mine:II");
    CHECK(read(text).rules.size() == 1);
    CHECK(read(text).rules[0].value == 0.6);
    CHECK(read(text, "I").name == "mine:I");
    CHECK(read(text, "I").rules.size() == 2);
    CHECK(read(text, "I").rules[0].value == 0.5);
    CHECK_THROWS_AS(read(text, "III"), InputError);
    CHECK(find_rulebook("gjb-z-35") == find_rulebook("gjb-z-35:III"));
    CHECK(find_rulebook("gjb-z-35:IV") == nullptr);
}

TEST_CASE("a book based on another changes what it names and says its own source for it", "[engine][rule]") {
    const std::string base = kHead + "based_on = \"house\"\n";
    const Rulebook mine = read_rulebook(base + "[allowances]\nswitch_overshoot = 0.3\n[[rule]]\nid = \"aluminium-voltage\"\nat_most = 0.7\nsource = \"my own bench\"\nknown = \"seen\"\n", "mine.toml");
    const Rulebook& house = *find_rulebook("house");
    CHECK(mine.rules.size() == house.rules.size());
    CHECK(mine.allowances.switch_overshoot == 0.3);
    CHECK(mine.allowances.rectifier_overshoot == house.allowances.rectifier_overshoot);
    JudgedPart part = judged(lot_of("capacitor/aluminium", {{"U_R", "25 V"}, {"ESR", "50 mΩ"}}), {seen(Stress::voltage_peak_repetitive, 19), seen(Stress::voltage_peak_single, 19)});
    const Finding own = only(judge_part(part, mine), "aluminium-voltage");
    CHECK(own.verdict == Verdict::rejected);
    CHECK(own.book == "mine");
    CHECK(words(own).rule == "mine, aluminium voltage: 70 % of U_R (my own bench; seen)");
    CHECK(only(judge_part(part, mine), "capacitor-single-voltage").book == "house");
    CHECK(faults_of(base + "[[rule]]\nid = \"aluminium-voltage\"\nat_most = 0.7\n") == std::vector<std::string>{"mine.toml:4:1: the rule `aluminium-voltage` gives no `source`"});
    CHECK(read_rulebook(base + "without = [\"film-voltage\"]\n", "mine.toml").rules.size() + 1 == house.rules.size());
    CHECK(faults_of(base + "without = [\"film-voltag\"]\n") == std::vector<std::string>{"mine.toml:4:11: house has no rule `film-voltag`; did you mean `film-voltage`?"});
}

TEST_CASE("a file may be based on a file that its reader finds", "[engine][rule]") {
    const Rulebook below = read(rule("v", "capacitor", kVolts + "at_most = 0.5"));
    const FindBook find = [&](const std::string& name) { return name == "workshop" ? &below : nullptr; };
    const Rulebook above = read_rulebook(kHead + "based_on = \"workshop\"\n", "mine.toml", {}, find);
    REQUIRE(above.rules.size() == 1);
    CHECK(above.rules[0].book == "mine");
    CHECK_THROWS_AS(read_rulebook(kHead + "based_on = \"elsewhere\"\n", "mine.toml", {}, find), InputError);
}
