// SPDX-License-Identifier: GPL-3.0-or-later
// Findings and remedies into sentences: the only prose of the engine.
#pragma once
#include <string>
#include <vector>

#include "engine/answer/judge.hpp"

namespace binwright {

/// A finding as a person reads it. The first line stands alone in a table cell; reason, rule and mend never mix.
struct Wording {
    std::string line;     ///< "18.1 V across a 20 V part (90 %); the rule allows 16.0 V: 2.1 V too much"
    std::string because;  ///< "output 18.0 V + half of its ripple 0.1 V, at input 10.5 V and 2.5 A"; may be empty
    std::string rule;     ///< "house, aluminium voltage: 80 % of U_R (common practice)"
    std::string mend;     ///< "a 25 V part or higher (exactly: 22.7 V); or an output no higher than 15.9 V"; may be empty
    std::string settle;   ///< "an ESR of 48 mΩ or less at 100 kHz (measure within 15 %)"; may be empty
    std::string beside;   ///< "the most special rule: it goes before capacitor-voltage"; may be empty
    std::string rests_on; ///< "overshoot 20 % of 29.6 V, not measured"; may be empty
};
[[nodiscard]] Wording words(const Finding& finding);

/// A rule's bound: "80 % of U_R", "25 K below T_jmax", "hot spot at most 85 °C", "at least the life required".
[[nodiscard]] std::string rule_text(const Rule& rule);

/// Line, because, rule, to mend / to settle as a block of text with aligned keywords, as style of the command line.
[[nodiscard]] std::string block(const Finding& finding);

/// "C12  417-H  rejected  18.1 V across …": the gravest finding of a seat in one line; for a seat that holds, its tightest.
[[nodiscard]] std::string line(const SeatReport& report);

/// One sentence over everything: "9–15 V out, 0.1–2.5 A: 1 rejected (C12), 2 unproven, the rest hold."
[[nodiscard]] std::string summary(const CheckReport& report, const Converter& converter);

/// What is left in real units: "1.9 V left", "12 K left", "2.1 V too much".
[[nodiscard]] std::string left(const Finding& finding);

[[nodiscard]] std::string remedy_text(const Remedy& remedy);

/// "input 10.5 V, output 15 V, 2.5 A, 45 °C": an operating point.
[[nodiscard]] std::string at_text(const At& at);

/// The cautions that belong to this converter (battery, charged capacitors, reversed electrolytics, first power-up, mains).
[[nodiscard]] std::vector<std::string> cautions(const Converter& converter);

}  // namespace binwright
