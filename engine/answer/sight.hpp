// SPDX-License-Identifier: GPL-3.0-or-later
// What the rules see at one operating point: every stress of every fitted part, with the terms it is made of.
#pragma once
#include <string>
#include <vector>

#include "engine/answer/operate.hpp"

namespace binwright {

/// One stress of one fitted kind, or of what stands beside.
struct StressKey {
    Seat seat;
    std::size_t entry;
    Stress stress;
    int beside = -1;  ///< index into Bench::beside; then seat means nothing, and entry is no entry of any seat
    [[nodiscard]] bool lowest_is_worst() const { return stress == Stress::life || stress == Stress::drive_voltage_lowest; }
};

/// Which stresses a bench can compute, and which it cannot for want of a figure.
struct Sight {
    std::vector<StressKey> keys;
    struct Missing { Seat seat; std::size_t entry; Stress stress; std::string figure; };
    std::vector<Missing> missing;
};
[[nodiscard]] Sight sight_of(const Bench& bench);

/// Values in the order of Sight::keys; NaN where a stress does not exist at this point (a junction that has run away).
[[nodiscard]] std::vector<double> look(const Bench& bench, const Sight& sight, const At& at, const Operated& operated);

/// One stress with its terms and what it rests on.
[[nodiscard]] StressValue explain(const Bench& bench, const StressKey& key, const At& at, const Operated& operated);

}  // namespace binwright
