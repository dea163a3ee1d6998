// SPDX-License-Identifier: GPL-3.0-or-later
// Findings laid out as people read them in a terminal, and one sentence over everything.
#include <algorithm>
#include <cmath>

#include "engine/words/numbers.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

std::string first_line(const std::string& reference, const std::string& lot, const std::string& part, Verdict verdict, const std::string& text) {
    std::string out = reference;
    const std::string& who = lot.empty() ? part : lot;
    if (!who.empty()) out += "  " + who;
    return out + "  " + std::string(to_string(verdict)) + "  " + text;
}

std::string range_text(const Range& range, Unit unit) {
    if (range.single()) return format_quantity(range.highest, unit);
    const std::string high = format_quantity(range.highest, unit), low = format_quantity(range.lowest, unit);
    const auto blank = high.rfind(' ');
    // "9–15 V" where both ends have one unit, "500 mA – 2.5 A" where prefixes differ; below 1 the larger end's unit serves.
    if (low.ends_with(high.substr(blank))) return low.substr(0, low.size() - (high.size() - blank)) + "–" + high;
    const std::string in_base = format_quantity(range.lowest, Unit::none, 3);
    if (high.substr(blank + 1) == unit_symbol(unit) && range.lowest >= 0.01) return in_base + "–" + high;
    return low + " – " + high;
}

std::string named(std::size_t count, const char* what, const std::vector<std::string>& who) {
    return std::to_string(count) + " " + what + (who.empty() ? "" : " (" + joined(who, ", ") + ")");
}

}  // namespace

std::string block(const Finding& finding) {
    const Wording wording = words(finding);
    std::string out = first_line(finding.reference, finding.lot, finding.part, finding.verdict, wording.line) + "\n";
    const auto add = [&](const char* keyword, const std::string& text) {
        if (!text.empty()) out += "     " + std::string(keyword) + std::string(12 - std::string_view(keyword).size(), ' ') + text + "\n";
    };
    add("because", wording.because);
    add("rests on", wording.rests_on);
    add("rule", wording.rule);
    add("which is", wording.beside);
    add("to mend", wording.mend);
    add("to settle", wording.settle);
    return out;
}

std::string line(const SeatReport& report) {
    if (report.findings.empty()) return first_line(report.reference, report.lot, report.part, report.verdict, "nothing was judged");
    return first_line(report.reference, report.lot, report.part, report.verdict, words(report.findings.front()).line);
}

std::string summary(const CheckReport& report, const Converter& converter) {
    std::vector<std::string> rejected;
    std::size_t unproven = 0, not_covered = 0, hold = 0, broken = 0;
    std::vector<const SeatReport*> all;
    for (const SeatReport& seat : report.seats) all.push_back(&seat);
    for (const SeatReport& one : report.beside) all.push_back(&one);
    for (const SeatReport* one : all) {
        const SeatReport& seat = *one;
        switch (seat.verdict) {
            case Verdict::rejected: ++broken; if (std::find(rejected.begin(), rejected.end(), seat.reference) == rejected.end()) rejected.push_back(seat.reference); break;
            case Verdict::unproven: ++unproven; break;
            case Verdict::not_covered: ++not_covered; break;
            case Verdict::holds: ++hold; break;
        }
    }
    std::vector<std::string> pieces;
    if (broken) pieces.push_back(named(broken, "rejected", rejected));
    if (unproven) pieces.push_back(std::to_string(unproven) + " unproven");
    if (not_covered) pieces.push_back(std::to_string(not_covered) + " not covered");
    if (pieces.empty()) pieces.push_back(report.seats.empty() ? "nothing is fitted" : "every part holds");
    else if (hold == 1) pieces.push_back("the other holds");
    else if (hold > 1) pieces.push_back("the rest hold");
    std::string text = range_text(converter.operating.output_voltage, Unit::volt) + " out, " + range_text(converter.operating.output_current, Unit::ampere) + ": ";
    text += joined(pieces, ", ");
    for (const Finding& finding : report.converter) {
        if (finding.verdict == Verdict::rejected) text += "; not every point of the operating range is reached";
        if (finding.verdict == Verdict::unproven) text += "; whether every point of the operating range is reached is unproven";
    }
    return text + ".";
}

std::string at_text(const At& at) {
    return "input " + format_quantity(at.input_voltage, Unit::volt) + ", output " + format_quantity(at.output_voltage, Unit::volt) + ", " +
           format_quantity(at.output_current, Unit::ampere) + ", " + format_quantity(at.ambient, Unit::celsius);
}

std::vector<std::string> cautions(const Converter& converter) {
    std::vector<std::string> out;
    const double input = std::max(converter.operating.input_voltage.highest, converter.source ? converter.source->surge.value_or(0) : 0);
    const double highest = std::max(input, converter.operating.output_voltage.highest);
    out.push_back("First power-up from a supply with its current limit set low, the load disconnected, and nobody's face above the parts.");
    out.push_back("Capacitors hold their charge after switching off: discharge them through a resistor and measure before touching anything.");
    bool wet = !converter.seats.empty() ? false : true;
    for (const Seat seat : {Seat::input_capacitor, Seat::coupling_capacitor, Seat::output_capacitor}) {
        const SeatConfig& config = converter.seat(seat);
        const auto technology = config.attributes.find("technology");
        const bool dry = technology != config.attributes.end() && (technology->second == "film" || technology->second.starts_with("ceramic"));
        wet = wet || (converter.topology && has_seat(*converter.topology, seat) && !dry);
    }
    if (wet)
        out.push_back("Polarised capacitors that are reversed or overvolted burst, and tantalum ones burn: check polarity before power goes on, and wear eye protection.");
    if (converter.topology && converter.topology->negative_output)
        out.push_back("The output is negative against the common rail: the plus end of its capacitors goes to the common rail.");
    const double resistance = converter.source ? converter.source->resistance : 0;
    if (resistance > 0 && converter.operating.input_voltage.highest / resistance > 20)
        out.push_back("The source can drive about " + format_quantity(converter.operating.input_voltage.highest / resistance, Unit::ampere, 2) +
                      " into a short: put a fuse made for that at its terminal, and take off rings and watches.");
    else
        out.push_back("A battery drives hundreds of amperes into a short: put a fuse at its terminal, and take off rings and watches.");
    if (highest > 60)
        out.push_back("There is up to " + format_quantity(highest, Unit::volt) + " in this circuit, which can kill: enclose it, and work on it only with the power off.");
    out.push_back("Whatever is connected to the mains is for the qualified alone. Local codes and licensed practice come before anything said here.");
    return out;
}

}  // namespace binwright
