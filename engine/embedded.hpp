// SPDX-License-Identifier: GPL-3.0-or-later
// Text files compiled into the program: shipped rulebooks, the starter catalogue, the demo.
#pragma once
#include <span>
#include <string_view>

namespace binwright {

struct EmbeddedFile {
    std::string_view name;  ///< file name without its folder
    std::string_view text;  ///< whole contents, UTF-8
};

}  // namespace binwright
