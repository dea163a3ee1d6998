// SPDX-License-Identifier: GPL-3.0-or-later
// `rulebook list`, `show` and `validate`.
#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

std::string_view kind_name(BoundKind kind) {
    switch (kind) {
        case BoundKind::fraction: return "fraction";
        case BoundKind::absolute: return "absolute";
        case BoundKind::below: return "below";
        case BoundKind::at_least: return "at_least";
        case BoundKind::not_permitted: return "not_permitted";
        case BoundKind::not_covered: return "not_covered";
    }
    return "";
}

Json value_json(BoundKind kind, double value, bool reference, Unit unit) {
    const bool own_unit = (kind == BoundKind::absolute || kind == BoundKind::at_least) && !reference;
    return own_unit ? number(value, unit) : number(value);
}

Json rule_json(const Rule& rule) {
    const Unit unit = info(rule.stress).unit;
    const bool flat = rule.bound == BoundKind::not_permitted || rule.bound == BoundKind::not_covered;
    const auto named = [](const std::optional<Symbol>& rating, const std::optional<Expression>& expression) {
        return rating ? Json(std::string(info(*rating).name)) : expression ? Json(expression->text) : Json();
    };
    const bool reference = rule.rating || rule.expression || !rule.requirement.empty();
    Json out = {{"rule", rule.id},
                {"title", rule.title},
                {"for", rule.selects},
                {"stress", rule.of_part ? Json() : Json(std::string(info(rule.stress).name))},
                {"rating", named(rule.rating, rule.expression)},
                {"requirement", rule.requirement.empty() ? Json() : Json(rule.requirement)},
                {"bound", std::string(kind_name(rule.bound))},
                {"value", flat ? Json() : value_json(rule.bound, rule.value, reference, unit)},
                {"text", rule_text(rule)}};
    if (!rule.several.empty()) {
        out["bound"] = rule.lowest ? "lower_of" : "greater_of";
        out["value"] = Json();
        out["several"] = Json::array();
        for (const Piece& piece : rule.several) {
            const bool own = piece.rating || piece.expression || !piece.requirement.empty();
            out["several"].push_back({{"bound", std::string(kind_name(piece.bound))}, {"rating", named(piece.rating, piece.expression)},
                                      {"requirement", piece.requirement.empty() ? Json() : Json(piece.requirement)}, {"value", value_json(piece.bound, piece.value, own, unit)}});
        }
    }
    if (rule.curve) {
        out["over"] = std::string(info(rule.curve->over).name);
        out["points"] = Json::array();
        for (const auto& [temperature, value] : rule.curve->points) out["points"].push_back({number(temperature, Unit::celsius), value_json(rule.bound, value, reference, unit)});
    }
    if (rule.rated_at != RatedAt::usual) out["rated_at"] = rule.rated_at == RatedAt::case_ ? "case" : "25 °C";
    if (!rule.where.empty()) {
        out["where"] = Json::array();
        for (const Condition& condition : rule.where) out["where"].push_back(condition.text);
    }
    if (!rule.charged_by.empty()) out["charged_by"] = rule.charged_by;
    if (!rule.instead_of.empty()) out["instead_of"] = rule.instead_of;
    out["why"] = rule.why;
    out["source"] = rule.source;
    out["clause"] = rule.clause;
    out["known"] = rule.known;
    if (!rule.reading.empty()) out["reading"] = rule.reading;
    if (!rule.book.empty()) out["from"] = rule.book;
    return out;
}

std::size_t own_rules(const Rulebook& book) {
    return static_cast<std::size_t>(std::count_if(book.rules.begin(), book.rules.end(), [](const Rule& rule) { return rule.book.empty(); }));
}

int list(Session& session, const Call&) {
    if (session.json) {
        Json books = Json::array();
        for (const Rulebook& book : rulebooks()) {
            Json one = {{"name", book.name}, {"title", book.title}, {"source", book.text_source}, {"rules", book.rules.size()}, {"own_rules", own_rules(book)}};
            one["level"] = book.level.empty() ? Json() : Json(book.level);
            one["usual"] = book.level == book.usual_level;
            one["based_on"] = book.based_on.empty() ? Json() : Json(book.based_on);
            books.push_back(std::move(one));
        }
        print_json(session, "rulebook list", {{"rulebooks", books}});
        return 0;
    }
    Rows rows;
    for (const Rulebook& book : rulebooks()) {
        std::string what = book.title;
        if (!book.level.empty()) what += "; level " + book.level + (book.level == book.usual_level ? ", the one meant by " + book.stem + " alone" : "");
        rows.rows.push_back({book.name, counted(own_rules(book), "rule") + (book.based_on.empty() ? "" : " on " + book.based_on), what});
    }
    session.out << rows.text();
    return 0;
}

int show(Session& session, const Call& call) {
    if (const auto name = call.text("NAME")) session.rulebook = *name;
    const Rulebook book = rulebook_for(session);
    if (session.json) {
        Json rules = Json::array();
        for (const Rule& rule : book.rules) rules.push_back(rule_json(rule));
        const Allowances& a = book.allowances;
        Json body = {{"name", book.name}, {"title", book.title}, {"source", book.text_source},
                     {"allowances", {{"switch_overshoot", a.switch_overshoot}, {"rectifier_overshoot", a.rectifier_overshoot}, {"sharing", a.sharing},
                                     {"aged_capacitance", a.aged_capacitance}, {"aged_esr", a.aged_esr}, {"measurement_expiry", a.measurement_expiry}}},
                     {"rules", rules}};
        if (!book.levels.empty()) body["level"] = book.level, body["levels"] = book.levels;
        if (!book.based_on.empty()) body["based_on"] = book.based_on;
        print_json(session, "rulebook show", body);
        return 0;
    }
    session.out << heading(book.name, session.colour) << "  " << book.title << '\n';
    if (!book.text_source.empty()) session.out << folded(book.text_source) << '\n';
    if (!book.based_on.empty()) session.out << folded("based on " + book.based_on + ": its rules follow where this book has none of its own") << '\n';
    for (const bool own : {true, false})
        for (const Rule& rule : book.rules) {
            if (rule.book.empty() != own) continue;
            session.out << '\n' << heading(rule.title, session.colour) << " (" << rule.id << (own ? "" : ", of " + rule.book) << ")\n";
            Rows rows;
            rows.rows.push_back({"for", spaced(rule.selects)});
            std::string when;
            for (const Condition& condition : rule.where) when += (when.empty() ? "" : " and ") + condition.text;
            if (!rule.charged_by.empty()) when += (when.empty() ? "" : " and ") + std::string("charged by a ") + rule.charged_by;
            if (!when.empty()) rows.rows.push_back({"where", when});
            const std::string bound = rule_text(rule), meaning(info(rule.stress).meaning);
            rows.rows.push_back({"bound", rule.of_part || bound.starts_with(meaning) ? bound : meaning + ": " + bound});
            if (!rule.why.empty()) rows.rows.push_back({"why", rule.why});
            const std::string source = rule.source + (rule.clause.empty() ? "" : ", " + rule.clause);
            rows.rows.push_back({"source", source + (rule.known.empty() || rule.known == rule.source ? "" : " (" + rule.known + ")")});
            if (!rule.reading.empty()) rows.rows.push_back({"reading", "the stricter: " + rule.reading});
            if (!rule.instead_of.empty()) rows.rows.push_back({"before", "goes before " + rule.instead_of});
            session.out << rows.text(2);
        }
    return 0;
}

int validate(Session& session, const Call& call) {
    session.rulebook = *call.text("FILE");
    const Rulebook book = rulebook_from(session, *session.rulebook);
    if (session.json)
        print_json(session, "rulebook validate", {{"file", *session.rulebook}, {"name", book.name}, {"rules", book.rules.size()}});
    else if (!session.quiet)
        session.out << *session.rulebook << ": " << counted(book.rules.size(), "rule") << ", nothing wrong\n";
    return 0;
}

}  // namespace

Command rulebook_list_command() {
    return {.name = "rulebook list", .summary = "the rulebooks that came with the program", .about = "", .options = {},
            .example = "binwright rulebook list", .example_says = "their names, one of which --rulebook takes", .run = list};
}

Command rulebook_show_command() {
    return {.name = "rulebook show", .summary = "every rule of a rulebook: what it bounds, why, and from where",
            .about = "A book with levels is named with one of them (gjb-z-35:II), or alone for its usual one. Values from memory and the "
                     "stricter of two readings are said beside each rule.",
            .options = {{"NAME", "NAME|PATH", "a shipped rulebook or a file (else house)"}},
            .example = "binwright rulebook show house", .example_says = "the rules that judge when none are named", .run = show};
}

Command rulebook_validate_command() {
    return {.name = "rulebook validate", .summary = "check a rulebook file: every fault at once, with its place", .about = "",
            .options = {{"FILE", "", "a rulebook, or - for standard input", false, true}},
            .example = "binwright rulebook validate engine/rule/rulebooks/house.toml", .example_says = "the house rulebook's own file, from the source folder", .run = validate};
}

}  // namespace binwright
