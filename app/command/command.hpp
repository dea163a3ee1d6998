// SPDX-License-Identifier: GPL-3.0-or-later
// The command line: one call of the program from its arguments to its exit status.
#pragma once
#include <iosfwd>
#include <optional>
#include <string>

namespace binwright {

/// Runs one command. Results go to `out`, messages to `err`; `-` as a file name reads `in` or writes `out`.
/// @returns the exit status: 0, 1 or 3 as the command answers, 2 the input or the call is at fault, 4 the machine failed
int run_command_line(int argc, char** argv, std::istream& in, std::ostream& out, std::ostream& err);

/// What the window is to open with.
struct WindowCall {
    std::string converter_path;  ///< empty: none named
    std::string bin_path;        ///< empty: the person's own bin, see default_bin_path()
    bool demo = false;           ///< the demo bin, in memory
};

/// A call without a command, with at most a converter file and `--bin`, wants the window. Empty: it is for the command line.
[[nodiscard]] std::optional<WindowCall> window_call(int argc, char** argv);

}  // namespace binwright
