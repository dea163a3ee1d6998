// SPDX-License-Identifier: GPL-3.0-or-later
// Parts and what they see, made by hand in a line each, for tests of verdicts and words without a solver.
#pragma once
#include <string>
#include <utility>
#include <vector>

#include "engine/answer/judge_part.hpp"

namespace binwright::test {

inline constexpr At kAt{12, 15, 2, 100e3, kCelsiusZero + 45};

/// A lot from "capacitor/aluminium" and texts of figures.
inline Lot lot_of(const std::string& selector, const std::vector<std::pair<std::string, std::string>>& figures, Known known = Known::datasheet,
                  const std::string& label = "417-H") {
    Lot lot;
    lot.label = label;
    const auto slash = selector.find('/');
    lot.part.family = find_any_family(selector.substr(0, slash)).value();
    lot.part.name = "specimen";
    if (slash != std::string::npos) lot.part.attributes["technology"] = selector.substr(slash + 1);
    for (const auto& [symbol, text] : figures) {
        const auto found = find_symbol(symbol, lot.part.family);
        if (!found) throw std::invalid_argument("no figure " + symbol + " of a " + selector);
        lot.part.figures.push_back(parse_figure(*found, text, known));
    }
    return lot;
}

inline StressValue seen(Stress stress, double value, std::vector<Term> made_of = {}) {
    StressValue out;
    out.stress = stress;
    out.value = value;
    out.at = kAt;
    out.made_of = made_of.empty() ? std::vector<Term>{{"what it sees", value}} : std::move(made_of);
    return out;
}

inline JudgedPart judged(Lot lot, std::vector<StressValue> stresses) {
    JudgedPart part;
    part.seat = lot.part.family == Family::switch_ ? Seat::switch_ : lot.part.family == Family::rectifier ? Seat::rectifier : Seat::output_capacitor;
    part.reference = lot.part.family == Family::switch_ ? "Q1" : lot.part.family == Family::rectifier ? "D1" : "C12";
    part.lot = std::move(lot);
    part.worst.stresses = part.best.stresses = std::move(stresses);
    part.lowest_ambient = kCelsiusZero + 25;
    part.highest_ambient = kCelsiusZero + 45;
    part.life_required = 20000 * 3600.0;
    part.ripple_allowed = 0.15;
    part.drive_lowest = 11;
    part.drive_highest = 12;
    part.top = kAt;
    return part;
}

inline const Finding* find_rule(const SeatReport& report, const std::string& id) {
    for (const Finding& finding : report.findings)
        if (finding.rule.id == id) return &finding;
    return nullptr;
}

}  // namespace binwright::test
