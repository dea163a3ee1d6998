// SPDX-License-Identifier: GPL-3.0-or-later
// A finding into its sentences.
#include "engine/words/words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/answer/rating.hpp"
#include "engine/rule/stresses.hpp"
#include "engine/words/numbers.hpp"

namespace binwright {
namespace {

Unit unit_of(const Finding& finding) { return info(finding.rule.stress).unit; }
bool warm(const Finding& finding) { return unit_of(finding) == Unit::celsius; }
bool at_least(const Finding& finding) { return finding.rule.bound == BoundKind::at_least; }

Shown shown_of(const Finding& finding) {
    const double stress = finding.stress ? finding.stress->value : NAN;
    if (finding.limit && finding.stress) return shown_for(stress, *finding.limit, unit_of(finding));
    return shown_for(finding.limit ? *finding.limit : stress, unit_of(finding));
}

/// How each stress is told: in front of the part, what the part is called, and without a rating.
struct Phrase {
    Stress stress;
    const char* verb;   ///< "{} across"
    const char* noun;   ///< "part", "leg", "gate"
};
constexpr Phrase kPhrases[] = {
    {Stress::voltage_average, "{} mean across", "part"},     {Stress::voltage_peak_repetitive, "{} across", "part"},
    {Stress::voltage_peak_single, "{} once across", "part"}, {Stress::voltage_reverse, "{} in reverse across", "part"},
    {Stress::gate_voltage, "{} at", "gate"},                 {Stress::drive_voltage_lowest, "{} at the gate at the lowest", ""},
    {Stress::current_average, "{} mean through", "leg"},     {Stress::current_rms, "{} RMS through", "part"},
    {Stress::current_peak, "{} peak through", "part"},       {Stress::ripple_current, "{} ripple through", "part"},
    {Stress::surge_integral, "{} through", "fuse"},
    {Stress::current_surge, "a surge of {} through", "part"},
    {Stress::output_ripple, "{} of output ripple, peak to peak", ""},
    {Stress::power, "{} lost in", "part"},                   {Stress::junction_temperature, "junction at {} in", "part"},
    {Stress::hot_spot_temperature, "hot spot at {} in", "part"}, {Stress::runaway_gain, "leakage heat gain {}", ""},
    {Stress::air_temperature, "air at {} beside", "part"},   {Stress::series_resistance, "charged through {}", ""},
    {Stress::life, "life {}", ""},                           {Stress::regulation, "{} of the operating range is reached", ""},
};
const Phrase& phrase_of(Stress stress) {
    for (const Phrase& one : kPhrases)
        if (one.stress == stress) return one;
    return kPhrases[0];
}

/// "18.1 V across a 20 V part (90 %)"; without a rating "18.1 V".
std::string head(const Finding& finding, const Shown& shown) {
    const Phrase& phrase = phrase_of(finding.rule.stress);
    const std::string value = shown(finding.stress->value);
    std::string text = fmt::format(fmt::runtime(phrase.verb), value);
    if (*phrase.noun == '\0') return text;
    if (!finding.rating || !finding.rule.rating) {
        for (const char* preposition : {" across", " through", " at", " lost in", " beside", " in"})
            if (text.ends_with(preposition)) text.resize(text.size() - std::string_view(preposition).size());
        return finding.rule.stress == Stress::gate_voltage ? text + " at the gate" : text;
    }
    const Unit unit = info(*finding.rule.rating).unit;
    const std::string& of = finding.rule.selects;
    const char* noun = of == "fuse" || of == "choke" || of == "resistor" ? of.c_str() : phrase.noun;
    text += " " + with_article(format_quantity(finding.printed.value_or(*finding.rating), unit)) + " " + noun;
    if (warm(finding) || !finding.used) return text;
    text += " (" + fmt::format("{:.0f} %", 100 * *finding.used);
    if (finding.printed) text += " of the " + format_quantity(*finding.rating, unit) + " that count here";
    return text + ")";
}

std::string too_far(const Finding& finding) {
    switch (finding.rule.stress) {
        case Stress::junction_temperature:
        case Stress::air_temperature:
        case Stress::hot_spot_temperature: return "too hot";
        case Stress::life: return "too short";
        default: return at_least(finding) ? "too little" : "too much";
    }
}

std::string left_text(const Finding& finding, const Shown& shown) {
    if (!finding.left || !finding.limit || !finding.stress) return {};
    if (std::abs(*finding.left) <= 1e-9 * std::abs(*finding.limit)) return "nothing left";
    const double apart = std::abs(shown.round(finding.stress->value) - shown.round(*finding.limit)) * shown.factor;
    return shown.difference(apart) + " " + (*finding.left < 0 ? too_far(finding) : at_least(finding) ? "to spare" : "left");
}

/// "; the rule allows 16.0 V: 2.1 V too much"
std::string tail(const Finding& finding, const Shown& shown) {
    const std::string left = left_text(finding, shown);
    if (left.empty()) return {};
    const std::string limit = shown(*finding.limit);
    switch (finding.rule.stress) {
        case Stress::drive_voltage_lowest: return "; R_DS(on) is guaranteed from " + limit + ": " + left;
        case Stress::life: return "; " + limit + " are required: " + left;
        case Stress::output_ripple: return "; " + limit + (finding.rule.requirement.empty() ? " is the rule: " : " is allowed: ") + left;
        case Stress::runaway_gain:
            return (finding.stress->value >= 1 ? ": it runs away" : "") + std::string("; the rule allows ") + limit + ": " + left;
        case Stress::series_resistance: return "; the rule wants " + limit + ": " + left;
        case Stress::regulation: return *finding.left < 0 ? "; all of it is wanted" : "";
        default: return "; the rule " + std::string(at_least(finding) ? "wants " : "allows ") + limit + ": " + left;
    }
}

bool is_symbol(const std::string& name) {
    for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor, Family::fuse, Family::choke, Family::resistor})
        if (find_symbol(name, family)) return true;
    return false;
}

/// "its ESR is not on record"
std::string missing_text(const std::string& missing) {
    if (missing == "technology") return "of which kind it is stands nowhere, and not every kind would break";
    if (missing == "what it sees") return "that could not be computed";
    if (is_symbol(missing)) return "its " + missing + " is not on record";
    if (missing.find('.') != std::string::npos) return "the file gives no " + missing;
    return missing + " is not known";
}

std::vector<std::string> names_of(const std::vector<Figure>& figures) {
    std::vector<std::string> names;
    for (const Figure& figure : figures)
        if (const std::string name(info(figure.symbol).name); std::find(names.begin(), names.end(), name) == names.end()) names.push_back(name);
    return names;
}

std::string line_of(const Finding& finding) {
    if (finding.ground != Ground::rule) return finding.why;
    const std::string told =
        finding.told.empty() ? "" : ", if " + joined(names_of(finding.told)) + (names_of(finding.told).size() == 1 ? " is" : " are") + " as told";
    if (!finding.why.empty()) return finding.why + told;  // runaway
    if (!finding.stress) return std::string(info(finding.rule.stress).meaning) + " not known: " + missing_text(finding.missing);
    const Shown shown = shown_of(finding);
    if (!finding.missing.empty()) {
        Finding bare = finding;
        if (finding.rule.rating && finding.missing == info(*finding.rule.rating).name) bare.rating.reset();
        const std::string numbers = finding.missing == "technology" ? tail(finding, shown) : "";
        return head(bare, shown) + numbers + "; " + missing_text(finding.missing);
    }
    if (finding.rule.stress == Stress::regulation && finding.left && *finding.left >= 0) return "the whole operating range is reached";
    if (finding.rule.stress == Stress::voltage_reverse && finding.stress->value <= 0) return "never in reverse" + told;
    std::string text = head(finding, shown) + tail(finding, shown) + told;
    const bool broken = finding.left && *finding.left < -1e-9 * std::abs(finding.limit.value_or(0));
    if (finding.verdict == Verdict::unproven && finding.told.empty() && broken) text += ", at the worst that is possible";
    return text;
}

std::string because_of(const Finding& finding) {
    if (finding.ground != Ground::rule || !finding.stress) return {};
    const StressValue& stress = *finding.stress;
    const Shown shown = shown_of(finding);
    std::string sum;
    bool output = false, input = false;
    if (stress.made_of.size() > 1)
        for (const Term& term : stress.made_of) {
            const bool absolute = warm(finding) && sum.empty();
            const std::string value = absolute ? shown(term.value) : warm(finding) ? shown.difference(term.value) : shown(std::abs(term.value));
            if (!absolute && shown.round(std::abs(term.value) + (warm(finding) ? kCelsiusZero : 0)) == 0) continue;
            sum += sum.empty() ? (term.value < 0 && !absolute ? "−" : "") : term.value < 0 ? " − " : " + ";
            sum += term.name + " " + value;
            output = output || term.name == "output";
            input = input || term.name == "input";
        }
    if (finding.rule.stress == Stress::gate_voltage) return sum;
    const bool heat = warm(finding) || finding.rule.stress == Stress::runaway_gain || finding.rule.stress == Stress::life ||
                      finding.rule.stress == Stress::power || finding.rule.stress == Stress::regulation;
    if (!(stress.at.input_voltage > 0)) return sum;
    if (!(stress.at.frequency > 0)) return sum.empty() ? "when " + format_quantity(stress.at.input_voltage, Unit::volt) + " are connected hot" : sum;
    std::vector<std::string> at;
    if (!input) at.push_back("input " + format_quantity(stress.at.input_voltage, Unit::volt));
    if (!output) at.push_back("output " + format_quantity(stress.at.output_voltage, Unit::volt));
    at.push_back(format_quantity(stress.at.output_current, Unit::ampere));
    if (heat && !warm(finding)) at.push_back(format_quantity(stress.at.ambient, Unit::celsius));
    return (sum.empty() ? "" : sum + ", ") + "at " + joined(at);
}

std::string settle_of(const Finding& finding) {
    std::vector<std::string> ways;
    for (const Remedy& remedy : finding.remedies)
        if (remedy.action == Do::measure) ways.push_back(remedy_text(remedy));
    const bool of_rating = finding.bound && info(finding.bound->figure).rating;
    if (of_rating && finding.bound->at_least)
        ways.push_back(with_article(std::string(info(finding.bound->figure).name)) + " of " +
                       format_quantity(rounded_up(*finding.bound->at_least, 3), info(finding.bound->figure).unit) + " or more" + (finding.bound->figure == Symbol::I_D ? " at its case temperature" : "") + ", read off the part or its data sheet");
    std::vector<std::string> told;
    for (const Figure& figure : finding.told) told.push_back(std::string(info(figure.symbol).name) + " (" + format_quantity(figure.value.worst, info(figure.symbol).unit) + ")");
    std::string out;
    if (ways.size() > 1 && finding.ground == Ground::unmeasured) out = joined(ways);
    else
        for (const std::string& way : ways) out += (out.empty() ? "" : "; or ") + way;
    const bool lacks_rating = finding.ground == Ground::rule && is_symbol(finding.missing) && ways.empty();
    if (lacks_rating) out = "its " + finding.missing + ", read off the part or its data sheet";
    if (!told.empty()) out += (out.empty() ? "" : "; and ") + ("vouch for " + joined(told) + ", told and not confirmed");
    if (finding.ground == Ground::suspect) out = "measure it again; a part that differs from its type is not that type";
    if (finding.ground == Ground::expired) out = "measure it again";
    if (finding.ground == Ground::nothing_fitted || finding.ground == Ground::bare_element) out = "choose a part for this seat";
    if (out.empty() && !finding.missing.empty() && finding.verdict == Verdict::unproven && finding.ground == Ground::rule) {
        if (finding.missing == "technology") out = "its kind (technology), seen on the part itself";
        else if (finding.missing.find('.') != std::string::npos) out = finding.missing + " in the file";
    }
    return out;
}

std::string bound_text(const Rule& rule, Stress stress, const Piece& piece) {
    const StressInfo& about = info(stress);
    const std::string reference = piece.rating ? std::string(info(*piece.rating).name) : piece.expression ? piece.expression->text : piece.requirement;
    std::string meaning = reference;
    for (const RequirementInfo& one : requirements())
        if (one.name == reference) meaning = one.meaning;
    switch (piece.bound) {
        case BoundKind::fraction: return format_quantity(piece.value, Unit::fraction) + " of " + meaning;
        case BoundKind::below: return format_quantity(piece.value, about.unit == Unit::celsius ? Unit::kelvin : about.unit) + " below " + meaning;
        case BoundKind::absolute: return (rule.several.empty() ? std::string(about.meaning) + " at most " : "") + format_quantity(piece.value, about.unit);
        case BoundKind::at_least:
            if (reference == "voltage applied") return (rule.several.empty() ? "at least " : "") + format_quantity(piece.value, about.unit) + " for each volt applied";
            if (reference.empty()) {
                if (stress == Stress::regulation && piece.value == 1) return "the whole operating range is reached";
                return (rule.several.empty() ? std::string(about.meaning) + " at least " : "") + format_quantity(piece.value, about.unit);
            }
            return std::string(rule.several.empty() ? "at least " : "") + (piece.value == 1 ? "" : format_quantity(piece.value, Unit::fraction) + " of ") + meaning;
        default: return {};
    }
}

/// "60 % of U_R up to 70 °C, falling to 40 % at 110 °C, nothing above (by air temperature)"
std::string curve_text(const Rule& rule) {
    const auto& points = rule.curve->points;
    const Unit unit = rule.bound == BoundKind::below ? (info(rule.stress).unit == Unit::celsius ? Unit::kelvin : info(rule.stress).unit)
                      : needs_reference(rule)        ? Unit::fraction
                                                     : info(rule.stress).unit;
    std::string text = bound_text(rule, rule.stress, {rule.bound, rule.rating, rule.requirement, rule.expression, points.front().second});
    text += " up to " + format_quantity(points.front().first, Unit::celsius);
    for (std::size_t k = 1; k < points.size(); ++k)
        text += std::string(points[k].second < points[k - 1].second ? ", falling to " : points[k].second > points[k - 1].second ? ", rising to " : ", still ") +
                format_quantity(points[k].second, unit) + " at " + format_quantity(points[k].first, Unit::celsius);
    return text + ", nothing above (by " + std::string(info(rule.curve->over).meaning) + ")";
}

/// How much the rule's value is worth: how it is known, and what was chosen where its source can be read in two ways.
std::string known_text(const Rule& rule) {
    std::string text;
    if (rule.known == "from memory") text = "from memory, check it against the original";
    else if (rule.known == "seen, secondary") text = "seen in a transcription, not in the original";
    else if (!rule.known.empty() && rule.known != rule.source) text = rule.known;
    if (!rule.reading.empty()) text += (text.empty() ? "" : "; ") + std::string("the stricter reading: ") + rule.reading;
    return text;
}

}  // namespace

std::string rule_text(const Rule& rule) {
    if (rule.bound == BoundKind::not_permitted) return "not permitted";
    if (rule.bound == BoundKind::not_covered) return "not covered";
    std::string text;
    if (rule.several.empty()) {
        text = rule.curve ? curve_text(rule) : bound_text(rule, rule.stress, {rule.bound, rule.rating, rule.requirement, rule.expression, rule.value});
    } else {
        std::vector<std::string> pieces;
        for (const Piece& piece : rule.several) pieces.push_back(bound_text(rule, rule.stress, piece));
        text = std::string(rule.lowest ? "the lower of " : "the greater of ") + joined(pieces);
    }
    if (rule.rated_at == RatedAt::case_ && rule.rating == Symbol::P_tot) text += " at the case temperature";
    if (rule.rated_at == RatedAt::printed && rule.rating) text += " as printed";
    return text;
}

Wording words(const Finding& finding) {
    Wording out;
    out.line = line_of(finding);
    out.because = because_of(finding);
    if (finding.ground == Ground::rule) {
        const Rule& rule = finding.rule;
        std::string source = rule.source;
        if (!rule.clause.empty()) source += ", " + rule.clause;
        if (const std::string known = known_text(rule); !known.empty()) source += "; " + known;
        out.rule = finding.book + ", " + rule.title + ": " + rule_text(rule) + (source.empty() ? "" : " (" + source + ")");
        if (rule.bound == BoundKind::not_permitted || rule.bound == BoundKind::not_covered) out.because = rule.why;
        if (!finding.goes_before.empty()) out.beside = "the most special rule: it goes before " + joined(finding.goes_before);
        if (!finding.binds_before.empty())
            out.beside += (out.beside.empty() ? "" : "; ") + std::string("the tightest of ") + std::to_string(finding.binds_before.size() + 1) + " rules on this, before " + joined(finding.binds_before);
    }
    for (const Remedy& remedy : finding.remedies)
        if (remedy.action != Do::measure) out.mend += (out.mend.empty() ? "" : "; or ") + remedy_text(remedy);
    if (finding.verdict == Verdict::unproven) out.settle = settle_of(finding);
    for (const std::string& one : finding.rests_on) out.rests_on += (out.rests_on.empty() ? "" : "; ") + one;
    return out;
}

std::string left(const Finding& finding) {
    return finding.ground == Ground::rule ? left_text(finding, shown_of(finding)) : std::string();
}

std::string remedy_text(const Remedy& remedy) {
    const auto exactly = [&](double exact, double usual) {
        const double zero = remedy.unit == Unit::celsius ? kCelsiusZero : 0;  // digits are those of °C
        const std::string text = format_quantity(rounded_up(exact - zero, 3) + zero, remedy.unit);
        return text == format_quantity(usual, remedy.unit) ? std::string() : " (exactly: " + text + ")";
    };
    const auto symbol = [&]() -> std::optional<Symbol> {
        for (const SymbolInfo& one : symbols())
            if (one.name == remedy.figure) return one.symbol;
        return std::nullopt;
    }();
    switch (remedy.action) {
        case Do::rating: {
            if (!remedy.at_least) return "a part with another " + remedy.figure;
            const double value = remedy.usual.value_or(rounded_up(*remedy.at_least, 3));
            const std::string shown = format_quantity(value, remedy.unit), exact = remedy.usual ? exactly(*remedy.at_least, value) : "";
            if (symbol == Symbol::U_R || symbol == Symbol::V_DSS || symbol == Symbol::V_RRM) return with_article(shown) + " part or higher" + exact;
            if (symbol == Symbol::T_jmax || symbol == Symbol::T_max) return "a part for " + shown + " or higher" + exact;
            if (symbol == Symbol::life) return "a part of " + shown + " rated life or more" + exact;
            return "a part with " + with_article(remedy.figure) + " of " + shown + " or more" + exact;
        }
        case Do::operating: {
            std::string what = remedy.figure == "drive.voltage"    ? "a drive voltage"
                               : remedy.figure == "output_voltage" ? "an output"
                               : remedy.figure == "input_voltage"  ? "an input"
                                                                   : with_article(remedy.figure);
            std::replace(what.begin(), what.end(), '_', ' ');
            if (remedy.at_most) return what + " no higher than " + format_quantity(rounded_down(*remedy.at_most, 3), remedy.unit);
            return what + " of at least " + format_quantity(rounded_up(remedy.at_least.value_or(0), 3), remedy.unit);
        }
        case Do::parallel: return fmt::format("{:.0f} in parallel", remedy.at_least.value_or(0));
        case Do::heatsink: {
            std::string name = remedy.figure;
            if (name.starts_with("heatsink.") && name.ends_with(".resistance")) name = name.substr(9, name.size() - 20);
            return "a heatsink of " + format_quantity(rounded_down(remedy.at_most.value_or(0), 2), remedy.unit) + " or less in place of " + name;
        }
        case Do::swap: {
            if (remedy.figure == "technology") return "a part of another kind";
            if (!remedy.at_most) return "another part";
            const std::string value = format_quantity(remedy.usual.value_or(*remedy.at_most), remedy.unit);
            return "a part whose R_DS(on) is guaranteed at " + value + " or less" +
                   (remedy.usual && *remedy.usual != *remedy.at_most ? " (exactly: " + format_quantity(rounded_down(*remedy.at_most, 3), remedy.unit) + ")" : "");
        }
        case Do::measure: {
            std::string text;
            if (remedy.at_most || remedy.at_least)
                text = with_article(remedy.figure) + " of " + format_quantity(remedy.at_most ? *remedy.at_most : *remedy.at_least, remedy.unit) +
                       (remedy.at_most ? " or less" : " or more");
            else
                text = "measure its " + remedy.figure;
            if (remedy.at.frequency) text += " at " + format_quantity(*remedy.at.frequency, Unit::hertz);
            if (remedy.accuracy) text += " (measure within " + format_quantity(*remedy.accuracy, Unit::fraction) + ")";
            return text;
        }
    }
    return {};
}

}  // namespace binwright
