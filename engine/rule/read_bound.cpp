// SPDX-License-Identifier: GPL-3.0-or-later
// What a rule bounds its stress by, and the conditions under which it does.
#include <algorithm>
#include <cmath>

#include "engine/converter/keys.hpp"
#include "engine/rule/reading.hpp"

namespace binwright {
namespace {

const std::vector<std::string> kBoundKeys = {"at_most", "below", "at_least", "lower_of", "greater_of", "permitted", "covered"};

bool is_expression(std::string_view text) {
    return text.find(" * ") != std::string_view::npos || text.find(" / ") != std::string_view::npos || text.find(" + ") != std::string_view::npos ||
           text.find(" - ") != std::string_view::npos;
}

/// A fault within a text, moved to where it stands in the file.
void at_text(Reading& reading, const Item& item, const std::string& field, const InputError& error) {
    for (Fault one : error.faults) {
        one.place = {item.place.file, item.place.line, item.text_column ? *item.text_column + std::max(0, one.place.column - 1) : item.place.column};
        one.field = field;
        reading.faults.push_back(std::move(one));
    }
}

void read_requirement(Reading& reading, Piece& piece, const Rule& rule, const Item& item, const std::string& field, const Subject& subject) {
    const auto name = reading.text_of(item, field);
    if (!name) return;
    std::vector<std::string> words;
    bool fits = false;
    for (const RequirementInfo& one : requirements()) {
        words.emplace_back(one.name);
        fits = fits || (one.name == *name && (!subject.stress_known || one.stress == rule.stress));
    }
    if (!fits) {
        const std::string near = nearest_word(*name, words);
        const bool exists = std::find(words.begin(), words.end(), *name) != words.end();
        reading.fault(item, field,
                      exists ? "the requirement " + ticked(*name) + " is not one of " + std::string(info(rule.stress).meaning)
                             : "there is no requirement " + ticked(*name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                      "one of " + listed(words));
    }
    piece.requirement = *name;
}

void read_rating(Reading& reading, Piece& piece, const Rule& rule, const Item& item, const std::string& field, const Subject& subject) {
    if (!subject.family_known) return;
    const auto name = reading.text_of(item, field);
    if (!name) return;
    const Unit unit = info(rule.stress).unit;
    const auto symbol = subject.family ? find_symbol(*name, *subject.family) : std::nullopt;
    if (!symbol && subject.family && is_expression(*name)) {
        if (!subject.stress_known) return;
        try {
            piece.expression = parse_expression(*name, *subject.family, unit);
        } catch (const InputError& error) {
            at_text(reading, item, field, error);
        }
        return;
    }
    std::vector<std::string> words;
    if (subject.family)
        for (const SymbolInfo& one : symbols())
            if (one.rating && find_symbol(one.name, *subject.family)) words.emplace_back(one.name);
    if (!symbol || !info(*symbol).rating) {
        const std::string near = nearest_word(*name, words);
        reading.fault(item, field,
                      "a " + (subject.family ? std::string(to_string(*subject.family)) : "converter") + " has no rating " + ticked(*name) +
                          (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                      words.empty() ? "" : "one of " + listed(words));
        return;
    }
    if (subject.stress_known && info(*symbol).unit != unit) {
        reading.fault(item, field, std::string(info(*symbol).name) + " is no limit to " + ticked(info(rule.stress).name) + ": their units differ",
                      "a rating in " + std::string(unit_symbol(unit)));
        return;
    }
    piece.rating = symbol;
}

/// A number of the bound: a share, a limit or a distance, as the kind of bound wants it. `path` is its key.
std::optional<double> read_value(Reading& reading, BoundKind kind, bool reference, const std::string& requirement, const Item& item, const std::string& field,
                                 const std::string& key, Unit unit) {
    std::optional<double> value;
    if (kind == BoundKind::below) {
        value = reading.quantity(item, field, unit == Unit::celsius ? Unit::kelvin : unit);
        if (value && !(*value >= 0)) {
            reading.fault(item, field, "`below` cannot be negative");
            return std::nullopt;
        }
    } else if (requirement == "voltage applied") {
        value = reading.quantity(item, field, Unit::ohm);  // for each volt
        if (value && !(*value >= 0)) {
            reading.fault(item, field, ticked(key) + " cannot be negative");
            return std::nullopt;
        }
    } else if (reference) {
        value = reading.quantity(item, field, Unit::fraction);
        const double most = kind == BoundKind::fraction ? 2 : 100;
        if (value && (!(*value > 0) || !(*value <= most))) {
            reading.fault(item, field, ticked(key) + " is " + format_quantity(*value, Unit::fraction) + " of the rating: no sensible share", "a share such as 0.80");
            return std::nullopt;
        }
    } else {
        value = reading.quantity(item, field, unit);
    }
    return value;
}

void read_curve(Reading& reading, Rule& rule, BoundKind kind, bool reference, const Item& item, const std::string& field, const std::string& key,
                const Keys& at) {
    Curve curve;
    const auto over = at.find("over");
    if (over == at.end()) {
        reading.fault(item, field, "a bound over a temperature says over which", "over = \"air_temperature\"");
    } else if (const auto name = reading.text_of(*over->second, "rule.over")) {
        std::vector<std::string> words;
        for (const StressInfo& one : stresses())
            if (one.unit == Unit::celsius) words.emplace_back(one.name);
        const auto found = find_stress(*name);
        const std::string near = nearest_word(*name, words);
        if (!found || info(*found).unit != Unit::celsius)
            reading.fault(*over->second, "rule.over", "there is no temperature " + ticked(*name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
        else
            curve.over = *found;
    }
    if (item.items.empty()) reading.fault(item, field, ticked(key) + " over a temperature has no point", "[[\"70 °C\", 0.6], [\"110 °C\", 0.4]]");
    for (const Item& point : item.items) {
        if (point.kind != Item::Kind::array || point.items.size() != 2) {
            reading.fault(point, field, "a point is a temperature and a value", "[\"70 °C\", 0.6]");
            continue;
        }
        const auto where = reading.quantity(point.items[0], field, Unit::celsius);
        const auto value = read_value(reading, kind, reference, rule.requirement, point.items[1], field, key, info(rule.stress).unit);
        if (!where || !value) continue;
        if (!curve.points.empty() && !(*where > curve.points.back().first))
            reading.fault(point.items[0], field, "the temperatures of a bound rise from point to point");
        curve.points.emplace_back(*where, *value);
    }
    if (!curve.points.empty()) rule.value = curve.points.front().second;
    rule.curve = std::move(curve);
}

void read_several(Reading& reading, Rule& rule, const Item& item, const std::string& key, const Subject& subject) {
    const std::string field = "rule." + key;
    rule.lowest = key == "lower_of";
    if (item.kind != Item::Kind::array || item.items.size() < 2)
        return reading.fault(item, field, ticked(key) + " is a list of two bounds or more", key + " = [{ at_most = \"110 °C\" }, { rating = \"T_jmax\", below = \"40 K\" }]");
    static const std::vector<std::string> known = {"rating", "requirement", "at_most", "below", "at_least"};
    std::optional<bool> upper;
    for (const Item& one : item.items) {
        if (one.kind != Item::Kind::table) {
            reading.fault(one, field, "each of several bounds is a table", "{ at_most = \"110 °C\" }");
            continue;
        }
        Piece piece;
        std::string bound;
        bool named = false;
        const std::size_t before = reading.faults.size();
        for (const Member& member : one.members) {
            if (member.key == "rating") named = true, read_rating(reading, piece, rule, member.value, field + ".rating", subject);
            else if (member.key == "requirement") named = true, read_requirement(reading, piece, rule, member.value, field + ".requirement", subject);
            else if (std::find(known.begin(), known.end(), member.key) == known.end()) reading.unknown(member, field, known);
            else if (!bound.empty()) reading.fault(member.value, field, "each of several bounds is one bound, and this has " + ticked(bound) + " and " + ticked(member.key));
            else bound = member.key;
        }
        if (bound.empty()) {
            if (reading.faults.size() == before) reading.fault(one, field, "one of several bounds has no bound", "one of at_most, below or at_least");
            continue;
        }
        if (!subject.stress_known) continue;
        piece.bound = bound == "below" ? BoundKind::below : bound == "at_least" ? BoundKind::at_least : named ? BoundKind::fraction : BoundKind::absolute;
        const bool up = piece.bound != BoundKind::at_least;
        if (upper && *upper != up) reading.fault(one, field, "of several bounds all are upper or all are lower ones");
        upper = up;
        if (bound == "below" && !piece.rating && !piece.expression) {
            if (reading.faults.size() == before) reading.fault(one, field, "`below` is a distance below a rating, and this bound names none", "rating = \"T_jmax\"");
            continue;
        }
        reading.by_level(*one.find(bound), field + "." + bound, subject.at_levels, [&](const Item& value_item, bool mine) {
            const auto value = read_value(reading, piece.bound, named, piece.requirement, value_item, field + "." + bound, bound, info(rule.stress).unit);
            if (value && mine) piece.value = *value;
        });
        rule.several.push_back(std::move(piece));
    }
    if (!rule.several.empty()) {  // so that whoever looks at a single bound finds the first
        const Piece& first = rule.several.front();
        rule.bound = first.bound;
        rule.rating = first.rating;
        rule.requirement = first.requirement;
        rule.expression = first.expression;
        rule.value = first.value;
    }
}

void read_flag(Reading& reading, Rule& rule, const Item& item, const std::string& key) {
    if (item.kind != Item::Kind::flag || item.flag)
        reading.fault(item, "rule." + key, ticked(key) + " is only ever written as false: what is " + key + " has a bound", key + " = false");
    rule.bound = key == "permitted" ? BoundKind::not_permitted : BoundKind::not_covered;
}

}  // namespace

bool gives_bound(const Keys& at) {
    return std::any_of(kBoundKeys.begin(), kBoundKeys.end(), [&](const std::string& key) { return at.contains(key); });
}

void read_bound(Reading& reading, Rule& rule, const Item& table, const Keys& at, const Subject& subject) {
    const auto rating = at.find("rating"), requirement = at.find("requirement");
    if (rating != at.end() && requirement != at.end())
        reading.fault(*requirement->second, "rule.requirement", "a rule holds a stress to a rating or to a requirement, not to both");
    if (rating != at.end() || requirement != at.end()) {
        Piece named;
        if (requirement != at.end()) read_requirement(reading, named, rule, *requirement->second, "rule.requirement", subject);
        if (rating != at.end()) read_rating(reading, named, rule, *rating->second, "rule.rating", subject);
        rule.rating = named.rating;
        rule.requirement = named.requirement;
        rule.expression = named.expression;
    }
    if (const auto rated = at.find("rated_at"); rated != at.end())
        if (const auto word = reading.text_of(*rated->second, "rule.rated_at")) {
            if (*word != "case" && *word != "25 °C") reading.fault(*rated->second, "rule.rated_at", "a rating counts at the case temperature or at 25 °C, not " + ticked(*word), "\"case\" or \"25 °C\"");
            else if (subject.stress_known && rule.rating != Symbol::I_D && rule.rating != Symbol::P_tot)
                reading.fault(*rated->second, "rule.rated_at", "only I_D and P_tot fall with the case temperature");
            rule.rated_at = *word == "case" ? RatedAt::case_ : RatedAt::printed;
        }
    std::vector<std::string> given;
    for (const std::string& key : kBoundKeys)
        if (at.contains(key)) given.push_back(key);
    if (given.size() > 1)
        return reading.fault(*at.at(given[1]), "rule." + given[1], "a rule has one bound, and this has " + ticked(given[0]) + " and " + ticked(given[1]));
    if (given.empty()) {
        const bool meant = std::any_of(kBoundKeys.begin(), kBoundKeys.end(), [&](const std::string& key) { return reading.misspelt.contains("rule." + key); });
        if (reading.whole && !meant)
            reading.fault(table, "rule.at_most", (rule.id.empty() ? "this rule" : "the rule " + ticked(rule.id)) + " has no bound",
                          "one of at_most, below, at_least, lower_of, greater_of, permitted or covered");
        return;
    }
    const std::string& key = given[0];
    const Item& item = *at.at(key);
    const std::string field = "rule." + key;
    if (at.contains("over") && item.kind != Item::Kind::array) reading.fault(*at.at("over"), "rule.over", "`over` belongs to a bound over a temperature, and this is one number");
    if (key == "permitted" || key == "covered") return read_flag(reading, rule, item, key);
    if (key == "lower_of" || key == "greater_of") return read_several(reading, rule, item, key, subject);
    if (!subject.stress_known) return;
    const bool reference = rule.rating || rule.expression || !rule.requirement.empty() || at.contains("rating") || at.contains("requirement");
    if (key == "below") {
        rule.bound = BoundKind::below;
        if (!rule.rating && !rule.expression && !at.contains("rating"))
            return reading.fault(item, field, "`below` is a distance below a rating, and this rule names none", "rating = \"T_jmax\"");
    } else {
        rule.bound = key == "at_least" ? BoundKind::at_least : reference ? BoundKind::fraction : BoundKind::absolute;
    }
    reading.by_level(item, field, subject.at_levels, [&](const Item& one, bool mine) {
        if (one.kind == Item::Kind::array) {
            Rule other = rule;
            read_curve(reading, mine ? rule : other, rule.bound, reference, one, field, key, at);
            return;
        }
        const auto value = read_value(reading, rule.bound, reference, rule.requirement, one, field, key, info(rule.stress).unit);
        if (value && mine) rule.value = *value;
    });
}

void read_conditions(Reading& reading, Rule& rule, const Keys& at, const Subject& subject) {
    if (const auto charged = at.find("charged_by"); charged != at.end()) {
        if (const auto word = reading.text_of(*charged->second, "rule.charged_by")) {
            if (*word != "low impedance" && *word != "high impedance")
                reading.fault(*charged->second, "rule.charged_by", "a capacitor is charged by a low impedance or by a high impedance, not by " + ticked(*word), "\"low impedance\" or \"high impedance\"");
            else if (subject.family_known && subject.family != Family::capacitor)
                reading.fault(*charged->second, "rule.charged_by", "only capacitors are charged");
            rule.charged_by = *word;
        }
    }
    const auto where = at.find("where");
    if (where == at.end()) return;
    rule.where.clear();
    if (subject.family_known && !subject.family) return reading.fault(*where->second, "rule.where", "a converter has no figures to test");
    std::vector<const Item*> items;
    if (where->second->kind == Item::Kind::array)
        for (const Item& one : where->second->items) items.push_back(&one);
    else
        items.push_back(where->second);
    for (const Item* item : items) {
        const auto text = reading.text_of(*item, "rule.where");
        if (!text || !subject.family) continue;
        Condition condition;
        condition.text = *text;
        std::size_t sign = std::string::npos;
        for (const char* compare : {" >= ", " <= ", " != ", " > ", " < ", " = "})
            if (sign == std::string::npos && (sign = text->find(compare)) != std::string::npos) condition.compare = std::string(compare).substr(1, std::string(compare).size() - 2);
        if (sign == std::string::npos) {
            reading.fault(*item, "rule.where", ticked(*text) + " compares nothing", "where = \"T_jmax >= 175 °C\"");
            continue;
        }
        const std::string left = text->substr(0, sign), right = text->substr(sign + condition.compare.size() + 2);
        condition.figure = find_symbol(left, *subject.family);
        if (condition.figure) {
            try {
                condition.value = parse_quantity(right, info(*condition.figure).unit);
            } catch (const InputError& error) {
                for (Fault one : error.faults) {
                    const int before = static_cast<int>(std::count_if(text->begin(), text->begin() + static_cast<std::ptrdiff_t>(text->size() - right.size()), [](char c) { return (static_cast<unsigned char>(c) & 0xC0) != 0x80; }));
                    one.place.column += before;
                    at_text(reading, *item, "rule.where", InputError(one));
                }
            }
        } else {
            std::vector<std::string> words;
            bool known = false;
            for (const SymbolInfo& one : symbols())
                if (find_symbol(one.name, *subject.family)) words.emplace_back(one.name);
            for (const AttributeInfo& one : attributes())
                if (one.families & bit(*subject.family)) {
                    words.emplace_back(one.name);
                    known = known || one.name == left;
                }
            const std::string near = nearest_word(left, words);
            if (!known) reading.fault(*item, "rule.where", "a " + std::string(to_string(*subject.family)) + " has no figure " + ticked(left) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
            else if (condition.compare != "=" && condition.compare != "!=") reading.fault(*item, "rule.where", ticked(left) + " is a word: it is compared by = or != alone");
            condition.attribute = left;
            condition.word = right;
        }
        rule.where.push_back(std::move(condition));
    }
}

}  // namespace binwright
