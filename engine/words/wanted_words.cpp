// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/words/wanted_words.hpp"

#include "engine/answer/judge_part.hpp"
#include "engine/words/numbers.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

std::string conditions_text(const Conditions& at) {
    std::vector<std::string> pieces;
    if (at.voltage) pieces.push_back(format_quantity(*at.voltage, Unit::volt));
    if (at.current) pieces.push_back(format_quantity(*at.current, Unit::ampere));
    if (at.frequency) pieces.push_back(format_quantity(*at.frequency, Unit::hertz));
    if (at.temperature) pieces.push_back(format_quantity(*at.temperature, Unit::celsius));
    return pieces.empty() ? "" : " at " + joined(pieces, ", ");
}

std::string rounded(double value, Unit unit, bool up) {
    const double zero = unit == Unit::celsius ? kCelsiusZero : 0;
    return format_quantity(zero + (up ? rounded_up(value - zero, 3) : rounded_down(value - zero, 3)), unit);
}

std::string kind_text(const Part& part) {
    const std::string_view technology = attribute(part, "technology");
    if (part.family == Family::switch_) return "N-channel MOSFET";
    return (technology.empty() ? "" : std::string(technology) + " ") + std::string(to_string(part.family));
}

}  // namespace

std::string wanted_text(const WantedLine& line) {
    const Unit unit = info(line.figure).unit;
    std::vector<std::string> pieces;
    for (const Figure& figure : line.bounds) pieces.push_back(rounded(figure.value.worst / (figure.both_legs ? 2 : 1), unit, line.at_least) + conditions_text(figure.at));
    std::string text = joined(pieces) + (line.at_least ? " or more" : " or less");
    if (line.figure == Symbol::I_FAV) text += " for each leg";
    if (line.usual) {
        const std::string usual = format_quantity(*line.usual, unit);
        const Figure& first = line.bounds.front();
        if (usual != rounded(first.value.worst / (first.both_legs ? 2 : 1), unit, true)) text += " (" + usual + " can be had)";
    }
    return text;
}

std::string wanted_line(const Wanted& wanted) {
    const std::string who = wanted.reference + ": ";
    const std::string kind = kind_text(wanted.part);
    if (!wanted.found) return who + "no " + kind + " holds here, whatever its ratings";
    std::string text = who + (wanted.count > 1 ? std::to_string(wanted.count) + " in parallel, each " : "") + (wanted.part.family == Family::switch_ ? "an " + kind : with_article(kind));
    for (const WantedLine& line : wanted.lines) text += ", " + std::string(info(line.figure).name) + " " + wanted_text(line);
    return text;
}

}  // namespace binwright
