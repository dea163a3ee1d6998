// SPDX-License-Identifier: GPL-3.0-or-later
// What stands beside the power parts and sees the same circuit: fuse, cores of the windings, sense resistor, and whatever
// merely sits on a voltage. All from the converter file, judged by the same rules.
#pragma once
#include <string>
#include <vector>

#include "engine/answer/exposure.hpp"

namespace binwright {

struct Beside {
    enum class What { fuse, first_core, second_core, common_core, sense, clamp, across } what;
    std::string name;             ///< "fuse", "primary winding", "sense resistor", or as the file names it
    Part part;                    ///< the figures that the file gives
    std::string between;          ///< of an `across`
};

/// In the order of the file. A fuse or a sense resistor only where the file has one; a winding's core always.
[[nodiscard]] std::vector<Beside> beside_of(const Converter& converter);

/// The stresses that rules may ask of it.
[[nodiscard]] std::vector<Stress> stresses_of(const Beside& one);

}  // namespace binwright
