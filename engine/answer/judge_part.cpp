// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/judge_part.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <tuple>

#include "engine/answer/models.hpp"
#include "engine/answer/rating.hpp"
#include "engine/loss/figures.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

constexpr double kInfinite = std::numeric_limits<double>::infinity();

bool upper(const Rule& rule) { return rule.bound != BoundKind::at_least; }

bool celsius(const Rule& rule) { return info(rule.stress).unit == Unit::celsius; }

/// Figures on which the stress rests: those told, and the first that is not on record at all.
void look_at_figures(Finding& finding, const JudgedPart& part) {
    if (part.voltages_only) return;  // what the circuit puts there does not depend on it
    const auto resting = stress_row(finding.rule.stress).rests_on;
    for (const auto& [symbol, why] : part.lot.uncounted)
        if (std::find(resting.begin(), resting.end(), symbol) != resting.end() || finding.rule.rating == symbol) finding.rests_on.push_back(why);
    for (const Symbol symbol : resting)
        for (const Figure* figure : figures_of(part.lot.part, symbol))
            if (figure->known == Known::told &&
                std::none_of(finding.told.begin(), finding.told.end(), [&](const Figure& one) { return one.symbol == symbol; }))
                finding.told.push_back(*figure);
    // A capacitor without ESR or loss factor is in the network as a perfect one: what depends on it is not decided.
    if (finding.missing.empty() && part.lot.part.family == Family::capacitor && std::find(resting.begin(), resting.end(), Symbol::ESR) != resting.end() &&
        figures_of(part.lot.part, Symbol::ESR).empty() && figures_of(part.lot.part, Symbol::tan_delta).empty())
        finding.missing = "ESR";
}

void fill_numbers(Finding& finding, double stress, std::optional<double> rating, std::optional<double> limit, double highest_ambient) {
    finding.rating = rating;
    finding.limit = limit;
    const Rule& rule = finding.rule;
    if (!std::isfinite(stress) || !limit) return;
    if (rating && *rating != 0)
        finding.used = celsius(rule) ? (stress - kCelsiusZero) / (*rating - kCelsiusZero) : stress / *rating;
    finding.left = upper(rule) ? *limit - stress : stress - *limit;
    if (celsius(rule)) {
        if (*limit > highest_ambient) finding.headroom = (*limit - stress) / (*limit - highest_ambient);
    } else if (upper(rule) ? *limit > 0 : stress > 0) {
        finding.headroom = upper(rule) ? 1 - stress / *limit : 1 - *limit / stress;
    }
}

std::string with_article_of(const std::string& selector) {
    const auto slash = selector.find('/');
    const std::string family = selector.substr(0, slash), words = slash == std::string::npos ? family : selector.substr(slash + 1) + " " + family;
    return (std::string_view("aeiou").find(words.front()) != std::string_view::npos ? "an " : "a ") + words;
}

void append(std::vector<std::string>& to, const std::vector<std::string>& from) {
    for (const std::string& one : from)
        if (std::find(to.begin(), to.end(), one) == to.end()) to.push_back(one);
}

/// The stress of a part under one figure set, against the rule's limit there. Empty where it cannot be told.
std::optional<bool> holds_with(const Rule& rule, JudgedPart part, Symbol symbol, double value, const At* only) {
    const auto seen = part.probe(symbol, value, only);
    if (!seen) return std::nullopt;
    Figure figure;
    figure.symbol = symbol;
    for (const Figure& one : part.lot.part.figures)
        if (one.symbol == symbol) figure = one;
    figure.value = {value, value, value};
    figure.known = Known::measured;
    std::erase_if(part.lot.part.figures, [&](const Figure& one) { return one.symbol == symbol; });
    part.lot.part.figures.push_back(figure);
    const StressValue* stress = seen->find(rule.stress);
    if (!stress) return std::nullopt;
    const Held held = held_to(rule, part, *seen, stress, End::worst);
    if (!held.limit) return std::nullopt;
    return held.beyond.empty() && !breaks(held.rule, stress->value, *held.limit);
}

struct SearchRange {
    Symbol symbol;
    double harmless, harmful;
};
// How far a figure that is not on record is looked for; beyond it, no part of the kind lies. Common practice, no source.
constexpr SearchRange kRanges[] = {
    {Symbol::ESR, 1e-3, 20},     {Symbol::R_DSon, 5e-4, 10}, {Symbol::R_thjc, 0.2, 30},  {Symbol::R_thja, 10, 300}, {Symbol::I_R, 1e-7, 0.5},
    {Symbol::V_F, 0.2, 2},       {Symbol::Q_g, 1e-9, 1e-6},  {Symbol::Q_gd, 1e-10, 5e-7}, {Symbol::C_oss, 1e-11, 2e-8}, {Symbol::Q_rr, 1e-10, 1e-5},
    {Symbol::C, 1e-2, 1e-9},     {Symbol::I_ripple, 100, 1e-2},
};

/// The value of one figure that would decide an undecided finding.
void find_bound(Finding& finding, const JudgedPart& part) {
    const Rule& rule = finding.rule;
    const Part& type = part.lot.part;
    if (rule.rating && (finding.missing == info(*rule.rating).name)) {  // the rating itself: straight from the rule
        if (!finding.stress) return;
        if (rule.bound == BoundKind::fraction)
            finding.bound = Bound{*rule.rating, {}, celsius(rule) ? (finding.stress->value - kCelsiusZero) / rule.value + kCelsiusZero : finding.stress->value / rule.value, {}};
        else if (rule.bound == BoundKind::below)
            finding.bound = Bound{*rule.rating, {}, finding.stress->value + rule.value, {}};
        return;
    }
    if (!part.probe) return;
    std::vector<Symbol> candidates;
    if (!finding.missing.empty()) {
        if (const auto symbol = find_symbol(finding.missing, type.family)) candidates.push_back(*symbol);
    } else {
        for (const Symbol symbol : stress_row(rule.stress).rests_on)
            for (const Figure* figure : figures_of(type, symbol))
                if (!info(symbol).rating && figure->known != Known::measured && !figure->value.exact()) candidates.push_back(symbol);
        if (part.lot.part.family == Family::capacitor && ages_unmeasured(part.lot) && !figures_of(type, Symbol::ESR).empty()) candidates.push_back(Symbol::ESR);
    }
    for (const Symbol symbol : candidates) {
        const SearchRange* range = std::find_if(std::begin(kRanges), std::end(kRanges), [&](const SearchRange& one) { return one.symbol == symbol; });
        double good = 0, bad = 0;
        const auto figures = figures_of(type, symbol);
        if (!figures.empty()) {
            good = figures.front()->value.best;
            bad = figures.front()->value.worst * (good == figures.front()->value.worst ? 4 : 1);
        } else if (range != std::end(kRanges)) {
            good = range->harmless;
            bad = range->harmful;
        } else {
            continue;
        }
        const auto holds = [&](double value, const At* only) { return holds_with(rule, part, symbol, value, only); };
        const auto found = bound_between(good, bad, holds, finding.stress ? &finding.stress->at : &part.top);
        if (!found) continue;
        Bound bound;
        bound.figure = symbol;
        (good < bad ? bound.at_most : bound.at_least) = good < bad ? rounded_down(*found, 2) : rounded_up(*found, 2);
        bound.at = figures.empty() ? info(symbol).usual : figures.front()->at;
        if (symbol == Symbol::ESR && !bound.at.frequency) bound.at.frequency = info(symbol).usual.frequency;
        finding.bound = bound;
        Remedy measure;
        measure.action = Do::measure;
        measure.figure = info(symbol).name;
        measure.unit = info(symbol).unit;
        measure.at_most = bound.at_most;
        measure.at_least = bound.at_least;
        measure.at = bound.at;
        if (!figures.empty()) {  // so near that a part typical of its kind is told from one at the bound
            const double apart = std::abs(*found / figures.front()->value.typical - 1);
            for (const double usual : {0.5, 0.3, 0.2, 0.15, 0.1, 0.05, 0.02})
                if (!measure.accuracy && usual <= apart) measure.accuracy = usual;
        }
        finding.remedies.push_back(measure);
        return;
    }
}

/// A rule that needs no stress: such a part is not permitted, or the rulebook says nothing of it.
Finding flat_finding(const Rule& rule, const Part& part) {
    Finding finding;
    finding.rule = rule;
    const bool banned = rule.bound == BoundKind::not_permitted;
    finding.verdict = banned ? Verdict::rejected : Verdict::not_covered;
    const std::string who = with_article_of(selector(part));
    const std::string subject = rule.of_part ? "" : std::string(info(rule.stress).meaning) + " of ";
    finding.why = banned ? "the rulebook does not permit " + who + " here" : "the rulebook says nothing of " + (subject.empty() ? who : "the " + subject + who);
    if (banned) {
        Remedy other;
        other.action = Do::swap;
        other.figure = "technology";
        finding.remedies.push_back(other);
    }
    return finding;
}

Finding judge_rule(const Rule& rule, const JudgedPart& part, double& scale) {
    if (rule.bound == BoundKind::not_permitted || rule.bound == BoundKind::not_covered) return flat_finding(rule, part.lot.part);
    Finding finding;
    const StressValue* worst = part.worst.find(rule.stress);
    const StressValue* best = part.best.find(rule.stress);
    if (worst && std::isnan(worst->value)) worst = nullptr;
    if (best && std::isnan(best->value)) best = nullptr;
    if (!best) best = worst;
    if (!worst) worst = best;
    const Held held_worst = held_to(rule, part, part.worst, worst, End::worst);
    const Held held_best = held_to(rule, part, part.best, best, End::best);
    const Rating& at_worst = held_worst.rating;
    finding.rule = held_worst.rule;
    scale = at_worst.scale;

    std::string missing;
    for (const auto& [stress, figure] : part.worst.missing)
        if (stress == rule.stress && missing.empty()) missing = figure;
    if (missing.empty() && !worst) missing = "what it sees";
    if (missing.empty()) missing = at_worst.missing;
    finding.missing = missing;
    finding.told = at_worst.told;
    look_at_figures(finding, part);

    const bool warmed = part.shares_air && (rule.stress == Stress::hot_spot_temperature || rule.stress == Stress::life);
    const bool heat = rule.stress == Stress::junction_temperature || warmed;
    const double nowhere = upper(rule) ? kInfinite : 0;
    const auto worse = [&](double a, double b) { return upper(rule) ? std::max(a, b) : std::min(a, b); };
    const auto milder = [&](double a, double b) { return upper(rule) ? std::min(a, b) : std::max(a, b); };
    double hardest = worst ? worse(worst->value, best->value) : 0, mildest = worst ? milder(worst->value, best->value) : 0;
    if (heat && part.runaway_worst) hardest = nowhere;
    if (heat && part.runaway_best) mildest = nowhere;
    const bool have_stress = worst || (heat && part.runaway_worst);
    const bool have_limits = held_worst.limit && held_best.limit;
    const double limit_worst = have_limits ? *held_worst.limit : 0, limit_best = have_limits ? *held_best.limit : 0;

    const bool decidable = have_stress && have_limits;
    const bool holds = decidable && !breaks(rule, hardest, limit_worst) && held_worst.beyond.empty();
    const bool broken = (decidable && breaks(rule, mildest, limit_best)) || !held_best.beyond.empty();
    finding.verdict = !finding.told.empty()                 ? Verdict::unproven
                      : broken                              ? Verdict::rejected
                      : holds && finding.missing.empty()    ? Verdict::holds
                                                            : Verdict::unproven;
    const bool show_best = broken && worst && best->value == mildest;
    if (worst) finding.stress = show_best ? *best : (best->value == hardest && worst->value != hardest ? *best : *worst);
    const Held& held = show_best ? held_best : held_worst;
    const Rating& shown = held.rating;
    finding.rule = held.rule;
    if (worst) append(finding.rests_on, finding.stress->rests_on);
    append(finding.rests_on, shown.rests_on);
    if (shown.printed && shown.scale != 1) finding.printed = shown.printed;
    if (heat && (show_best ? part.runaway_best : part.runaway_worst)) {
        finding.why = "no stable temperature exists: leakage and heat drive each other up";
        finding.stress.reset();
        finding.limit = limit_worst;
    } else if (!held.beyond.empty()) {
        finding.why = held.beyond;
    } else if (worst) {
        fill_numbers(finding, finding.stress->value, shown.here(), have_limits ? held.limit : std::nullopt, part.highest_ambient);
    }
    // Where a rating cannot be told at all, what it would have to be is still worth saying.
    if (finding.verdict != Verdict::holds && !(finding.verdict == Verdict::rejected && !finding.missing.empty())) {
        if (finding.verdict == Verdict::unproven && finding.told.empty()) find_bound(finding, part);
        if (!finding.missing.empty() && finding.remedies.empty()) {
            if (const auto symbol = find_symbol(finding.missing, part.lot.part.family); symbol && !info(*symbol).rating)
                finding.remedies.push_back({Do::measure, std::string(info(*symbol).name), info(*symbol).unit, {}, {}, {}, info(*symbol).usual, {}});
        }
    }
    if (finding.verdict == Verdict::rejected) finding.missing.clear();
    return finding;
}

/// A rule whose own condition rests on a figure that is not on record rejects nothing; one on a told figure decides nothing.
void allow_for_condition(Finding& finding, const Applied& applied, const Part& part) {
    for (const Condition& condition : applied.rule->where)
        if (condition.figure)
            for (const Figure* figure : figures_of(part, *condition.figure))
                if (figure->known == Known::told && std::none_of(finding.told.begin(), finding.told.end(), [&](const Figure& one) { return one.symbol == figure->symbol; }))
                    finding.told.push_back(*figure);
    const bool decided = finding.verdict == Verdict::rejected || finding.verdict == Verdict::holds;
    if (!finding.told.empty() && decided) finding.verdict = Verdict::unproven;
    if (!applied.unknown.empty() && finding.verdict == Verdict::rejected) {
        finding.verdict = Verdict::unproven;
        finding.missing = applied.unknown;
    }
}

/// Of several rules on one stress the tightest binds; the others are named beside it.
void name_others(std::vector<Finding>& findings) {
    for (Finding& one : findings) {
        if (one.ground != Ground::rule || !one.limit) continue;
        bool tightest = true;
        std::vector<std::string> others;
        for (const Finding& other : findings) {
            if (&other == &one || other.ground != Ground::rule || !other.limit || other.rule.stress != one.rule.stress || upper(other.rule) != upper(one.rule)) continue;
            const bool tighter = upper(one.rule) ? *other.limit < *one.limit : *other.limit > *one.limit;
            tightest = tightest && !tighter && !(*other.limit == *one.limit && other.rule.id < one.rule.id);
            others.push_back(other.rule.id);
        }
        std::sort(others.begin(), others.end());
        if (tightest) one.binds_before = std::move(others);
    }
}

/// A capacitor or rectifier whose kind is not on record is held to its family's own rule, and rejected only where every
/// kind's rule in its place would.
void allow_for_unknown_kind(Finding& finding, const JudgedPart& part, const Rulebook& book) {
    if (finding.verdict != Verdict::rejected || selector(part.lot.part).find('/') != std::string::npos) return;
    for (const Rule& other : book.rules) {
        if (other.stress != finding.rule.stress || id_stem(other) != id_stem(finding.rule) || other.selects == finding.rule.selects ||
            !other.selects.starts_with(finding.rule.selects + "/"))
            continue;
        double scale = 1;
        if (judge_rule(other, part, scale).verdict != Verdict::rejected) {
            finding.verdict = Verdict::unproven;
            finding.missing = "technology";
            return;
        }
    }
}

/// Of the path that charges a capacitor [Ω/V].
std::optional<double> ohms_per_volt(const JudgedPart& part) {
    const StressValue* path = part.worst.find(Stress::series_resistance);
    const StressValue* volts = part.worst.find(Stress::voltage_peak_repetitive);
    if (!path || !volts || !(volts->value > 0)) return std::nullopt;
    return path->value / volts->value;
}

std::string expired_figures(const JudgedPart& part, const Allowances& allowances) {
    const CapacitorKind kind = capacitor_kind(part.lot.part);
    if (part.today.empty() || part.lot.origin != Origin::pulled || part.lot.part.family != Family::capacitor ||
        (kind != CapacitorKind::aluminium && kind != CapacitorKind::hybrid && kind != CapacitorKind::unknown))
        return {};
    const auto days = [](const std::string& date) -> std::optional<double> {
        int y = 0, m = 0, d = 0;
        if (std::sscanf(date.c_str(), "%d-%d-%d", &y, &m, &d) != 3 || m < 1 || m > 12) return std::nullopt;
        y -= m <= 2;  // days from a civil date: Howard Hinnant's algorithm
        const int era = (y >= 0 ? y : y - 399) / 400, yoe = y - era * 400;
        const int doy = (153 * (m + (m > 2 ? -3 : 9)) + 2) / 5 + d - 1;
        return era * 146097.0 + yoe * 365 + yoe / 4 - yoe / 100 + doy;
    };
    const auto now = days(part.today);
    for (const Figure& figure : part.lot.part.figures) {
        if (figure.known != Known::measured || !info(figure.symbol).ages) continue;
        const auto then = days(figure.date);
        if (now && then && (*now - *then) * 86400 > allowances.measurement_expiry)
            return fmt::format("{} was measured on {}, longer ago than {} years", info(figure.symbol).name, figure.date,
                               format_quantity(allowances.measurement_expiry / (365.25 * 86400), Unit::none));
    }
    return {};
}

}  // namespace

std::string_view to_string(Verdict verdict) {
    switch (verdict) {
        case Verdict::holds: return "holds";
        case Verdict::unproven: return "unproven";
        case Verdict::rejected: return "rejected";
        case Verdict::not_covered: return "not covered";
    }
    return "";
}

Verdict graver(Verdict a, Verdict b) {
    const auto weight = [](Verdict one) {
        return one == Verdict::rejected ? 3 : one == Verdict::unproven ? 2 : one == Verdict::not_covered ? 1 : 0;
    };
    return weight(a) >= weight(b) ? a : b;
}

double limit_of(const Rule& rule, double rating) {
    switch (rule.bound) {
        case BoundKind::fraction: return celsius(rule) ? rule.value * (rating - kCelsiusZero) + kCelsiusZero : rule.value * rating;
        case BoundKind::absolute: return rule.value;
        case BoundKind::below: return rating - rule.value;
        case BoundKind::at_least: return needs_reference(rule) ? rule.value * rating : rule.value;
        case BoundKind::not_permitted:
        case BoundKind::not_covered: break;
    }
    return 0;
}

bool breaks(const Rule& rule, double stress, double limit) {
    const double equal = 1e-9 * std::abs(limit);
    return upper(rule) ? !(stress <= limit + equal) : !(stress >= limit - equal);
}

std::string not_covered_why(const Part& part) {
    if (part.family != Family::switch_) return {};
    const auto folded = [](std::string_view text) {
        std::string out;
        for (const char c : text) out += static_cast<char>(c >= 'A' && c <= 'Z' ? c - 'A' + 'a' : c);
        return out;
    };
    const std::string polarity = folded(attribute(part, "polarity")), technology = folded(attribute(part, "technology"));
    if (!polarity.empty() && polarity != "n" && polarity != "n-channel" && polarity != "n channel")
        return "polarity " + std::string(attribute(part, "polarity")) + ": the models are those of an N-channel MOSFET";
    for (const char* other : {"bipolar", "igbt", "darlington", "jfet", "depletion", "thyristor", "npn", "pnp", "triac"})
        if (technology.find(other) != std::string::npos)
            return std::string(attribute(part, "technology")) + ": the models are those of an N-channel MOSFET";
    return {};
}

Finding ground_finding(Ground ground, std::string why) {
    Finding finding;
    finding.ground = ground;
    finding.why = std::move(why);
    const bool outside = ground == Ground::not_covered || ground == Ground::no_rule || ground == Ground::outside_model;
    finding.verdict = outside ? Verdict::not_covered : Verdict::unproven;
    constexpr const char* ids[] = {"", "nothing-fitted", "bare-element", "not-covered", "no-rule", "suspect", "unmeasured", "expired", "outside-model"};
    finding.rule.id = ids[static_cast<int>(ground)];
    finding.rule.title = finding.rule.id;
    std::replace(finding.rule.title.begin(), finding.rule.title.end(), '-', ' ');
    return finding;
}

void sort_findings(std::vector<Finding>& findings) {
    const auto key = [](const Finding& finding) {
        const int weight = finding.verdict == Verdict::rejected ? 0 : finding.verdict == Verdict::unproven ? 1 : finding.verdict == Verdict::not_covered ? 2 : 3;
        const double open = finding.verdict == Verdict::holds ? kInfinite : -kInfinite;
        return std::tuple(weight, finding.ground == Ground::rule ? 1 : 0, finding.headroom.value_or(open), finding.rule.id);
    };
    std::stable_sort(findings.begin(), findings.end(), [&](const Finding& a, const Finding& b) { return key(a) < key(b); });
}

SeatReport judge_part(const JudgedPart& part, const Rulebook& book) {
    SeatReport report;
    report.seat = part.seat;
    report.reference = part.reference;
    report.lot = part.lot.label;
    report.part = part.lot.part.name;
    if (const std::string why = not_covered_why(part.lot.part); !why.empty()) {
        report.findings.push_back(ground_finding(Ground::not_covered, why));
    } else {
        int judged = 0;
        const std::optional<double> path = ohms_per_volt(part);
        for (const Applied& applied : applied_rules(book, part.lot.part, path)) {
            const Rule* rule = applied.rule;
            const bool flat = rule->bound == BoundKind::not_permitted || rule->bound == BoundKind::not_covered;
            ++judged;
            if (part.voltages_only && rule->stress != Stress::voltage_peak_repetitive && rule->stress != Stress::voltage_peak_single) continue;
            const bool absent = !part.worst.find(rule->stress) &&
                                std::none_of(part.worst.missing.begin(), part.worst.missing.end(), [&](const auto& one) { return one.first == rule->stress; });
            if (!flat && absent && stress_row(rule->stress).only_where_it_occurs) continue;
            if (rule->requirement == "life" && !part.life_required) continue;  // nothing is required
            if (rule->requirement == "output ripple" && !part.ripple_allowed) continue;
            double scale = 1;
            Finding finding = judge_rule(*rule, part, scale);
            allow_for_unknown_kind(finding, part, book);
            allow_for_condition(finding, applied, part.lot.part);
            for (const Rule* general : applied.before) finding.goes_before.push_back(general->id);
            std::sort(finding.goes_before.begin(), finding.goes_before.end());
            if (finding.verdict == Verdict::rejected || finding.verdict == Verdict::unproven) {
                const auto more = remedies_for(finding, part, scale);
                finding.remedies.insert(finding.remedies.end(), more.begin(), more.end());
            }
            report.findings.push_back(std::move(finding));
        }
        name_others(report.findings);
        if (judged == 0)
            report.findings.push_back(ground_finding(Ground::no_rule, "the rulebook has no rule for a " + selector(part.lot.part)));
        if (part.lot.suspect)
            report.findings.push_back(ground_finding(Ground::suspect, part.lot.suspect_why.empty() ? "a reading lies outside the limits of its type" : part.lot.suspect_why));
        if (ages_unmeasured(part.lot)) {
            Finding finding = ground_finding(Ground::unmeasured, "pulled, and its C and ESR have not both been measured");
            for (const Symbol symbol : {Symbol::C, Symbol::ESR})
                if (std::none_of(part.lot.part.figures.begin(), part.lot.part.figures.end(),
                                 [&](const Figure& one) { return one.symbol == symbol && one.known == Known::measured; }))
                    finding.remedies.push_back({Do::measure, std::string(info(symbol).name), info(symbol).unit, {}, {}, {}, info(symbol).usual, {}});
            report.findings.push_back(std::move(finding));
        }
        if (const std::string why = expired_figures(part, book.allowances); !why.empty())
            report.findings.push_back(ground_finding(Ground::expired, why));
    }
    report.verdict = Verdict::holds;
    for (Finding& finding : report.findings) {
        finding.seat = part.seat;
        finding.reference = part.reference;
        finding.lot = part.lot.label;
        finding.part = part.lot.part.name;
        finding.book = finding.rule.book.empty() ? book.name : finding.rule.book;
        report.verdict = graver(report.verdict, finding.verdict);
    }
    if (report.findings.empty()) report.verdict = Verdict::not_covered;
    sort_findings(report.findings);
    return report;
}

SeatReport judge_empty(Seat seat, const std::string& reference, bool element, const std::string& book) {
    SeatReport report;
    report.seat = seat;
    report.reference = reference;
    Finding finding = element ? ground_finding(Ground::bare_element, "a bare circuit element stands here, no part is chosen")
                              : ground_finding(Ground::nothing_fitted, "nothing is fitted");
    finding.seat = seat;
    finding.reference = reference;
    finding.book = book;
    report.verdict = finding.verdict;
    report.findings.push_back(std::move(finding));
    return report;
}

std::vector<Finding> judge_converter(const PartExposure& best, const PartExposure& worst, const Rulebook& book) {
    std::vector<Finding> out;
    for (const Rule& rule : book.rules) {
        if (rule.selects != "converter") continue;
        Finding finding;
        finding.of_converter = true;
        finding.reference = "converter";
        finding.book = book.name;
        finding.rule = rule;
        const StressValue* hard = worst.find(rule.stress);
        const StressValue* mild = best.find(rule.stress);
        if (!mild) mild = hard;
        if (!hard) hard = mild;
        if (!hard || std::isnan(hard->value) || std::isnan(mild->value)) {
            finding.missing = "what it sees";
            out.push_back(std::move(finding));
            continue;
        }
        const double limit = limit_of(rule, 0);
        const bool hard_breaks = breaks(rule, hard->value, limit), mild_breaks = breaks(rule, mild->value, limit);
        finding.verdict = hard_breaks && mild_breaks ? Verdict::rejected : hard_breaks || mild_breaks ? Verdict::unproven : Verdict::holds;
        finding.stress = hard_breaks && !mild_breaks ? *hard : (mild_breaks && !hard_breaks ? *mild : (hard_breaks ? *mild : *hard));
        finding.rests_on = finding.stress->rests_on;
        fill_numbers(finding, finding.stress->value, std::nullopt, limit, 0);
        out.push_back(std::move(finding));
    }
    sort_findings(out);
    return out;
}

}  // namespace binwright
