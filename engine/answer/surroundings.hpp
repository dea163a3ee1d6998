// SPDX-License-Identifier: GPL-3.0-or-later
// What a capacitor sees of its place rather than of its work: the air beside it, and the path that charges it.
#pragma once
#include <vector>

#include "engine/answer/exposure.hpp"

namespace binwright {

/// air_temperature: the highest ambient, the rise of the inner air at the largest total loss, and warmer_by.
/// series_resistance: the least resistance between the source and the capacitor, through windings and the conducting
/// rectifier: source and copper alone, so that what is not known makes it no larger. Neither holds the capacitor's own ESR.
[[nodiscard]] std::vector<StressValue> surroundings(const Setup& setup, const Exposure& exposure, Seat seat);

}  // namespace binwright
