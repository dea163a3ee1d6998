// SPDX-License-Identifier: GPL-3.0-or-later
// `bin demo`: the demo station's lots in a bin on disk, to try things in.
#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "import/starter.hpp"

namespace binwright {
namespace {

int run(Session& session, const Call&) {
    if (!session.bin) throw InputError(Fault{{}, "--bin", "the demo's lots go into a bin of their own: name its file with --bin", "--bin PATH"});
    return change_bin(session, "bin demo", true, [](const Store& store) {
        if (!store.lots().empty()) throw InputError(Fault{{}, "--bin", "this bin holds lots already; the demo's go into a new one", "the path of a new file"});
        return demo_edit(store);
    });
}

}  // namespace

Command bin_demo_command() {
    return {.name = "bin demo",
            .summary = "make a bin on disk with the demo's lots, to try things in",
            .about = "`--bin demo` with any reading command uses the same lots in memory.",
            .options = {},
            .example = "binwright --bin trial.binwright bin demo",
            .example_says = "the tide-gauge station's tin of parts, in trial.binwright",
            .run = run};
}

}  // namespace binwright
