// SPDX-License-Identifier: GPL-3.0-or-later
// Every command, each described and run in a file of its own; commands.cpp puts them in order.
#pragma once
#include "app/command/call.hpp"

namespace binwright {

[[nodiscard]] Command new_command();
[[nodiscard]] Command stress_command();
[[nodiscard]] Command check_command();
[[nodiscard]] Command rank_command();
[[nodiscard]] Command bin_add_command();
[[nodiscard]] Command bin_list_command();
[[nodiscard]] Command bin_show_command();
[[nodiscard]] Command bin_find_command();
[[nodiscard]] Command bin_edit_command();
[[nodiscard]] Command bin_measure_command();
[[nodiscard]] Command bin_take_command();
[[nodiscard]] Command bin_put_command();
[[nodiscard]] Command bin_undo_command();
[[nodiscard]] Command bin_redo_command();
[[nodiscard]] Command bin_history_command();
[[nodiscard]] Command bin_demo_command();
[[nodiscard]] Command rulebook_list_command();
[[nodiscard]] Command rulebook_show_command();
[[nodiscard]] Command rulebook_validate_command();
[[nodiscard]] Command rulebook_compare_command();
[[nodiscard]] Command wanted_command();
[[nodiscard]] Command help_command();

}  // namespace binwright
