// SPDX-License-Identifier: GPL-3.0-or-later
// `wanted`: the least that would hold in a seat, as a line for the junk box and the figures one by one.
#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/words/wanted_words.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

Json line_json(const WantedLine& line) {
    const SymbolInfo& about = info(line.figure);
    const Figure& first = line.bounds.front();
    Json out = {{"figure", std::string(about.name)},
                {line.at_least ? "at_least" : "at_most", number(first.value.worst / (first.both_legs ? 2 : 1), about.unit)},
                {"unit", std::string(unit_symbol(about.unit))},
                {"at", json_of(first.at)},
                {"usual", number(line.usual, about.unit)},
                {"rules", line.rules},
                {"text", wanted_text(line)}};
    if (line.bounds.size() > 1) {
        out["bounds"] = Json::array();
        for (const Figure& figure : line.bounds) out["bounds"].push_back(json_of(figure));
    }
    return out;
}

int run(Session& session, const Call& call) {
    const Rulebook book = rulebook_for(session);
    Job job = job_for(session, *call.text("FILE"));
    const Converter& converter = job.setup.converter;
    const Seat seat = seat_of(converter, *call.text("SEAT"));
    const Wanted answer = wanted(job.setup, seat, book, call.text("--kind").value_or(""));
    if (session.json) {
        Json body = {{"file", converter.file},       {"seat", std::string(to_string(seat))}, {"reference", answer.reference}, {"rulebook", book.name},
                     {"count", answer.count},        {"kind", selector(answer.part)},        {"found", answer.found},         {"text", wanted_line(answer)}};
        body["lines"] = Json::array();
        for (const WantedLine& line : answer.lines) body["lines"].push_back(line_json(line));
        body["any"] = Json::array();
        for (const Symbol symbol : answer.any) body["any"].push_back(std::string(info(symbol).name));
        body["findings"] = Json::array();
        for (const Finding& finding : answer.report.findings) body["findings"].push_back(json_of(finding));
        print_json(session, "wanted", body);
        return answer.found ? 0 : 1;
    }
    session.out << folded(wanted_line(answer)) << '\n';
    if (session.quiet) return answer.found ? 0 : 1;
    if (!answer.found) {
        for (const Finding& finding : answer.report.findings)
            if (finding.verdict == Verdict::rejected || finding.verdict == Verdict::unproven) session.out << '\n' << with_verdict_painted(folded_lines(block(finding), 17), finding.verdict, session.colour);
        return 1;
    }
    session.out << '\n' << heading(converter.title, session.colour) << ": " << spaced(to_string(seat)) << ' ' << answer.reference << ", rulebook " << book.name << '\n';
    Rows rows;
    rows.rows.push_back({"", "the least that holds", "stopped by"});
    for (const WantedLine& line : answer.lines) {
        std::string rules;
        for (const std::string& id : line.rules) rules += (rules.empty() ? "" : ", ") + id;
        rows.rows.push_back({std::string(info(line.figure).name), wanted_text(line), rules.empty() ? "what can be computed" : rules});
    }
    session.out << rows.text(2);
    if (!answer.any.empty()) {
        std::string names;
        for (const Symbol symbol : answer.any) names += (names.empty() ? "" : ", ") + std::string(info(symbol).name);
        session.out << "  " << folded("must be known, and decide nothing here: " + names, 2, 4) << '\n';
    }
    for (const Finding& finding : answer.silent) session.out << "  " << folded("not covered: " + words(finding).line, 2, 4) << '\n';
    session.out << "  " << folded("a little more of one figure pays for a little less of another: the lot itself is judged by rank", 2, 4) << '\n';
    return 0;
}

}  // namespace

Command wanted_command() {
    return {.name = "wanted",
            .summary = "the least that would hold in a seat: what to look for in the junk box",
            .about = "SEAT is switch, rectifier, input_capacitor, coupling_capacitor or output_capacitor, or its reference (C3). Everything else "
                     "stays as fitted. A part exactly on every line holds; 1 % worse in any line it does not. Exit status 1 where no part of "
                     "the kind would hold.",
            .options = {{"FILE", "", "a converter file, or - for standard input", false, true},
                        {"SEAT", "", "the seat to find a part for", false, true},
                        {"--kind", "TECHNOLOGY", "of the part looked for, such as film (else as fitted)"}},
            .example = "binwright --bin demo wanted app/demo/tide-gauge.toml rectifier",
            .example_says = "a line to take to the junk box for a rectifier",
            .run = run};
}

}  // namespace binwright
