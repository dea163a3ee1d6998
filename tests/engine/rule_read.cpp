// SPDX-License-Identifier: GPL-3.0-or-later
// Reading rulebooks: what a sound one means, and every fault of an unsound one with its place.
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>

#include "engine/rule/stresses.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

std::string head() { return "kind = \"rulebook\"\nformat = 1\n"; }

std::string one_rule(const std::string& id, const std::string& selects, const std::string& rest) {
    return "[[rule]]\nid = \"" + id + "\"\nfor = \"" + selects + "\"\n" + rest + "\nwhy = \"a reason\"\nsource = \"common practice\"\n";
}

std::vector<std::string> faults_of(const std::string& text) {
    std::vector<std::string> out;
    try {
        static_cast<void>(read_rulebook(text, "mine.toml"));
    } catch (const InputError& error) {
        for (const Fault& fault : error.faults) out.push_back(to_string(fault));
    }
    return out;
}

}  // namespace

TEST_CASE("a rulebook file tells its faults all at once, each with line and column", "[engine][rule]") {
    std::ifstream file(std::string(BINWRIGHT_SOURCE) + "/tests/broken/rulebook-ten-faults.toml");
    std::stringstream text;
    text << file.rdbuf();
    const std::vector<std::string> wanted = {
        "mine.toml:4:1: unknown key `titel`; did you mean `title`?",
        "mine.toml:7:24: \"V\" is a voltage, not a share",
        "mine.toml:10:11: `aluminium voltage` is no id",
        "mine.toml:11:11: a capacitor has no technology `aluminum`; did you mean `aluminium`?",
        "mine.toml:12:11: there is no stress `voltage_peak_repetitiv`; did you mean `voltage_peak_repetitive`?",
        "mine.toml:18:1: the rule `gate` gives no `why`",
        "mine.toml:22:11: T_jmax is no limit to `gate_voltage`: their units differ",
        "mine.toml:23:11: `at_most` is 8000 % of the rating: no sensible share",
        "mine.toml:26:1: the rule `gate` gives no `known`",
        "mine.toml:27:11: a rule `gate` stands in line 19 already",
        "mine.toml:31:15: \"V\" is a voltage, not a temperature difference",
        "mine.toml:38:11: a rectifier has no stress `ripple_current`",
        "mine.toml:39:11: a rectifier has no rating `I_R~`",
        "mine.toml:41:1: unknown key `at_most_of` in [rule]; did you mean `at_most`?",
    };
    CHECK(faults_of(text.str()) == wanted);
}

TEST_CASE("what every rulebook must have is named where it is missing", "[engine][rule]") {
    CHECK(faults_of("") == std::vector<std::string>{"mine.toml:1:1: the file does not say what it is", "mine.toml:1:1: the file does not say its format",
                                                    "mine.toml:1:1: the rulebook has no rule"});
    CHECK(faults_of("kind = \"converter\"\nformat = 1\n" + one_rule("a", "switch", "stress = \"gate_voltage\"\nrating = \"V_GSS\"\nat_most = 0.8")) ==
          std::vector<std::string>{"mine.toml:1:8: this file is not a rulebook"});
    CHECK(faults_of(head() + one_rule("a", "switch", "stress = \"gate_voltage\"\nrating = \"V_GSS\"")) ==
          std::vector<std::string>{"mine.toml:3:1: the rule `a` has no bound"});
    CHECK(faults_of(head() + one_rule("a", "switch", "stress = \"gate_voltage\"\nrating = \"V_GSS\"\nat_most = 0.8\nbelow = \"1 V\"")) ==
          std::vector<std::string>{"mine.toml:9:9: a rule has one bound, and this has `at_most` and `below`"});
    CHECK(faults_of(head() + one_rule("a", "capacitor", "stress = \"life\"\nrequirement = \"live\"\nat_least = 1.0")) ==
          std::vector<std::string>{"mine.toml:7:15: there is no requirement `live`; did you mean `life`?"});
    CHECK(faults_of(head() + one_rule("a", "switch", "stress = \"junction_temperature\"\nbelow = \"25 K\"")) ==
          std::vector<std::string>{"mine.toml:7:9: `below` is a distance below a rating, and this rule names none"});
}

TEST_CASE("the four bounds are read in their units", "[engine][rule]") {
    const Rulebook book = read_rulebook(head() + one_rule("a", "capacitor", "stress = \"voltage_peak_repetitive\"\nrating = \"Ur\"\nat_most = \"75 %\"") +
                                            one_rule("b", "capacitor/tantalum", "stress = \"hot_spot_temperature\"\nat_most = \"85 °C\"") +
                                            one_rule("c", "switch", "stress = \"junction_temperature\"\nrating = \"T_jmax\"\nbelow = \"25 K\"") +
                                            one_rule("d", "capacitor", "stress = \"life\"\nrequirement = \"life\"\nat_least = 1.5"),
                                        "/some/where/mine.toml");
    CHECK(book.name == "mine");
    REQUIRE(book.rules.size() == 4);
    CHECK(book.rules[0].rating == Symbol::U_R);
    CHECK(limit_of(book.rules[0], 20) == Approx(15));
    CHECK(limit_of(book.rules[1], 0) == Approx(358.15));
    CHECK(limit_of(book.rules[2], kCelsiusZero + 150) == Approx(398.15));
    CHECK(limit_of(book.rules[3], 1000) == Approx(1500));
    CHECK(book.rules[2].place.line == 18);
}

TEST_CASE("a share of a temperature is taken in degrees Celsius", "[engine][rule]") {
    const Rulebook book =
        read_rulebook(head() + one_rule("a", "switch", "stress = \"junction_temperature\"\nrating = \"T_jmax\"\nat_most = 0.8"), "mine.toml");
    CHECK(limit_of(book.rules[0], kCelsiusZero + 150) == Approx(kCelsiusZero + 120));
}

TEST_CASE("of rules that stand in for each other the most specific selector wins", "[engine][rule]") {
    const std::string bound = "stress = \"voltage_peak_repetitive\"\nrating = \"U_R\"\nat_most = ";
    const Rulebook book = read_rulebook(head() + one_rule("capacitor-voltage", "capacitor", bound + "0.5") + one_rule("aluminium-voltage", "capacitor/aluminium", bound + "0.8") +
                                            one_rule("aluminium-absolute", "capacitor/aluminium", "stress = \"voltage_peak_repetitive\"\nat_most = \"40 V\""),
                                        "mine.toml");
    const auto ids = [&](const std::string& selector) {
        std::vector<std::string> out;
        for (const Rule* rule : rules_for(book, lot_of(selector, {}).part)) out.push_back(rule->id);
        return out;
    };
    CHECK(ids("capacitor/aluminium") == std::vector<std::string>{"aluminium-voltage", "aluminium-absolute"});
    CHECK(ids("capacitor/film") == std::vector<std::string>{"capacitor-voltage"});
    CHECK(ids("capacitor") == std::vector<std::string>{"capacitor-voltage"});
    CHECK(ids("switch").empty());
}

TEST_CASE("the table of stresses names each once, and a selector is a family with or without its kind", "[engine][rule]") {
    for (const StressInfo& row : stresses()) {
        CHECK(find_stress(row.name) == row.stress);
        CHECK(info(row.stress).name == row.name);
    }
    CHECK(selects("capacitor", "capacitor/film"));
    CHECK(selects("capacitor/tantalum", "capacitor/tantalum"));
    CHECK_FALSE(selects("capacitor/tantalum", "capacitor/tantalum polymer"));
    CHECK_FALSE(selects("capacitor/film", "capacitor"));
}
