// SPDX-License-Identifier: GPL-3.0-or-later
// `bin measure`: readings taken on a lot.
#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

int run(Session& session, const Call& call) {
    const std::string label = *call.text("LABEL");
    const std::string date = call.has("--date") ? date_of(*call.text("--date")) : today();
    const std::string method = call.text("--method").value_or("");
    std::string suspect;
    const int status = change_bin(session, "bin measure", false, [&](const Store& store) {
        const LotRecord lot = lot_of(store, label);
        const PartRecord type = part_of(store, lot);
        Edit edit{"measure " + lot_label(lot.number), {}};
        std::vector<ReadingRecord> all = store.readings(lot.id);
        std::vector<Figure> given;
        std::vector<Fault> faults;
        for (const std::string& text : call.list("FIGURE")) {
            try {
                Figure figure = figure_of("", text, type.part.family, Known::measured);
                figure.date = date;
                figure.method = method;
                given.push_back(figure);
            } catch (const InputError& error) {
                faults.insert(faults.end(), error.faults.begin(), error.faults.end());
            }
        }
        if (!faults.empty()) throw InputError(faults);
        refuse_implausible(session, type.part, given, "");
        for (const Figure& figure : given) {
            const ReadingRecord reading{.id = 0, .lot_id = lot.id, .figure = figure};
            all.push_back(reading);
            edit.changes.emplace_back(Change<ReadingRecord>{std::nullopt, reading});
            edit.what += (edit.changes.size() > 1 ? ", " : ": ") + std::string(info(figure.symbol).name) + " " + figure_text(figure);
        }
        const Lot judged = as_lot(type, lot, all);
        suspect = judged.suspect ? lot_label(lot.number) + " is suspect: " + judged.suspect_why : "";
        return edit;
    });
    if (!suspect.empty() && !session.json) note(session, suspect);
    return status;
}

}  // namespace

Command bin_measure_command() {
    return {.name = "bin measure",
            .summary = "add readings taken on a lot",
            .about = "A reading carries its conditions behind @. Where a lot has several of one figure, the worst that is not set aside counts. A "
                     "rating is never measured up: a breakdown measured at 68 V does not make a 60 V part better. Discharge capacitors before measuring.",
            .options = {{"LABEL", "", "the lot", false, true},
                        {"FIGURE", "SYMBOL=VALUE …", "ESR=38m@100kHz, C=\"445 uF @ 120 Hz\" …", true, true},
                        {"--date", "YYYY-MM-DD", "when (else today)"},
                        {"--method", "TEXT", "with what: \"LCR meter\""},
                        {"--sure", "", "store a value that such a part hardly has"}},
            .example = "binwright --bin demo bin measure 113 ESR=38m@100kHz --dry-run",
            .example_says = "what a reading on the demo bin's first lot would add",
            .run = run};
}

}  // namespace binwright
