// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/command/json.hpp"

#include <cmath>

#include "engine/words/words.hpp"

namespace binwright {
namespace {

Json named_sum(const StressValue& stress, Unit unit) {
    Json terms = Json::object();
    // In °C the sum must count the zero of the scale once: it belongs to the term that is a temperature, not a rise.
    std::size_t absolute = stress.made_of.size();
    if (unit == Unit::celsius)
        for (std::size_t k = stress.made_of.size(); k-- > 0;)
            if (stress.made_of[k].name.find("ambient") != std::string::npos || (k == 0 && absolute == stress.made_of.size())) absolute = k;
    for (std::size_t k = 0; k < stress.made_of.size(); ++k) {
        const Term& term = stress.made_of[k];
        const double value = term.value - (k == absolute ? kCelsiusZero : 0);
        if (terms.contains(term.name) && terms[term.name].is_number())
            terms[term.name] = number(terms[term.name].get<double>() + value);
        else
            terms[term.name] = number(value);
    }
    return terms;
}

Json capacitor(const CapacitorStress& stress) {
    Json out = {{"voltage_average", number(stress.voltage_average)},
                {"voltage_max", number(stress.voltage_max)},
                {"voltage_min", number(stress.voltage_min)},
                {"current_rms", number(stress.current_rms)}};
    if (stress.branch_current_rms.size() > 1) {
        Json branches = Json::array();
        for (const double branch : stress.branch_current_rms) branches.push_back(number(branch));
        out["branch_current_rms"] = branches;
    }
    return out;
}

Json winding(const WindingStress& stress) {
    return {{"current_average", number(stress.current_average)},
            {"current_rms", number(stress.current_rms)},
            {"current_peak", number(stress.current_peak)},
            {"current_min", number(stress.current_min)}};
}

Json seats_of(const SteadyState& s, const Topology& topology) {
    Json seats = Json::object();
    for (const Seat seat : kSeats) {
        if (!has_seat(topology, seat)) continue;
        Json& out = seats[std::string(to_string(seat))];
        switch (seat) {
            case Seat::switch_:
                out = {{"voltage_peak", number(s.switch_.voltage_peak)},         {"current_peak", number(s.switch_.current_peak)},
                       {"current_rms", number(s.switch_.current_rms)},           {"current_average", number(s.switch_.current_average)},
                       {"current_turn_on", number(s.switch_.current_turn_on)},   {"current_turn_off", number(s.switch_.current_turn_off)},
                       {"voltage_turn_on", number(s.switch_.voltage_turn_on)},   {"voltage_turn_off", number(s.switch_.voltage_turn_off)}};
                break;
            case Seat::rectifier:
                out = {{"reverse_voltage_peak", number(s.rectifier.reverse_voltage_peak)},
                       {"current_peak", number(s.rectifier.current_peak)},
                       {"current_rms", number(s.rectifier.current_rms)},
                       {"current_average", number(s.rectifier.current_average)},
                       {"current_turn_off", number(s.rectifier.current_turn_off)},
                       {"voltage_turn_on", number(s.rectifier.voltage_turn_on)}};
                break;
            case Seat::input_capacitor: out = capacitor(s.input); break;
            case Seat::coupling_capacitor: out = capacitor(s.coupling); break;
            case Seat::output_capacitor: out = capacitor(s.output); break;
        }
    }
    return seats;
}

}  // namespace

Json number(double value) { return std::isfinite(value) ? Json(value) : Json(); }
Json number(const std::optional<double>& value) { return value ? number(*value) : Json(); }
Json number(double value, Unit unit) { return number(unit == Unit::celsius ? value - kCelsiusZero : value); }
Json number(const std::optional<double>& value, Unit unit) { return value ? number(*value, unit) : Json(); }

Json json_of(const At& at) {
    Json out = Json::object();
    for (const OperatingInfo& dimension : kOperating) out[std::string(dimension.key)] = number(at.get(dimension.quantity), dimension.unit);
    return out;
}

Json json_of(const ElectricalPoint& point, const Topology& topology, bool unregulated) {
    const SteadyState& s = point.state;
    Json out = json_of(point.at);
    if (unregulated) out["output_voltage"] = number(s.output_voltage_average);
    out["reached"] = s.reached;
    if (!s.reached) {
        out["highest_output"] = s.highest_output > 0 ? number(s.highest_output) : Json();
        out["least_load"] = s.least_load > 0 ? number(s.least_load) : Json();
    }
    out["duty"] = number(s.duty);
    out["mode"] = std::string(to_string(s.mode));
    out["rectifier_fraction"] = number(s.rectifier_fraction);
    out["warnings"] = s.warnings;
    out["input_current_average"] = number(s.input_current_average);
    out["output_voltage_average"] = number(s.output_voltage_average);
    out["output_current_average"] = number(s.output_current_average);
    out["output_ripple"] = number(s.output_ripple);
    out["input_power"] = number(s.input_power);
    out["output_power"] = number(s.output_power);
    out["efficiency"] = s.input_power > 0 ? number(s.output_power / s.input_power) : Json();
    out["seats"] = seats_of(s, topology);
    out["windings"] = {{"primary", winding(s.primary)}};
    if (has_secondary(topology)) out["windings"]["secondary"] = winding(s.secondary);
    if (topology.transformer) out["windings"]["magnetising"] = winding(s.magnetising);
    return out;
}

Json json_of(const Conditions& conditions) {
    Json out = Json::object();
    if (conditions.voltage) out["voltage"] = number(*conditions.voltage);
    if (conditions.current) out["current"] = number(*conditions.current);
    if (conditions.frequency) out["frequency"] = number(*conditions.frequency);
    if (conditions.temperature) out["temperature"] = number(*conditions.temperature, Unit::celsius);
    return out;
}

Json json_of(const Figure& figure) {
    const SymbolInfo& about = info(figure.symbol);
    Json out = {{"symbol", std::string(about.name)},
                {"best", number(figure.value.best, about.unit)},
                {"typical", number(figure.value.typical, about.unit)},
                {"worst", number(figure.value.worst, about.unit)},
                {"unit", std::string(unit_symbol(about.unit))},
                {"known", std::string(to_string(figure.known))},
                {"column", std::string(to_string(figure.column))},
                {"at", json_of(figure.at)}};
    if (figure.both_legs) out["both_legs"] = true;
    if (!figure.date.empty()) out["date"] = figure.date;
    if (!figure.method.empty()) out["method"] = figure.method;
    return out;
}

namespace {

std::string_view name_of(Ground ground) {
    switch (ground) {
        case Ground::rule: return "rule";
        case Ground::nothing_fitted: return "nothing_fitted";
        case Ground::bare_element: return "bare_element";
        case Ground::not_covered: return "not_covered";
        case Ground::no_rule: return "no_rule";
        case Ground::suspect: return "suspect";
        case Ground::unmeasured: return "unmeasured";
        case Ground::expired: return "expired";
        case Ground::outside_model: return "outside_model";
    }
    return "";
}

/// The unit of what a remedy bounds, as JSON tells it: a temperature in °C, all else in base units.
Json remedy_number(const std::optional<double>& value, const Remedy& remedy) { return number(value, remedy.unit); }

}  // namespace

Json json_of(const Remedy& remedy) {
    Json out = {{"do", std::string(to_string(remedy.action))}, {"figure", remedy.figure}};
    if (remedy.at_least) out["at_least"] = remedy_number(remedy.at_least, remedy);
    if (remedy.at_most) out["at_most"] = remedy_number(remedy.at_most, remedy);
    out["usual"] = remedy_number(remedy.usual, remedy);
    const Json at = json_of(remedy.at);
    if (!at.empty()) out["at"] = at;
    if (remedy.accuracy) out["accuracy"] = number(remedy.accuracy);
    out["text"] = remedy_text(remedy);
    return out;
}

Json json_of(const Finding& finding) {
    const StressInfo& about = info(finding.stress ? finding.stress->stress : finding.rule.stress);
    const Wording wording = words(finding);
    Json out;
    if (!finding.of_converter) out["seat"] = std::string(to_string(finding.seat));
    const bool by_rule = !finding.rule.id.empty();
    out["rule"] = by_rule ? Json(finding.rule.id) : Json();
    out["rulebook"] = finding.book;
    out["ground"] = std::string(name_of(finding.ground));
    out["quantity"] = by_rule || finding.stress ? Json(std::string(about.name)) : Json();
    out["unit"] = by_rule || finding.stress ? Json(std::string(unit_symbol(about.unit))) : Json();
    out["stress"] = finding.stress ? number(finding.stress->value, about.unit) : Json();
    out["rating"] = number(finding.rating, finding.rule.rating ? info(*finding.rule.rating).unit : about.unit);
    if (finding.printed) out["printed"] = number(finding.printed, finding.rule.rating ? info(*finding.rule.rating).unit : about.unit);
    out["limit"] = number(finding.limit, about.unit);
    out["used"] = number(finding.used);
    out["left"] = number(finding.left);
    out["headroom"] = number(finding.headroom);
    out["verdict"] = std::string(to_string(finding.verdict));
    out["at"] = finding.stress ? json_of(finding.stress->at) : Json();
    out["made_of"] = finding.stress ? named_sum(*finding.stress, about.unit) : Json::object();
    out["rests_on"] = finding.rests_on;
    if (!finding.missing.empty()) out["missing"] = finding.missing;
    if (!finding.why.empty()) out["why"] = finding.why;
    if (!finding.told.empty()) {
        out["told"] = Json::array();
        for (const Figure& figure : finding.told) out["told"].push_back(json_of(figure));
    }
    if (finding.bound) {
        const SymbolInfo& figure = info(finding.bound->figure);
        Json bound = {{"figure", std::string(figure.name)}};
        if (finding.bound->at_most) bound["at_most"] = number(*finding.bound->at_most, figure.unit);
        if (finding.bound->at_least) bound["at_least"] = number(*finding.bound->at_least, figure.unit);
        bound["at"] = json_of(finding.bound->at);
        out["bound"] = bound;
    }
    out["text"] = wording.line;
    if (!wording.because.empty()) out["because"] = wording.because;
    out["rule_text"] = wording.rule;
    if (finding.ground == Ground::rule && by_rule) {
        out["source"] = finding.rule.source;
        if (!finding.rule.clause.empty()) out["clause"] = finding.rule.clause;
        out["known"] = finding.rule.known;
        if (!finding.rule.reading.empty()) out["reading"] = finding.rule.reading;
        if (!finding.goes_before.empty()) out["goes_before"] = finding.goes_before;
        if (!finding.binds_before.empty()) out["binds_before"] = finding.binds_before;
    }
    if (!wording.settle.empty()) out["settle"] = wording.settle;
    out["remedies"] = Json::array();
    for (const Remedy& remedy : finding.remedies) out["remedies"].push_back(json_of(remedy));
    return out;
}

Json json_of(const SeatReport& report) {
    Json out = {{"seat", std::string(to_string(report.seat))},
                {"reference", report.reference},
                {"lot", report.lot.empty() ? Json() : Json(report.lot)},
                {"part", report.part.empty() ? Json() : Json(report.part)},
                {"verdict", std::string(to_string(report.verdict))},
                {"findings", Json::array()}};
    for (const Finding& finding : report.findings) out["findings"].push_back(json_of(finding));
    return out;
}

Json json_of(const Lot& lot) {
    Json out = {{"lot", lot.label}, {"part", lot.part.name}, {"family", std::string(to_string(lot.part.family))},
                {"origin", std::string(to_string(lot.origin))}, {"count", lot.count}, {"suspect", lot.suspect}};
    if (lot.suspect) out["suspect_why"] = lot.suspect_why;
    out["attributes"] = lot.part.attributes;
    out["figures"] = Json::array();
    for (const Figure& figure : lot.part.figures) out["figures"].push_back(json_of(figure));
    return out;
}

Json json_of(const LotRecord& lot, const Part& part) {
    return {{"lot", lot_label(lot.number)},    {"part", part.name},   {"family", std::string(to_string(part.family))},
            {"count", lot.count},              {"place", lot.place},  {"origin", std::string(to_string(lot.origin))},
            {"date_code", lot.date_code},      {"donor", lot.donor},  {"note", lot.note}};
}

}  // namespace binwright
