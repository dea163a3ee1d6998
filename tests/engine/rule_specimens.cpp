// SPDX-License-Identifier: GPL-3.0-or-later
// Every rule of every shipped rulebook but the house's (rule_house.cpp) has a specimen that passes and one that fails, with the whole
// sentence and the whole text of its rule; what is not permitted or not covered has one.
// The limits are held against the standards in rule_published.cpp; the sentences are this project's.
#include <catch2/catch.hpp>
#include <fstream>
#include <map>
#include <set>

#include "engine/rule/stresses.hpp"
#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

struct Specimen {
    std::string book, rule, part, figures, stresses, verdict, line, text;
    int number = 0;
};

std::vector<std::string> split(const std::string& text, char by) {
    std::vector<std::string> out;
    for (std::size_t from = 0;;) {
        const std::size_t end = text.find(by, from);
        out.push_back(text.substr(from, end - from));
        if (end == std::string::npos) return out;
        from = end + 1;
    }
}

std::vector<std::pair<std::string, std::string>> pairs(const std::string& text) {
    std::vector<std::pair<std::string, std::string>> out;
    if (text.empty()) return out;
    for (const std::string& piece : split(text, ';')) out.emplace_back(piece.substr(0, piece.find('=')), piece.substr(piece.find('=') + 1));
    return out;
}

const std::vector<Specimen>& specimens() {
    static const std::vector<Specimen> all = [] {
        std::ifstream file(std::string(BINWRIGHT_SOURCE) + "/tests/specimens/published-rules.tsv");
        std::vector<Specimen> out;
        int number = 0;
        for (std::string line; std::getline(file, line);) {
            ++number;
            if (line.empty() || line[0] == '#') continue;
            const auto f = split(line, '\t');
            if (f.size() != 8) throw std::runtime_error("line " + std::to_string(number) + " has not eight fields");
            out.push_back({f[0], f[1], f[2], f[3], f[4], f[5], f[6], f[7], number});
        }
        return out;
    }();
    return all;
}

Lot lot_of_any(const Specimen& specimen) {
    Lot lot;
    const auto family = find_any_family(specimen.part);
    if (!family || *family <= Family::capacitor) return lot_of(specimen.part, pairs(specimen.figures));
    lot.label = "417-H";
    lot.part.family = *family;
    for (const auto& [symbol, text] : pairs(specimen.figures)) lot.part.figures.push_back(parse_figure(find_symbol(symbol, *family).value(), text, Known::datasheet));
    return lot;
}

Finding judged_specimen(const Specimen& specimen) {
    const Rulebook* book = find_rulebook(specimen.book);
    if (!book) throw std::runtime_error("there is no rulebook " + specimen.book);
    std::vector<StressValue> stresses;
    for (const auto& [name, value] : pairs(specimen.stresses)) {
        const auto stress = find_stress(name);
        if (!stress) throw std::runtime_error("no stress " + name);
        stresses.push_back(seen(*stress, parse_quantity(value, info(*stress).unit, true)));
    }
    if (specimen.part == "converter") {
        PartExposure exposure;
        exposure.stresses = stresses;
        for (const Finding& finding : judge_converter(exposure, exposure, *book))
            if (finding.rule.id == specimen.rule) return finding;
    } else {
        const SeatReport report = judge_part(judged(lot_of_any(specimen), stresses), *book);
        if (const Finding* finding = find_rule(report, specimen.rule)) return *finding;
    }
    throw std::runtime_error("the specimen is not judged by " + specimen.rule);
}

}  // namespace

TEST_CASE("each specimen of a published rule gets its verdict and its sentence and says its rule", "[engine][rule][words][published]") {
    for (const Specimen& specimen : specimens()) {
        INFO("published-rules.tsv:" << specimen.number << " " << specimen.book << " " << specimen.rule);
        const Finding finding = judged_specimen(specimen);
        CHECK(std::string(to_string(finding.verdict)) == specimen.verdict);
        CHECK(words(finding).line == specimen.line);
        CHECK(words(finding).rule == specimen.text);
    }
}

TEST_CASE("no published rule is without a passing and a failing specimen and no specimen without its rule", "[engine][rule][published]") {
    std::map<std::pair<std::string, std::string>, std::set<std::string>> verdicts;
    for (const Specimen& specimen : specimens()) verdicts[{specimen.book, specimen.rule}].insert(specimen.verdict);
    for (const Rulebook& book : rulebooks()) {
        if (book.name == "house") continue;
        for (const Rule& rule : book.rules) {
            if (!rule.book.empty()) continue;  // judged where it stands
            INFO(book.name << " " << rule.id);
            const auto& got = verdicts[{book.name, rule.id}];
            if (rule.bound == BoundKind::not_covered) {
                CHECK(got == std::set<std::string>{"not covered"});
            } else if (rule.bound == BoundKind::not_permitted) {
                CHECK(got == std::set<std::string>{"rejected"});
            } else {
                CHECK(got.contains("holds"));
                CHECK(got.contains("rejected"));
            }
            CHECK(rule.why.size() > 20);
            CHECK_FALSE(rule.source.empty());
            verdicts.erase({book.name, rule.id});
        }
    }
    CHECK(verdicts.empty());
}
