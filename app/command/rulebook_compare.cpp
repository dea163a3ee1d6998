// SPDX-License-Identifier: GPL-3.0-or-later
// `rulebook compare`: one lot under several rulebooks, or two lots rule by rule under one.
#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/answer/compare.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

const Finding* telling(const SeatReport& report) {
    for (const Finding& finding : report.findings)
        if (finding.verdict == report.verdict) return &finding;
    return report.findings.empty() ? nullptr : &report.findings.front();
}

std::string bound_of(const Finding& finding) {
    return rule_text(finding.rule) + " (" + finding.rule.source + (finding.rule.clause.empty() ? "" : ", " + finding.rule.clause) +
           (finding.rule.known == "from memory" ? "; from memory" : "") + (finding.rule.book.empty() ? "" : "; of " + finding.rule.book) + ")";
}

std::string short_of(const std::optional<Finding>& finding) {
    if (!finding) return "does not apply";
    const std::string room = left(*finding);
    return std::string(to_string(finding->verdict)) + (room.empty() ? "" : ", " + room);
}

/// With one lot alone in the seat, as many of it as the seat takes.
Setup with_lot(const Setup& setup, Seat seat, const Lot& lot) {
    int count = 0;
    if (const auto fitted = setup.fitted.find(seat); fitted != setup.fitted.end())
        for (const Fitted& one : fitted->second) count += one.count;
    return with_fitted(setup, seat, {Fitted{lot, count > 0 ? count : std::max(1, setup.converter.seat(seat).count)}});
}

int under(Session& session, const Setup& setup, Seat seat, std::vector<Rulebook>& named) {
    std::vector<const Rulebook*> books;
    for (const Rulebook& book : named) books.push_back(&book);
    if (books.empty())
        for (const Rulebook& book : rulebooks()) books.push_back(&book);
    const std::vector<UnderBook> answers = under_books(setup, seat, books);
    const std::vector<StressUnderBooks> stresses = by_stress(answers);
    if (session.json) {
        Json body = {{"file", setup.converter.file}, {"seat", std::string(to_string(seat))}, {"reference", setup.converter.reference(seat)}};
        body["rulebooks"] = Json::array();
        for (const UnderBook& one : answers) {
            Json entry = json_of(one.report);
            entry["rulebook"] = one.book->name;
            body["rulebooks"].push_back(std::move(entry));
        }
        body["stresses"] = Json::array();
        for (const StressUnderBooks& one : stresses) {
            Json limits = Json::array();
            for (const auto& entry : one.entries)
                limits.push_back({{"rulebook", answers[entry.book].book->name}, {"rule", entry.finding.rule.id}, {"limit", number(entry.finding.limit, info(one.stress).unit)},
                                  {"headroom", number(entry.finding.headroom)}, {"verdict", std::string(to_string(entry.finding.verdict))}, {"text", bound_of(entry.finding)}});
            body["stresses"].push_back({{"stress", std::string(info(one.stress).name)}, {"limits", limits}});
        }
        print_json(session, "rulebook compare", body);
        return 0;
    }
    if (answers.empty()) {
        session.out << "nothing is fitted there\n";
        return 0;
    }
    const SeatReport& first = answers.front().report;
    session.out << heading(setup.converter.title, session.colour) << ": " << spaced(to_string(seat)) << ' ' << first.reference << ' ' << (first.lot.empty() ? first.part : first.lot + ", " + first.part)
                << "\n\n";
    Rows rows;
    for (const UnderBook& one : answers) {
        const Finding* finding = telling(one.report);
        rows.rows.push_back({one.book->name, std::string(to_string(one.report.verdict)), finding ? words(*finding).line : ""});
    }
    session.out << rows.text();
    if (session.quiet) return 0;
    for (const StressUnderBooks& one : stresses) {
        session.out << '\n' << heading(info(one.stress).meaning, session.colour) << '\n';
        Rows limits;
        for (const auto& entry : one.entries) limits.rows.push_back({answers[entry.book].book->name, short_of(entry.finding), bound_of(entry.finding)});
        session.out << limits.text(2);
    }
    return 0;
}

int beside(Session& session, const Setup& first_setup, const Setup& second_setup, Seat seat, const Rulebook& book, const std::string& first_name, const std::string& second_name) {
    const std::vector<UnderBook> first = under_books(first_setup, seat, {&book}), second = under_books(second_setup, seat, {&book});
    const std::vector<SideBySide> rules = side_by_side(first.front().report, second.front().report);
    if (session.json) {
        Json body = {{"file", first_setup.converter.file}, {"seat", std::string(to_string(seat))}, {"rulebook", book.name}};
        body["lots"] = {json_of(first.front().report), json_of(second.front().report)};
        body["rules"] = Json::array();
        for (const SideBySide& one : rules) {
            const auto side = [](const std::optional<Finding>& finding) {
                return finding ? Json({{"verdict", std::string(to_string(finding->verdict))}, {"headroom", number(finding->headroom)}, {"text", words(*finding).line}}) : Json();
            };
            body["rules"].push_back({{"rule", one.rule.id}, {"first", side(one.first)}, {"second", side(one.second)},
                                     {"better", one.better == 0 ? Json() : Json(one.better < 0 ? "first" : "second")}});
        }
        print_json(session, "rulebook compare", body);
        return 0;
    }
    session.out << heading(first_setup.converter.title, session.colour) << ": " << spaced(to_string(seat)) << ' ' << first_setup.converter.reference(seat) << ", rulebook " << book.name << "\n\n";
    Rows rows;
    rows.rows.push_back({"", first_name, second_name, ""});
    rows.rows.push_back({"altogether", std::string(to_string(first.front().report.verdict)), std::string(to_string(second.front().report.verdict)), ""});
    for (const SideBySide& one : rules)
        rows.rows.push_back({one.rule.title, short_of(one.first), short_of(one.second), one.better == 0 ? "" : "better: " + (one.better < 0 ? first_name : second_name)});
    session.out << rows.text();
    return 0;
}

int run(Session& session, const Call& call) {
    Job job = job_for(session, *call.text("FILE"), call.has("LOT"));
    const Seat seat = seat_of(job.setup.converter, *call.text("SEAT"));
    std::vector<Lot> lots;
    for (const std::string& name : call.list("LOT")) {
        std::optional<Lot> lot;
        std::string why = "\"" + name + "\" is neither a lot nor a part type of the bin (" + job.bin->name + ")";
        try {
            lot = job.bin->store.engine_lot(name);
        } catch (const EditRefused& refused) {
            why = refused.what();
        }
        if (!lot) throw InputError(Fault{{}, "LOT", why, "a lot label or the name of a part type"});
        const Family family = seat == Seat::switch_ ? Family::switch_ : seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
        if (lot->part.family != family)
            throw InputError(Fault{{}, "LOT", name + " is a " + std::string(to_string(lot->part.family)) + ", and this seat takes a " + std::string(to_string(family)), "a lot of that family"});
        lots.push_back(*lot);
    }
    if (lots.size() > 2) throw InputError(Fault{{}, "LOT", "two lots are compared at a time, and these are " + std::to_string(lots.size()), "one lot or two"});
    if (lots.size() == 2) {
        const Rulebook book = rulebook_for(session);
        return beside(session, with_lot(job.setup, seat, lots[0]), with_lot(job.setup, seat, lots[1]), seat, book, lots[0].label.empty() ? lots[0].part.name : lots[0].label,
                      lots[1].label.empty() ? lots[1].part.name : lots[1].label);
    }
    std::vector<Rulebook> named;
    for (const std::string& name : call.list("--by")) {
        session.rulebook = name;
        named.push_back(rulebook_for(session));
    }
    return under(session, lots.empty() ? job.setup : with_lot(job.setup, seat, lots[0]), seat, named);
}

}  // namespace

Command rulebook_compare_command() {
    return {.name = "rulebook compare",
            .summary = "one lot under several rulebooks, or two lots rule by rule",
            .about = "Without a LOT what is fitted in the seat is compared under every shipped rulebook, or those named by --by; with one LOT "
                     "that one in its place; with two LOTs both are put side by side, rule by rule, under --rulebook.",
            .options = {{"FILE", "", "a converter file, or - for standard input", false, true},
                        {"SEAT", "", "the seat", false, true},
                        {"LOT", "", "one lot or two of the bin", true},
                        {"--by", "NAME|PATH", "a rulebook to compare by (may be repeated; else all that are shipped)", true}},
            .example = "binwright --bin demo rulebook compare app/demo/tide-gauge.toml rectifier",
            .example_says = "the rectifier of the demo under every shipped rulebook, each with its clause",
            .run = run};
}

}  // namespace binwright
