// SPDX-License-Identifier: GPL-3.0-or-later
// The window's way in.
#pragma once
#include <string>

namespace binwright {

struct WindowStart {
    std::string converter_path;  ///< empty: what was open last, or a new converter
    std::string bin_path;        ///< empty: the person's own bin
    bool demo = false;           ///< the demo bin, in memory
};

/// Opens the window and runs it until it is closed. @returns the program's exit status
int open_window(int& argc, char** argv, const WindowStart& start);

}  // namespace binwright
