// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/command/list.hpp"

namespace binwright {

const std::vector<Command>& commands() {
    static const std::vector<Command> all = {
        new_command(),      stress_command(),      check_command(),       rank_command(),       wanted_command(),
        bin_add_command(),
        bin_list_command(), bin_show_command(),    bin_find_command(),    bin_edit_command(),   bin_measure_command(),
        bin_take_command(), bin_put_command(),     bin_undo_command(),    bin_redo_command(),   bin_history_command(),
        bin_demo_command(), rulebook_list_command(), rulebook_show_command(), rulebook_validate_command(), rulebook_compare_command(), help_command(),
    };
    return all;
}

}  // namespace binwright
