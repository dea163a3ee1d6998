// SPDX-License-Identifier: GPL-3.0-or-later
// The shipped rulebooks against the standards that they are taken from: tests/specimens/derating-limits.tsv holds the values with
// edition, clause and how each is known.
#include <catch2/catch.hpp>
#include <fstream>
#include <map>
#include <set>
#include <sstream>

#include "engine/answer/rating.hpp"
#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

struct Row {
    std::string standard, kind, unit, known, book, levels, rules, parts, figures, sees, left_out;
    double value = 0;
    int line = 0;
};

std::vector<std::string> split(const std::string& text, const std::string& by) {
    std::vector<std::string> out;
    for (std::size_t from = 0;;) {
        const std::size_t end = text.find(by, from);
        out.push_back(text.substr(from, end - from));
        if (end == std::string::npos) return out;
        from = end + by.size();
    }
}

std::vector<Row> rows() {
    std::ifstream file(std::string(BINWRIGHT_SOURCE) + "/tests/specimens/derating-limits.tsv");
    std::vector<Row> out;
    int number = 0;
    for (std::string line; std::getline(file, line);) {
        ++number;
        if (line.empty() || line[0] == '#') continue;
        const auto f = split(line, "\t");
        if (f.size() != 19) throw std::runtime_error("line " + std::to_string(number) + " has not nineteen fields");
        out.push_back({f[0], f[8], f[10], f[11], f[12], f[13], f[14], f[15], f[16], f[17], f[18], std::stod(f[9]), number});
    }
    return out;
}

std::vector<std::pair<std::string, std::string>> pairs(const std::string& text) {
    std::vector<std::pair<std::string, std::string>> out;
    if (text.empty()) return out;
    for (const std::string& piece : split(text, "; ")) {
        const auto equals = piece.find('=');
        out.emplace_back(piece.substr(0, equals), piece.substr(equals + 1));
    }
    return out;
}

/// The limit in numbers that the standard's row means for a part of these figures.
double expected(const Row& row, double rating, bool warm) {
    if (row.kind == "fraction_of_rating") return warm ? row.value * (rating - kCelsiusZero) + kCelsiusZero : row.value * rating;
    if (row.kind == "delta_from_max") return rating + row.value;
    return row.unit == "degC" ? row.value + kCelsiusZero : row.value;
}

/// The rating of a specimen by its first figure, or the power that its thermal resistance tells.
double rating_of(const Lot& lot) {
    if (lot.part.family == Family::rectifier && lot.part.figures.size() == 2) return (125.0) / lot.part.figures[1].value.worst;  // (150 − 25) K over R_th(j-c)
    return lot.part.figures.empty() ? 0 : lot.part.figures.front().value.worst;
}

}  // namespace

TEST_CASE("every limit of the standards' table is in its rulebook with its value or is left out for a reason", "[engine][rule][published]") {
    std::size_t held = 0;
    for (const Row& row : rows()) {
        INFO("derating-limits.tsv:" << row.line << " " << row.book << " " << row.rules);
        if (!row.left_out.empty()) {
            CHECK(row.rules.empty());
            continue;
        }
        for (const std::string& level : split(row.levels, ", "))
            for (const std::string& selector : split(row.parts, ", "))
                for (const std::string& id : split(row.rules, ", ")) {
                    const Rulebook* book = find_rulebook(row.book + (level.empty() ? "" : ":" + level));
                    REQUIRE(book);
                    const Lot lot = lot_of(selector, pairs(row.figures));
                    std::vector<StressValue> stresses;
                    for (const auto& [name, value] : pairs(row.sees)) stresses.push_back(seen(find_stress(name).value(), parse_quantity(value, info(*find_stress(name)).unit, true)));
                    const JudgedPart part = judged(lot, stresses);
                    const Rule* rule = nullptr;
                    for (const Applied& one : applied_rules(*book, lot.part))
                        if (one.rule->id == id && one.unknown.empty()) rule = one.rule;
                    INFO(book->name << " " << id << " for a " << selector);
                    REQUIRE(rule);
                    const Held held_to_it = held_to(*rule, part, part.worst, nullptr, End::worst);
                    REQUIRE(held_to_it.limit);
                    const bool warm = info(rule->stress).unit == Unit::celsius;
                    const double wanted = row.unit == "ohm/V" ? row.value * 20 : expected(row, rating_of(lot), warm);
                    // Of an applied 20 V the greater of 0.1 Ω/V and 1 Ω counts: both are in the row's rule.
                    CHECK(*held_to_it.limit == Approx(row.unit == "ohm/V" && row.book == "eee-inst-002" ? std::max(1.0, wanted) : wanted).epsilon(1e-12));
                    CHECK(held_to_it.beyond.empty());
                    CHECK(rule->known == row.known);
                    CHECK_FALSE(rule->clause.empty());
                    ++held;
                }
    }
    CHECK(held > 150);
}

TEST_CASE("no published rulebook holds a value that is not in the standards' table", "[engine][rule][published]") {
    std::map<std::string, std::set<std::string>> known;
    for (const Row& row : rows())
        for (const std::string& id : split(row.rules, ", ")) known[row.book].insert(id);
    for (const Rulebook& book : rulebooks()) {
        if (book.based_on.empty()) continue;
        for (const Rule& rule : book.rules) {
            if (!rule.book.empty() || rule.bound == BoundKind::not_covered) continue;
            if (rule.bound == BoundKind::not_permitted) {  // "not used at levels I and II" stands in the rows of level III
                CHECK(rule.id == "aluminium-use");
                continue;
            }
            INFO(book.name << " " << rule.id);
            CHECK(known[book.stem].contains(rule.id));
        }
    }
}

TEST_CASE("a finding under a value from memory or under the stricter of two readings says so", "[engine][rule][words]") {
    JudgedPart part = judged(lot_of("switch", {{"V_DSS", "55 V"}, {"V_GSS", "20 V"}}), {seen(Stress::voltage_peak_repetitive, 40), seen(Stress::gate_voltage, 12)});
    const SeatReport recalled = judge_part(part, *find_rulebook("eee-inst-002"));
    const Finding* voltage = find_rule(recalled, "switch-voltage");
    REQUIRE(voltage);
    CHECK(words(*voltage).rule == "eee-inst-002:2, switch voltage: 75 % of V_DSS (EEE-INST-002, section S1, transistor table; from memory, check it against the original)");
    const SeatReport seen_once = judge_part(part, *find_rulebook("gjb-z-35:II"));
    const Finding* gate = find_rule(seen_once, "switch-gate-voltage");
    REQUIRE(gate);
    CHECK(words(*gate).rule ==
          "gjb-z-35:II, switch gate voltage: 60 % of V_GSS (GJB/Z 35-93, 6.1, transistor table; seen in a transcription, not in the original; the stricter reading: 0.60, 0.70 and 0.80 "
          "are remembered elsewhere)");
    const Finding* drive = find_rule(seen_once, "switch-drive");
    REQUIRE(drive);
    CHECK(words(*drive).rule == "ratings, switch drive: at least the gate voltage at which R_DS(on) is guaranteed (common practice)");
}

TEST_CASE("a junction between two rows of the table is held to the lower of both", "[engine][rule][published]") {
    // GJB/Z 35-93, 6.1: 100 °C for parts rated 175 °C, 65 K below the rating for those up to 150 °C (level I).
    const auto limit = [](const std::string& rating) {
        const Lot lot = lot_of("switch", {{"T_jmax", rating}});
        const JudgedPart part = judged(lot, {});
        double out = 0;
        int rules = 0;
        for (const Applied& one : applied_rules(*find_rulebook("gjb-z-35:I"), lot.part))
            if (one.rule->stress == Stress::junction_temperature) {
                ++rules;
                out = held_to(*one.rule, part, part.worst, nullptr, End::worst).limit.value();
            }
        CHECK(rules == 1);
        return out - kCelsiusZero;
    };
    CHECK(limit("150 °C") == Approx(85));
    CHECK(limit("160 °C") == Approx(95));
    CHECK(limit("170 °C") == Approx(100));
    CHECK(limit("175 °C") == Approx(100));
    CHECK(limit("199 °C") == Approx(100));
    CHECK(limit("200 °C") == Approx(115));
}
