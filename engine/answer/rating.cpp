// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/rating.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/answer/models.hpp"
#include "engine/loss/figures.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

constexpr double kCold = kCelsiusZero + 25;  // V_DSS is printed at 25 °C, and falls 0.1 %/K below it (data-sheet experience)
constexpr double kColdSlope = 1e-3;          // [1/K]

/// The tightest of a part's figures for a rating, per leg.
const Figure* tightest(const Part& part, Symbol symbol, End end, double& value) {
    const Figure* found = nullptr;
    for (const Figure& figure : part.figures) {
        if (figure.symbol != symbol) continue;
        const double one = at_end(figure.value, end) / (figure.both_legs ? 2 : 1);
        if (found == nullptr || one < value) {
            found = &figure;
            value = one;
        }
    }
    return found;
}

void take_printed(Rating& rating, const Part& part, Symbol symbol, End end) {
    double value = 0;
    if (const Figure* figure = tightest(part, symbol, end, value)) {
        rating.printed = value;
        if (figure->known == Known::told) rating.told.push_back(*figure);
    } else {
        rating.missing = info(symbol).name;
    }
}

/// I_D or P_tot at the case temperature of the part: the power that heats the junction to T_jmax falls with T_jmax − T_case, and
/// the current with its square root.
Rating at_the_case(const JudgedPart& part, Symbol symbol, const PartExposure& seen, End end) {
    Rating rating;
    double top = 0;
    const Figure* highest = tightest(part.lot.part, Symbol::T_jmax, end, top);
    const StressValue* junction = seen.find(Stress::junction_temperature);
    const StressValue* power = seen.find(Stress::power);
    const auto own = end_value(part.lot.part, Symbol::R_thjc, End::best);  // the least drop makes the warmest case
    std::optional<double> at_case;
    if (junction && std::isfinite(junction->value))
        at_case = junction->value - (power && own ? power->value / std::max(1, part.count) * *own : 0.0);
    for (const Figure* figure : figures_of(part.lot.part, symbol)) {
        const double printed = at_end(figure->value, end), printed_at = temperature_of(*figure, kCold);
        double scale = 1;
        bool unsure = false;
        if (highest && at_case && *at_case > printed_at && top > printed_at)
            scale = symbol == Symbol::I_D ? std::sqrt(std::max(0.0, (top - *at_case) / (top - printed_at))) : std::max(0.0, (top - *at_case) / (top - printed_at));
        else if (!highest || !at_case)
            unsure = true;
        if (rating.printed && *rating.here() <= printed * scale) continue;
        rating = Rating{};
        rating.printed = printed;
        rating.scale = scale;
        rating.unsure = unsure;
        if (unsure) rating.missing = highest ? "the case temperature" : "T_jmax";
        if (scale < 1)
            rating.rests_on.push_back(fmt::format("{} of {} at {} counted as {} at a case of {}", info(symbol).name, format_quantity(printed, info(symbol).unit),
                                                  format_quantity(printed_at, Unit::celsius), format_quantity(printed * scale, info(symbol).unit),
                                                  format_quantity(*at_case, Unit::celsius)));
        if (figure->known == Known::told) rating.told.push_back(*figure);
    }
    if (!rating.printed) rating.missing = info(symbol).name;
    return rating;
}

Rating ripple_rating(const JudgedPart& part, const StressValue* stress, End end) {
    Rating rating;
    take_printed(rating, part.lot.part, Symbol::I_ripple, end);
    if (!rating.printed) return rating;
    const double frequency = stress && stress->at.frequency > 0 ? stress->at.frequency : part.top.frequency;
    if (!(frequency > 0)) return rating;
    const CapacitorModel model = capacitor_model(part.lot.part, frequency, end);
    if (model.ripple && *rating.printed > 0) rating.scale = *model.ripple / *rating.printed;
    return rating;
}

Rating gate_requirement(const JudgedPart& part) {
    Rating rating;
    for (const Figure* figure : figures_of(part.lot.part, Symbol::R_DSon)) {
        const double volts = figure->at.voltage.value_or(*info(Symbol::R_DSon).usual.voltage);
        if (rating.printed && *rating.printed <= volts) continue;
        rating.printed = volts;
        rating.told.clear();
        rating.rests_on.clear();
        if (!figure->at.voltage)
            rating.rests_on.push_back(fmt::format("R_DS(on) without a gate voltage counted as at {}", format_quantity(volts, Unit::volt)));
        if (figure->known == Known::told) rating.told.push_back(*figure);
    }
    if (!rating.printed) rating.missing = "R_DS(on)";
    return rating;
}

void take_expression(Rating& rating, const Expression& expression, const Part& part, bool least) {
    const auto value = value_of(expression, part, least, rating.missing);
    if (value && std::isfinite(*value)) rating.printed = *value;
    else if (rating.missing.empty()) rating.missing = expression.text;
    for (const Expression::Step& step : expression.steps)
        if (step.what == 'f')
            for (const Figure* figure : figures_of(part, step.figure))
                if (figure->known == Known::told) rating.told.push_back(*figure);
    if (rating.printed) rating.rests_on.push_back(expression.text + " taken for a rating that nobody prints");
}

/// The voltage that a capacitor is charged to, repeatedly or once.
std::optional<double> voltage_applied(const PartExposure& seen) {
    std::optional<double> out;
    for (const Stress stress : {Stress::voltage_peak_repetitive, Stress::voltage_peak_single})
        if (const StressValue* value = seen.find(stress); value && std::isfinite(value->value)) out = std::max(out.value_or(0), value->value);
    return out;
}

Rating rating_of(const Rule& rule, const JudgedPart& part, const PartExposure& seen, const StressValue* stress, End end) {
    Rating rating;
    const bool at_case = rule.rated_at == RatedAt::case_ || (rule.rated_at == RatedAt::usual && rule.rating == Symbol::I_D);
    if (rule.requirement == "life") {
        rating.printed = part.life_required;
    } else if (rule.requirement == "output ripple") {
        rating.printed = part.ripple_allowed;
    } else if (rule.requirement == "R_DS(on) gate voltage") {
        rating = gate_requirement(part);
    } else if (rule.requirement == "voltage applied") {
        rating.printed = voltage_applied(seen);
        if (!rating.printed) rating.missing = "the voltage applied";
    } else if (rule.expression) {
        take_expression(rating, *rule.expression, part.lot.part, (end == End::worst) == (rule.bound != BoundKind::at_least));
    } else if (rule.rating) {
        if (at_case) return at_the_case(part, *rule.rating, seen, end);
        switch (*rule.rating) {
            case Symbol::I_ripple: return ripple_rating(part, stress, end);
            default: take_printed(rating, part.lot.part, *rule.rating, end);
        }
        if (rule.rating == Symbol::V_DSS && rating.printed && part.lowest_ambient < kCold) {
            rating.scale = 1 - kColdSlope * (kCold - part.lowest_ambient);
            rating.rests_on.push_back(fmt::format("V_DSS counted as {} at {}", format_quantity(*rating.here(), Unit::volt),
                                                  format_quantity(part.lowest_ambient, Unit::celsius)));
        }
    }
    return rating;
}

/// The value of a bound over a temperature; where the temperature is not known, the most that it allows anywhere.
void take_curve(Held& held, const Curve& curve, const JudgedPart& part, const PartExposure& seen, bool upper) {
    const StressValue* value = seen.find(curve.over);
    if (!value) value = part.worst.find(curve.over);
    const auto& points = curve.points;
    if (points.empty()) return;
    if (!value || std::isnan(value->value)) {
        held.rating.missing = info(curve.over).meaning;
        for (const auto& [temperature, bound] : points) held.rule.value = upper ? std::max(held.rule.value, bound) : std::min(held.rule.value, bound);
        return;
    }
    const double at = value->value;
    if (at > points.back().first * (1 + 1e-9)) {
        held.beyond = fmt::format("not permitted above {}, and its {} reaches {}", format_quantity(points.back().first, Unit::celsius), info(curve.over).meaning,
                                  format_quantity(at, Unit::celsius));
        held.rule.value = points.back().second;
        return;
    }
    held.rule.value = at <= points.front().first ? points.front().second : points.back().second;
    for (std::size_t k = 1; k < points.size(); ++k)
        if (at > points[k - 1].first && at <= points[k].first)
            held.rule.value = points[k - 1].second + (points[k].second - points[k - 1].second) * (at - points[k - 1].first) / (points[k].first - points[k - 1].first);
}

}  // namespace

bool needs_reference(const Rule& rule) { return rule.rating || rule.expression || !rule.requirement.empty(); }

Held held_to(const Rule& rule, const JudgedPart& part, const PartExposure& seen, const StressValue* stress, End end) {
    Held held;
    held.rule = rule;
    if (rule.several.empty()) {
        held.rating = rating_of(rule, part, seen, stress, end);
        if (rule.curve) take_curve(held, *rule.curve, part, seen, rule.bound != BoundKind::at_least);
        if (!needs_reference(rule) || held.rating.here()) held.limit = limit_of(held.rule, held.rating.here().value_or(0));
        return held;
    }
    std::string missing;
    std::vector<Figure> told;
    bool any = false, all = true;
    for (const Piece& piece : rule.several) {
        Rule one = rule;
        one.bound = piece.bound;
        one.rating = piece.rating;
        one.requirement = piece.requirement;
        one.expression = piece.expression;
        one.value = piece.value;
        const Rating rating = rating_of(one, part, seen, stress, end);
        if (missing.empty()) missing = rating.missing;
        told.insert(told.end(), rating.told.begin(), rating.told.end());
        if (needs_reference(one) && !rating.here()) {
            all = false;
            continue;
        }
        const double limit = limit_of(one, rating.here().value_or(0));
        if (any && (rule.lowest ? !(limit < *held.limit) : !(limit > *held.limit))) continue;
        held.rule = std::move(one);
        held.rating = rating;
        held.limit = limit;
        any = true;
    }
    held.rating.missing = missing;
    held.rating.told = told;
    // A bound that is not known may move the limit: of an upper one the lower of several only down, which leaves a break a break.
    const bool only_tighter = rule.lowest == (rule.bound != BoundKind::at_least);
    if (!all && !only_tighter) held.limit.reset();
    return held;
}

}  // namespace binwright
