// SPDX-License-Identifier: GPL-3.0-or-later
// `check`: what is fitted, judged by the rulebook.
#include <fmt/format.h>

#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

int status_of(Verdict verdict) {
    switch (verdict) {
        case Verdict::holds: return 0;
        case Verdict::rejected: return 1;
        case Verdict::unproven:
        case Verdict::not_covered: return 3;
    }
    return 3;
}

void section(Session& session, const char* title, const std::vector<std::string>& lines) {
    if (lines.empty()) return;
    session.out << '\n' << heading(title, session.colour) << '\n';
    for (const std::string& line : lines) session.out << "  " << folded(line, 2, 4) << '\n';
}

void print_losses(Session& session, const Exposure& exposure) {
    if (exposure.losses.empty()) return;
    double total = 0;
    Rows rows;
    rows.right = {1};
    for (const Loss& loss : exposure.losses) total += loss.power;
    for (const Loss& loss : exposure.losses)
        if (std::abs(loss.power) >= 1e-3 * std::abs(total)) rows.rows.push_back({loss.name, format_quantity(loss.power, Unit::watt), ""});
    session.out << '\n' << heading("losses", session.colour) << " at " << at_text(exposure.hottest) << ": "
                << format_quantity(total, Unit::watt) << " in all, efficiency " << format_quantity(exposure.efficiency_total, Unit::fraction) << '\n'
                << rows.text(2);
}

int run(Session& session, const Call& call) {
    const Rulebook book = rulebook_for(session);
    Job job = job_for(session, *call.text("FILE"));
    const Converter& converter = job.setup.converter;
    const CheckReport report = check(job.setup, book);
    const int status = status_of(report.verdict);
    if (session.json) {
        Json body = {{"file", converter.file},
                     {"title", converter.title},
                     {"topology", std::string(converter.topology->name)},
                     {"rulebook", book.name},
                     {"bin", job.bin ? Json(job.bin->name) : Json()},
                     {"verdict", std::string(to_string(report.verdict))},
                     {"summary", summary(report, converter)}};
        body["seats"] = Json::array();
        for (const SeatReport& seat : report.seats) body["seats"].push_back(json_of(seat));
        body["beside"] = Json::array();
        for (const SeatReport& one : report.beside) {
            Json item = json_of(one);
            item.erase("seat");
            body["beside"].push_back(item);
        }
        body["converter"] = Json::array();
        for (const Finding& finding : report.converter) body["converter"].push_back(json_of(finding));
        body["hottest"] = json_of(report.exposure.hottest);
        body["efficiency_total"] = number(report.exposure.efficiency_total);
        body["losses"] = Json::array();
        for (const Loss& loss : report.exposure.losses)
            body["losses"].push_back({{"name", loss.name}, {"seat", loss.seat ? Json(std::string(to_string(*loss.seat))) : Json()}, {"power", number(loss.power)}});
        body["not_included"] = report.exposure.not_included;
        body["runaway"] = report.exposure.runaway;
        body["assumptions"] = report.exposure.assumptions;
        body["warnings"] = report.exposure.warnings;
        body["cautions"] = cautions(converter);
        print_json(session, "check", body);
        return status;
    }
    session.out << heading(converter.title, session.colour) << '\n' << folded(summary(report, converter)) << "\n\n";
    for (const SeatReport& seat : report.seats)
        session.out << with_verdict_painted(folded_lines(line(seat), 5), seat.verdict, session.colour);
    for (const SeatReport& one : report.beside)
        session.out << with_verdict_painted(folded_lines(line(one), 5), one.verdict, session.colour);
    if (session.quiet) return status;
    const auto blocks = [&](const std::vector<Finding>& findings) {
        for (const Finding& finding : findings)
            if (finding.verdict != Verdict::holds) {
                session.out << '\n' << with_verdict_painted(folded_lines(block(finding), 17), finding.verdict, session.colour);
            }
    };
    blocks(report.converter);
    for (const SeatReport& seat : report.seats) blocks(seat.findings);
    for (const SeatReport& one : report.beside) blocks(one.findings);
    print_losses(session, report.exposure);
    section(session, "not included", report.exposure.not_included);
    section(session, "warnings", report.exposure.warnings);
    std::vector<std::string> assumed = report.exposure.assumptions;
    const auto rests = [&](const std::vector<SeatReport>& reports) {
        for (const SeatReport& one : reports)
            for (const Finding& finding : one.findings)
                for (const std::string& what : finding.rests_on)
                    if (const std::string text = one.reference + ": " + what; std::find(assumed.begin(), assumed.end(), text) == assumed.end()) assumed.push_back(text);
    };
    rests(report.seats);
    rests(report.beside);
    section(session, "assumed", assumed);
    section(session, "before power goes on", cautions(converter));
    return status;
}

}  // namespace

Command check_command() {
    return {.name = "check",
            .summary = "judge what is fitted by the rulebook",
            .about = "Exit status 0 when everything holds, 1 when something is rejected, 3 when nothing is rejected but something is "
                     "unproven. With --quiet: the sentence over everything and one line a seat.",
            .options = {{"FILE", "", "a converter file, or - for standard input", false, true}},
            .example = "binwright --bin demo check app/demo/tide-gauge.toml --with operating.output_voltage=\"9 V .. 18 V\"",
            .example_says = "the demo's converter with its output raised to 18 V: what no longer holds, by how much, and what would mend it",
            .run = run};
}

}  // namespace binwright
