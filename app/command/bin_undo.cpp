// SPDX-License-Identifier: GPL-3.0-or-later
// `bin undo`, `bin redo` and `bin history`: every change of the bin, taken back and made again.
#include <filesystem>

#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

constexpr int kAllOfIt = 1 << 30;

/// The entry that undo or redo would act on.
std::optional<HistoryEntry> next_entry(const Store& store, bool undo) {
    std::optional<HistoryEntry> found;
    for (const HistoryEntry& entry : store.history(kAllOfIt)) {
        if (undo && !entry.undone) return entry;
        if (!undo && !entry.undone) break;
        if (!undo) found = entry;  // the oldest of those undone last
    }
    return found;
}

int step(Session& session, const char* command, bool undo) {
    const std::string path = bin_to_change(session);
    std::error_code ignored;
    if (path != "demo" && !std::filesystem::exists(path, ignored))
        throw InputError(Fault{{path, 0, 0}, "--bin", "there is no bin yet, and nothing to " + std::string(undo ? "undo" : "redo"), "the path of a bin file"});
    std::optional<HistoryEntry> entry;
    {
        const OpenBin bin = path == "demo" ? bin_in_memory(true) : OpenBin{Store(path, Store::Open::read_only), path, true};
        entry = next_entry(bin.store, undo);
    }
    if (!entry) throw InputError(Fault{{path, 0, 0}, "", std::string("there is nothing to ") + (undo ? "undo" : "redo"), "a change in the history"});
    if (!session.dry_run) {
        Store store(path, Store::Open::existing);
        entry = undo ? store.undo() : store.redo();
        if (!entry) throw InputError(Fault{{path, 0, 0}, "", std::string("there is nothing to ") + (undo ? "undo" : "redo"), "a change in the history"});
    }
    if (session.json)
        print_json(session, command, {{"bin", path}, {"what", entry->what}, {"when", entry->when}, {"dry_run", session.dry_run}});
    else if (!session.quiet)
        session.out << (session.dry_run ? (undo ? "would take back: " : "would make again: ") : undo ? "taken back: " : "made again: ") << entry->what << '\n';
    return 0;
}

int undo(Session& session, const Call&) { return step(session, "bin undo", true); }
int redo(Session& session, const Call&) { return step(session, "bin redo", false); }

int history(Session& session, const Call& call) {
    const OpenBin bin = bin_for_reading(session);
    const std::vector<HistoryEntry> entries = bin.store.history(call.whole("--most", 1, 1000000).value_or(100));
    if (session.json) {
        Json list = Json::array();
        for (const HistoryEntry& entry : entries) list.push_back({{"id", entry.id}, {"when", entry.when}, {"what", entry.what}, {"undone", entry.undone}});
        print_json(session, "bin history", {{"bin", bin.name}, {"history", list}});
        return 0;
    }
    Rows rows;
    for (const HistoryEntry& entry : entries) rows.rows.push_back({entry.when, entry.what + (entry.undone ? " (undone)" : "")});
    session.out << rows.text();
    return 0;
}

}  // namespace

Command bin_undo_command() {
    return {.name = "bin undo",
            .summary = "take back the last change of the bin",
            .about = "",
            .options = {},
            .example = "binwright --bin demo bin undo --dry-run",
            .example_says = "which change of the demo bin would be taken back",
            .run = undo};
}

Command bin_redo_command() {
    return {.name = "bin redo",
            .summary = "make the change again that was taken back last",
            .about = "",
            .options = {},
            .example = "binwright bin redo",
            .example_says = "what `bin undo` took back is in the bin again",
            .run = redo};
}

Command bin_history_command() {
    return {.name = "bin history",
            .summary = "the changes of the bin, newest first",
            .about = "",
            .options = {{"-n,--most", "N", "the last N alone (else 100)"}},
            .example = "binwright --bin demo bin history",
            .example_says = "how the demo bin came to be",
            .run = history};
}

}  // namespace binwright
