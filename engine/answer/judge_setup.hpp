// SPDX-License-Identifier: GPL-3.0-or-later
// Between exposing a setup and judging its parts; shared by check and rank.
#pragma once
#include <vector>

#include "engine/answer/judge_part.hpp"

namespace binwright {

struct BothEnds {
    Exposure best, worst;
};
/// Whether any fitted figure has a spread, or an age that is not known.
[[nodiscard]] bool differs_between_ends(const Setup& setup);

/// @throws as expose
[[nodiscard]] BothEnds expose_both(const Setup& setup, const Allowances& allowances, const Progress& progress = {});

/// Reports of these seats, one a fitted kind. `search`: bounds and heatsinks are searched by exposing again.
/// @throws as expose
[[nodiscard]] std::vector<SeatReport> judge_setup(const Setup& setup, const BothEnds& ends, const Rulebook& book, const std::vector<Seat>& seats,
                                                  bool search, const Progress& progress = {});

/// What stands beside the seats, from what it sees at both ends.
[[nodiscard]] std::vector<SeatReport> judge_beside(const Setup& setup, const BothEnds& ends, const Rulebook& book);

}  // namespace binwright
