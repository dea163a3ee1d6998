// SPDX-License-Identifier: GPL-3.0-or-later
// What would mend a broken finding. Each acts on its own rule, and is read off the rule's relation where that is direct.
#include <algorithm>
#include <cmath>

#include "engine/answer/judge_part.hpp"
#include "engine/loss/figures.hpp"

namespace binwright {
namespace {

Remedy remedy(Do action, std::string figure, Unit unit) {
    Remedy out;
    out.action = action;
    out.figure = std::move(figure);
    out.unit = unit;
    return out;
}

double term(const StressValue& stress, std::string_view name) {
    double sum = 0;
    for (const Term& one : stress.made_of)
        if (one.name == name) sum += one.value;
    return sum;
}

/// The rating that would do, by the rule turned round.
void add_rating(std::vector<Remedy>& out, const Finding& finding, double scale) {
    const Rule& rule = finding.rule;
    if (!rule.rating || !(scale > 0)) return;
    const bool warm = info(rule.stress).unit == Unit::celsius;
    const double stress = finding.stress->value;
    double needed = 0;
    if (rule.bound == BoundKind::fraction) needed = warm ? (stress - kCelsiusZero) / rule.value + kCelsiusZero : stress / rule.value / scale;
    else if (rule.bound == BoundKind::below) needed = stress + rule.value;
    else return;
    Remedy part = remedy(Do::rating, std::string(info(*rule.rating).name), info(*rule.rating).unit);
    part.at_least = needed;
    part.usual = usual_value(*rule.rating, needed);
    if (warm && !part.usual) return;  // no part of its kind stands such a temperature
    out.push_back(part);
}

/// The operating value at which this very part would hold, where the stress is a plain sum that contains it.
void add_operating(std::vector<Remedy>& out, const Finding& finding) {
    const StressValue& stress = *finding.stress;
    const double excess = stress.value - *finding.limit;
    if (finding.rule.stress == Stress::voltage_peak_repetitive || finding.rule.stress == Stress::voltage_average) {
        struct Choice { const char* name; const char* key; double at; };
        const Choice choices[] = {{"output", "output_voltage", stress.at.output_voltage}, {"input", "input_voltage", stress.at.input_voltage}};
        for (const Choice& choice : choices) {
            const double share = term(stress, choice.name);  // proportional to the operating value: tolerance and turns are in it
            if (!(share > excess) || !(choice.at > 0)) continue;
            Remedy lower = remedy(Do::operating, choice.key, Unit::volt);
            lower.at_most = choice.at * (1 - excess / share);
            out.push_back(lower);
            return;
        }
    }
    if (finding.rule.stress == Stress::current_average && finding.seat == Seat::rectifier && stress.value > 0 && stress.at.output_current > 0) {
        Remedy lower = remedy(Do::operating, "output_current", Unit::ampere);  // charge balance: proportional
        lower.at_most = stress.at.output_current * *finding.limit / stress.value;
        out.push_back(lower);
    }
}

void add_drive(std::vector<Remedy>& out, const Finding& finding, const JudgedPart& part) {
    const double excess = finding.stress->value - *finding.limit;
    if (finding.rule.stress == Stress::gate_voltage && part.drive_highest) {
        Remedy lower = remedy(Do::operating, "drive.voltage", Unit::volt);
        lower.at_most = *part.drive_highest - excess;
        out.push_back(lower);
    }
    if (finding.rule.stress == Stress::drive_voltage_lowest) {
        Remedy other = remedy(Do::swap, "R_DS(on) gate voltage", Unit::volt);
        other.at_most = finding.stress->value;
        for (const double usual : {10.0, 4.5, 2.5, 1.8})
            if (!other.usual && usual <= finding.stress->value) other.usual = usual;
        if (finding.stress->value > 0) out.push_back(other);
        if (part.drive_lowest) {
            Remedy higher = remedy(Do::operating, "drive.voltage", Unit::volt);
            higher.at_least = *part.drive_lowest - excess;
            out.push_back(higher);
        }
    }
}

void add_parallel(std::vector<Remedy>& out, const Finding& finding, const JudgedPart& part) {
    const bool ripple = finding.rule.stress == Stress::output_ripple;  // ESR and 1/C fall as the number grows, a little slower with others beside them
    if ((finding.rule.stress != Stress::ripple_current && !ripple) || !(*finding.limit > 0)) return;
    const double count = std::ceil((ripple ? 1.02 : 1) * part.count * finding.stress->value / *finding.limit - 1e-9);
    if (!(count > part.count) || count > 20) return;
    Remedy more = remedy(Do::parallel, "count", Unit::none);
    more.at_least = count;
    out.push_back(more);
}

void add_sink(std::vector<Remedy>& out, const Finding& finding, const JudgedPart& part) {
    const bool heat = finding.rule.stress == Stress::junction_temperature, gain = finding.rule.stress == Stress::runaway_gain;
    if ((!heat && !gain) || !part.sink || !(part.sink->resistance > 0)) return;
    Remedy better = remedy(Do::heatsink, "heatsink." + part.sink->name + ".resistance", Unit::kelvin_per_watt);
    if (part.sink_probe) {
        const auto holds = [&](double resistance, const At* only) -> std::optional<bool> {
            const auto seen = part.sink_probe(resistance, only);
            if (!seen) return std::nullopt;
            const StressValue* stress = seen->find(finding.rule.stress);
            const StressValue* leak = seen->find(Stress::runaway_gain);
            return stress && std::isfinite(stress->value) && !breaks(finding.rule, stress->value, *finding.limit) && !(leak && leak->value >= 1);
        };
        const auto found = bound_between(0.02 * part.sink->resistance, part.sink->resistance, holds, finding.stress ? &finding.stress->at : &part.top);
        if (!found) return;
        better.at_most = *found;
    } else if (heat && finding.stress && part.sink->power > 0) {
        // By what the sink carries now; with a better one losses fall a little, so this errs on the cool side.
        const double resistance = part.sink->resistance - (finding.stress->value - *finding.limit) / part.sink->power;
        if (!(resistance > 0.02 * part.sink->resistance)) return;
        better.at_most = resistance;
    } else {
        return;
    }
    out.push_back(better);
}

}  // namespace

std::vector<Remedy> remedies_for(const Finding& finding, const JudgedPart& part, double scale) {
    std::vector<Remedy> out;
    if (finding.ground != Ground::rule || !finding.limit) return out;
    if (!finding.stress) {  // runaway: no temperature to speak of
        add_sink(out, finding, part);
        return out;
    }
    if (!finding.left || !(*finding.left < 0)) return out;
    add_rating(out, finding, scale);
    if (finding.rule.requirement == "life")
        if (const auto printed = end_value(part.lot.part, Symbol::life, End::worst); printed && finding.stress->value > 0) {
            Remedy longer = remedy(Do::rating, "life", Unit::second);  // proportional to the rated life
            longer.at_least = *printed * *finding.limit / finding.stress->value;
            longer.usual = usual_value(Symbol::life, *longer.at_least);
            if (longer.usual) out.push_back(longer);
        }
    add_operating(out, finding);
    add_drive(out, finding, part);
    add_parallel(out, finding, part);
    add_sink(out, finding, part);
    return out;
}

}  // namespace binwright
