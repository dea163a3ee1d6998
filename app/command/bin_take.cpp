// SPDX-License-Identifier: GPL-3.0-or-later
// `bin take` and `bin put`: pieces out of a lot and back into it.
#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

int take(Session& session, const Call& call) {
    const std::string label = *call.text("LABEL");
    const int count = call.whole("N", 1, 1000000).value_or(1);
    return change_bin(session, "bin take", false, [&](const Store& store) {
        const LotRecord lot = lot_of(store, label);
        if (count > lot.count)
            throw InputError(Fault{{}, "N", lot_label(lot.number) + " has " + counted(static_cast<std::size_t>(lot.count), "piece") + ": " + std::to_string(count) + " cannot be taken",
                                   "at most " + std::to_string(lot.count)});
        return take_edit(store, lot, count);
    });
}

int put(Session& session, const Call& call) {
    const std::string label = *call.text("LABEL");
    const int count = call.whole("N", 1, 1000000).value_or(1);
    return change_bin(session, "bin put", false, [&](const Store& store) {
        const LotRecord lot = lot_of(store, label);
        return put_edit(store, lot, count, call.text("--place").value_or(lot.place));
    });
}

}  // namespace

Command bin_take_command() {
    return {.name = "bin take",
            .summary = "take pieces out of a lot",
            .about = "",
            .options = {{"LABEL", "", "the lot", false, true}, {"N", "", "how many (else 1)"}},
            .example = "binwright --bin demo bin take 108 1 --dry-run",
            .example_says = "what taking one piece of the demo bin's first lot would change",
            .run = take};
}

Command bin_put_command() {
    return {.name = "bin put",
            .summary = "put pieces back into a lot",
            .about = "",
            .options = {{"LABEL", "", "the lot", false, true}, {"N", "", "how many (else 1)"}, {"--place", "PATH", "and the lot lies there from now on"}},
            .example = "binwright --bin demo bin put 108 2 --dry-run",
            .example_says = "what putting two pieces into the demo bin's first lot would change",
            .run = put};
}

}  // namespace binwright
