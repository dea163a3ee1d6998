// SPDX-License-Identifier: GPL-3.0-or-later
// `rulebook list`, `show` and `validate`.
#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

/// A number of the rule's stress as people read it; a distance in °C is one in kelvin.
std::string bound_text(const Rule& rule) {
    const Unit unit = info(rule.stress).unit;
    const std::string rating = rule.rating ? std::string(info(*rule.rating).name) : rule.requirement;
    switch (rule.bound) {
        case BoundKind::fraction: return "at most " + format_quantity(rule.value, Unit::fraction) + (rating.empty() ? "" : " of " + rating);
        case BoundKind::absolute: return "at most " + format_quantity(rule.value, unit);
        case BoundKind::below: return "at least " + format_quantity(rule.value, unit == Unit::celsius ? Unit::kelvin : unit) + " below " + rating;
        case BoundKind::at_least: return "at least " + (rating.empty() ? format_quantity(rule.value, unit) : rating);
    }
    return {};
}

std::string_view kind_name(BoundKind kind) {
    switch (kind) {
        case BoundKind::fraction: return "fraction";
        case BoundKind::absolute: return "absolute";
        case BoundKind::below: return "below";
        case BoundKind::at_least: return "at_least";
    }
    return "";
}

Json rule_json(const Rule& rule) {
    const Unit unit = info(rule.stress).unit;
    const bool own_unit = rule.bound == BoundKind::absolute || rule.bound == BoundKind::at_least;
    return {{"rule", rule.id},
            {"title", rule.title},
            {"for", rule.selects},
            {"stress", std::string(info(rule.stress).name)},
            {"rating", rule.rating ? Json(std::string(info(*rule.rating).name)) : Json()},
            {"requirement", rule.requirement.empty() ? Json() : Json(rule.requirement)},
            {"bound", std::string(kind_name(rule.bound))},
            {"value", own_unit ? number(rule.value, unit) : number(rule.value)},
            {"why", rule.why},
            {"source", rule.source},
            {"clause", rule.clause},
            {"known", rule.known}};
}

int list(Session& session, const Call&) {
    if (session.json) {
        Json books = Json::array();
        for (const Rulebook& book : rulebooks()) books.push_back({{"name", book.name}, {"title", book.title}, {"source", book.text_source}, {"rules", book.rules.size()}});
        print_json(session, "rulebook list", {{"rulebooks", books}});
        return 0;
    }
    Rows rows;
    for (const Rulebook& book : rulebooks()) rows.rows.push_back({book.name, counted(book.rules.size(), "rule"), book.title});
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
        print_json(session, "rulebook show", {{"name", book.name}, {"title", book.title}, {"source", book.text_source},
                                              {"allowances", {{"switch_overshoot", a.switch_overshoot}, {"rectifier_overshoot", a.rectifier_overshoot}, {"sharing", a.sharing},
                                                              {"aged_capacitance", a.aged_capacitance}, {"aged_esr", a.aged_esr}, {"measurement_expiry", a.measurement_expiry}}},
                                              {"rules", rules}});
        return 0;
    }
    session.out << heading(book.name, session.colour) << "  " << book.title << '\n';
    if (!book.text_source.empty()) session.out << folded(book.text_source) << '\n';
    for (const Rule& rule : book.rules) {
        session.out << '\n' << heading(rule.title, session.colour) << " (" << rule.id << ")\n";
        Rows rows;
        rows.rows.push_back({"for", spaced(rule.selects)});
        rows.rows.push_back({"bound", std::string(info(rule.stress).meaning) + ": " + bound_text(rule)});
        if (!rule.why.empty()) rows.rows.push_back({"why", rule.why});
        const std::string source = rule.source + (rule.clause.empty() ? "" : ", " + rule.clause);
        rows.rows.push_back({"source", source + (rule.known.empty() || rule.known == rule.source ? "" : " (" + rule.known + ")")});
        session.out << rows.text(2);
    }
    return 0;
}

int validate(Session& session, const Call& call) {
    const std::string path = *call.text("FILE");
    const Rulebook book = read_rulebook(read_text(session, path), path);
    if (session.json)
        print_json(session, "rulebook validate", {{"file", path}, {"name", book.name}, {"rules", book.rules.size()}});
    else if (!session.quiet)
        session.out << path << ": " << counted(book.rules.size(), "rule") << ", nothing wrong\n";
    return 0;
}

}  // namespace

Command rulebook_list_command() {
    return {.name = "rulebook list", .summary = "the rulebooks that came with the program", .about = "", .options = {},
            .example = "binwright rulebook list", .example_says = "their names, one of which --rulebook takes", .run = list};
}

Command rulebook_show_command() {
    return {.name = "rulebook show", .summary = "every rule of a rulebook: what it bounds, why, and from where", .about = "",
            .options = {{"NAME", "NAME|PATH", "a shipped rulebook or a file (else house)"}},
            .example = "binwright rulebook show house", .example_says = "the rules that judge when none are named", .run = show};
}

Command rulebook_validate_command() {
    return {.name = "rulebook validate", .summary = "check a rulebook file: every fault at once, with its place", .about = "",
            .options = {{"FILE", "", "a rulebook, or - for standard input", false, true}},
            .example = "binwright rulebook validate engine/rule/rulebooks/house.toml", .example_says = "the house rulebook's own file, from the source folder", .run = validate};
}

}  // namespace binwright
