// SPDX-License-Identifier: GPL-3.0-or-later
// What is true of every rulebook: a tighter bound rejects no less, and the order of rules decides nothing.
#include <rapidcheck.h>

#include <algorithm>
#include <catch2/catch.hpp>

#include "engine/words/words.hpp"
#include "tests/engine/judge_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

/// Any part of a seat, with any of its figures on record or not, told or known, and anything that it may see.
JudgedPart any_part() {
    const std::string selector = *rc::gen::elementOf(std::vector<std::string>{"switch", "rectifier/schottky", "rectifier/ultrafast", "capacitor/aluminium", "capacitor/polymer", "capacitor/tantalum",
                                                                              "capacitor/ceramic 2", "capacitor/film", "capacitor"});
    Lot lot = lot_of(selector, {});
    const auto number = [](double low, double high) { return low + (high - low) * *rc::gen::inRange(0, 1001) / 1000.0; };
    for (const SymbolInfo& one : symbols()) {
        if (!find_symbol(one.name, lot.part.family) || *rc::gen::inRange(0, 5) == 0) continue;
        Figure figure;
        figure.symbol = one.symbol;
        const double value = one.unit == Unit::celsius ? kCelsiusZero + number(85, 220) : one.unit == Unit::volt ? number(10, 100) : one.unit == Unit::ampere ? number(1, 60) : number(0.01, 3);
        figure.value = {value, value, value};
        figure.at = one.usual;
        figure.known = *rc::gen::elementOf(std::vector<Known>{Known::measured, Known::datasheet, Known::datasheet, Known::marked, Known::told});
        lot.part.figures.push_back(figure);
    }
    std::vector<StressValue> best, worst;
    for (const StressInfo& one : stresses()) {
        if (*rc::gen::inRange(0, 6) == 0) continue;
        const double low = one.unit == Unit::celsius ? kCelsiusZero + number(20, 180) : one.unit == Unit::volt ? number(0, 90) : one.unit == Unit::second ? number(1e6, 1e9) : number(0, 40);
        best.push_back(seen(one.stress, low));
        worst.push_back(seen(one.stress, one.stress == Stress::life || one.stress == Stress::drive_voltage_lowest || one.stress == Stress::series_resistance ? low * 0.9 : low * 1.02));
    }
    JudgedPart part = judged(std::move(lot), worst);
    part.best.stresses = best;
    return part;
}

const Rulebook& any_book() {
    const auto& books = rulebooks();
    return books[static_cast<std::size_t>(*rc::gen::inRange(0, static_cast<int>(books.size())))];
}

int weight(Verdict verdict) { return verdict == Verdict::rejected ? 3 : verdict == Verdict::unproven ? 2 : verdict == Verdict::not_covered ? 1 : 0; }

/// Every bound of the book a little stricter.
void tighten(double& value, BoundKind kind, bool celsius, double by) {
    switch (kind) {
        case BoundKind::fraction: value *= 1 - by; break;
        case BoundKind::absolute: value = celsius ? value - 40 * by : value * (1 - by); break;
        case BoundKind::below: value += 40 * by; break;
        case BoundKind::at_least: value *= 1 + by; break;
        default: break;
    }
}

}  // namespace

TEST_CASE("tightening a bound never turns a rejected lot to holding", "[engine][rule][property]") {
    CHECK(rc::check("a tighter book is no milder", [] {
        const JudgedPart part = any_part();
        const Rulebook& book = any_book();
        Rulebook tighter = book;
        const double by = *rc::gen::inRange(1, 60) / 100.0;
        for (Rule& rule : tighter.rules) {
            const bool warm = info(rule.stress).unit == Unit::celsius;
            tighten(rule.value, rule.bound, warm, by);
            for (Piece& piece : rule.several) tighten(piece.value, piece.bound, warm, by);
            if (rule.curve)
                for (auto& [temperature, value] : rule.curve->points) tighten(value, rule.bound, warm, by);
        }
        const SeatReport before = judge_part(part, book), after = judge_part(part, tighter);
        RC_ASSERT(weight(after.verdict) >= weight(before.verdict));
        for (const Finding& one : before.findings)
            if (const Finding* same = find_rule(after, one.rule.id)) RC_ASSERT(!(one.verdict != Verdict::holds && same->verdict == Verdict::holds));
    }));
}

TEST_CASE("verdicts do not depend on the order of rules", "[engine][rule][property]") {
    CHECK(rc::check("a shuffled book says the same", [] {
        const JudgedPart part = any_part();
        Rulebook shuffled = any_book();
        const Rulebook book = shuffled;
        for (std::size_t k = shuffled.rules.size(); k > 1; --k) std::swap(shuffled.rules[k - 1], shuffled.rules[static_cast<std::size_t>(*rc::gen::inRange(0, static_cast<int>(k)))]);
        const SeatReport a = judge_part(part, book), b = judge_part(part, shuffled);
        RC_ASSERT(a.verdict == b.verdict);
        RC_ASSERT(a.findings.size() == b.findings.size());
        for (std::size_t k = 0; k < a.findings.size(); ++k) {
            RC_ASSERT(a.findings[k].rule.id == b.findings[k].rule.id);
            RC_ASSERT(block(a.findings[k]) == block(b.findings[k]));
        }
    }));
}

TEST_CASE("nothing holds under a published rulebook that breaks a printed rating", "[engine][rule][property]") {
    CHECK(rc::check("a published book is never milder than the ratings", [] {
        const JudgedPart part = any_part();
        const Rulebook& book = any_book();
        if (judge_part(part, *find_rulebook("ratings")).verdict == Verdict::rejected) RC_ASSERT(judge_part(part, book).verdict != Verdict::holds);
    }));
}
