// SPDX-License-Identifier: GPL-3.0-or-later
// Every rule of the house rulebook has a specimen that passes and one that fails, with the whole sentence.
// The values are the rulebook's own (common practice, no source); the sentences are this project's.
#include <catch2/catch.hpp>
#include <fstream>
#include <map>
#include <set>
#include <sstream>

#include "engine/rule/stresses.hpp"
#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

struct Specimen {
    std::string rule, part, figures, stresses, verdict, line;
    int number = 0;
};

std::vector<std::string> split(const std::string& text, char by) {
    std::vector<std::string> out;
    std::stringstream stream(text);
    for (std::string piece; std::getline(stream, piece, by);) {
        const auto first = piece.find_first_not_of(' ');
        out.push_back(first == std::string::npos ? "" : piece.substr(first, piece.find_last_not_of(' ') - first + 1));
    }
    return out;
}

std::vector<std::pair<std::string, std::string>> pairs(const std::string& text) {
    std::vector<std::pair<std::string, std::string>> out;
    for (const std::string& piece : split(text, ';')) {
        const auto equals = piece.find('=');
        if (equals != std::string::npos) out.emplace_back(piece.substr(0, equals), piece.substr(equals + 1));
    }
    return out;
}

std::vector<Specimen> specimens() {
    std::ifstream file(std::string(BINWRIGHT_SOURCE) + "/tests/specimens/house-rules.tsv");
    std::vector<Specimen> out;
    int number = 0;
    for (std::string line; std::getline(file, line);) {
        ++number;
        if (line.empty() || line[0] == '#') continue;
        const auto fields = split(line, '\t');
        if (fields.size() != 6) throw std::runtime_error("line " + std::to_string(number) + " has not six fields");
        out.push_back({fields[0], fields[1], fields[2], fields[3], fields[4], fields[5], number});
    }
    return out;
}

Finding judged_specimen(const Specimen& specimen) {
    const Rulebook& book = *find_rulebook("house");
    std::vector<StressValue> stresses;
    for (const auto& [name, value] : pairs(specimen.stresses)) {
        const auto stress = find_stress(name);
        if (!stress) throw std::runtime_error("no stress " + name);
        stresses.push_back(seen(*stress, parse_quantity(value, info(*stress).unit, true)));
    }
    if (specimen.part == "converter") {
        PartExposure exposure;
        exposure.stresses = stresses;
        for (const Finding& finding : judge_converter(exposure, exposure, book))
            if (finding.rule.id == specimen.rule) return finding;
    } else {
        const SeatReport report = judge_part(judged(lot_of(specimen.part, pairs(specimen.figures)), stresses), book);
        if (const Finding* finding = find_rule(report, specimen.rule)) return *finding;
    }
    throw std::runtime_error("the specimen is not judged by " + specimen.rule);
}

}  // namespace

TEST_CASE("each specimen of a house rule gets its verdict and its sentence", "[engine][rule][words]") {
    for (const Specimen& specimen : specimens()) {
        INFO("house-rules.tsv:" << specimen.number << " " << specimen.rule);
        const Finding finding = judged_specimen(specimen);
        CHECK(std::string(to_string(finding.verdict)) == specimen.verdict);
        CHECK(words(finding).line == specimen.line);
    }
}

TEST_CASE("no house rule is without a passing and a failing specimen, and no specimen without its rule", "[engine][rule]") {
    std::map<std::string, std::set<std::string>> verdicts;
    for (const Specimen& specimen : specimens()) verdicts[specimen.rule].insert(specimen.verdict);
    for (const Rule& rule : find_rulebook("house")->rules) {
        INFO(rule.id);
        CHECK(verdicts[rule.id].count("holds") == 1);
        CHECK(verdicts[rule.id].count("rejected") == 1);
        verdicts.erase(rule.id);
    }
    CHECK(verdicts.empty());
}

TEST_CASE("every house rule gives a reason and a source, and says what it bounds", "[engine][rule]") {
    const Rulebook& book = *find_rulebook("house");
    CHECK(&book == &rulebooks().front());
    for (const Rule& rule : book.rules) {
        INFO(rule.id);
        CHECK(rule.why.size() > 20);
        CHECK(rule.source == "common practice");
        CHECK(rule.known == "common practice");
        CHECK_FALSE(rule_text(rule).empty());
    }
}

TEST_CASE("every kind of capacitor has its own voltage rule in the house book", "[engine][rule]") {
    for (const char* kind : {"aluminium", "polymer", "hybrid", "tantalum", "tantalum polymer", "ceramic 1", "ceramic 2", "film"}) {
        INFO(kind);
        const Lot lot = lot_of(std::string("capacitor/") + kind, {});
        int rules = 0;
        for (const Rule* rule : rules_for(*find_rulebook("house"), lot.part))
            if (rule->stress == Stress::voltage_peak_repetitive) {
                ++rules;
                CHECK(rule->selects == std::string("capacitor/") + kind);
            }
        CHECK(rules == 1);
    }
}
