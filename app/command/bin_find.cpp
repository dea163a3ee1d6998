// SPDX-License-Identifier: GPL-3.0-or-later
// `bin find`: lots by words and by what their figures are.
#include <algorithm>

#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

int run(Session& session, const Call& call) {
    std::string query;
    for (const std::string& word : call.list("WORD")) query += (query.empty() ? "" : " ") + word;
    const OpenBin bin = bin_for_reading(session);
    const std::vector<LotRecord> lots = bin.store.find(query);
    if (session.json)
        print_json(session, "bin find", {{"bin", bin.name}, {"query", query}, {"lots", lot_list(bin.store, lots)}});
    else
        session.out << lot_rows(bin.store, lots);
    if (lots.empty() && !session.json) note(session, "nothing in " + bin.name + " matches " + query);
    return lots.empty() ? 1 : 0;
}

}  // namespace

Command bin_find_command() {
    return {.name = "bin find",
            .summary = "lots by words, and by what their figures are",
            .about = "Every word must occur in the lot's type, figures, place, note or label. A word may also be a figure and a bound: V_RRM>=60V, "
                     "or family:rectifier, origin:pulled, place:Shed. Exit status 1 when nothing is found.",
            .options = {{"WORD", "WORD …", "what to look for", true, true}},
            .example = "binwright --bin demo bin find schottky \"V_RRM>=45V\"",
            .example_says = "the demo bin's Schottky rectifiers from 45 V up",
            .run = run};
}

}  // namespace binwright
