// SPDX-License-Identifier: GPL-3.0-or-later
// `rank`: the bin's lots for one seat, best first, with the reason of each rejection in numbers.
#include <fmt/format.h>

#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

Family family_of(Seat seat) {
    return seat == Seat::switch_ ? Family::switch_ : seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
}

/// The finding that speaks for a report: the gravest, or of one that holds the tightest. They come gravest first.
const Finding* telling(const SeatReport& report) {
    for (const Finding& finding : report.findings)
        if (finding.verdict == report.verdict) return &finding;
    return report.findings.empty() ? nullptr : &report.findings.front();
}

int run(Session& session, const Call& call) {
    const std::string wanted = call.text("--prefer").value_or("headroom");
    const std::optional<Prefer> prefer = find_prefer(wanted);
    if (!prefer)
        throw InputError(Fault{{}, "--prefer", "--prefer cannot be \"" + wanted + "\"; it is headroom, cool, life or thrift",
                               "headroom, cool, life or thrift"});
    const std::optional<int> most = call.whole("--most", 1, 1000000);
    const Rulebook book = rulebook_for(session);
    Job job = job_for(session, *call.text("FILE"), true);
    const Converter& converter = job.setup.converter;
    const Seat seat = seat_of(converter, *call.text("SEAT"));
    const std::vector<Lot> lots = job.bin->store.engine_lots(family_of(seat));
    std::vector<Candidate> candidates = rank(job.setup, seat, lots, book, *prefer);

    const auto count = [&](Verdict verdict) {
        return static_cast<std::size_t>(std::ranges::count_if(candidates, [&](const Candidate& c) { return c.report.verdict == verdict; }));
    };
    const std::size_t holding = count(Verdict::holds), unproven = count(Verdict::unproven);
    const std::size_t rejected = count(Verdict::rejected), foreign = count(Verdict::not_covered), all = candidates.size();
    const int status = holding ? 0 : unproven ? 3 : 1;
    if (most && candidates.size() > static_cast<std::size_t>(*most)) candidates.resize(static_cast<std::size_t>(*most));

    if (session.json) {
        Json body = {{"file", converter.file},
                     {"seat", std::string(to_string(seat))},
                     {"reference", converter.reference(seat)},
                     {"rulebook", book.name},
                     {"bin", job.bin->name},
                     {"prefer", std::string(to_string(*prefer))},
                     {"counts", {{"holds", holding}, {"unproven", unproven}, {"not covered", foreign}, {"rejected", rejected}}}};
        body["candidates"] = Json::array();
        for (const Candidate& candidate : candidates) {
            Json entry = {{"lot", candidate.lot.label},
                          {"part", candidate.lot.part.name},
                          {"count", candidate.lot.count},
                          {"origin", std::string(to_string(candidate.lot.origin))},
                          {"suspect", candidate.lot.suspect},
                          {"verdict", std::string(to_string(candidate.report.verdict))},
                          {"findings", Json::array()},
                          {"knock_on", candidate.knock_on}};
            for (const Finding& finding : candidate.report.findings) entry["findings"].push_back(json_of(finding));
            body["candidates"].push_back(std::move(entry));
        }
        print_json(session, "rank", body);
        return status;
    }
    session.out << heading(converter.title, session.colour) << ": " << spaced(to_string(seat)) << ' ' << converter.reference(seat) << '\n';
    if (all == 0) {
        session.out << "no " << to_string(family_of(seat)) << " lots in " << job.bin->name << '\n';
        return status;
    }
    session.out << counted(all, "lot") << " of " << job.bin->name << " by " << to_string(*prefer) << ", rulebook " << book.name << ": "
                << holding << (holding == 1 ? " holds, " : " hold, ") << unproven << " unproven, " << rejected << " rejected";
    if (foreign) session.out << ", " << foreign << " not covered";
    session.out << "\n\n";
    std::size_t label_width = 0;
    for (const Candidate& candidate : candidates) label_width = std::max(label_width, candidate.lot.label.size());
    for (const Candidate& candidate : candidates) {
        const Verdict verdict = candidate.report.verdict;
        const std::string word(to_string(verdict));
        std::string lead = padded(candidate.lot.label, static_cast<int>(label_width)) + "  ";
        const int hang = text_width(lead) + 10;
        lead += painted(verdict, word, session.colour) + std::string(static_cast<std::size_t>(std::max(1, 10 - text_width(word))), ' ');
        session.out << lead << candidate.lot.part.name << ", " << candidate.lot.count << (candidate.lot.count == 1 ? " piece, " : " pieces, ")
                    << to_string(candidate.lot.origin) << '\n';
        const std::string margin(static_cast<std::size_t>(hang), ' ');
        if (const Finding* finding = telling(candidate.report)) {
            const Wording wording = words(*finding);
            session.out << margin << folded(wording.line, hang, hang) << '\n';
            if (!session.quiet && verdict != Verdict::holds) {
                if (!wording.settle.empty()) session.out << margin << folded("to settle: " + wording.settle, hang, hang + 2) << '\n';
                if (!wording.mend.empty()) session.out << margin << folded("to mend: " + wording.mend, hang, hang + 2) << '\n';
            }
        }
        if (session.quiet) continue;
        if (candidate.lot.suspect) session.out << margin << folded("suspect: " + candidate.lot.suspect_why, hang, hang + 2) << '\n';
        for (const std::string& other : candidate.knock_on) session.out << margin << folded("and " + other, hang, hang + 2) << '\n';
    }
    if (candidates.size() < all) session.out << "… and " << all - candidates.size() << " more (-n)\n";
    return status;
}

}  // namespace

Command rank_command() {
    return {.name = "rank",
            .summary = "the bin's lots for one seat, best first, and why the others do not hold",
            .about = "SEAT is switch, rectifier, input_capacitor, coupling_capacitor or output_capacitor, or its reference (C3). Exit "
                     "status 0 when at least one lot holds, 3 when the best is unproven, 1 when none is either.",
            .options = {{"FILE", "", "a converter file, or - for standard input", false, true},
                        {"SEAT", "", "the seat to find parts for", false, true},
                        {"--prefer", "WHAT", "headroom (else), cool, life or thrift: the order among equals in verdict"},
                        {"-n,--most", "N", "the first N alone"}},
            .example = "binwright --bin demo rank app/demo/tide-gauge.toml output_capacitor",
            .example_says = "every capacitor of the demo bin, judged as the output capacitor",
            .run = run};
}

}  // namespace binwright
