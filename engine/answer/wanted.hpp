// SPDX-License-Identifier: GPL-3.0-or-later
// The least that would hold in a seat: figures for a search through a junk box, found by solving again.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/answer/judge.hpp"

namespace binwright {

/// One line of what is wanted. All figures of the symbol together are one line (V_F at two temperatures).
struct WantedLine {
    Symbol figure{};
    std::vector<Figure> bounds;     ///< exactly at the least that holds, with their conditions
    bool at_least = false;          ///< as much or more; else as much or less
    std::optional<double> usual;    ///< the next rating that can be had
    std::vector<std::string> rules; ///< ids of the rules that stopped it, in the order in which figures were let go
};

struct Wanted {
    Seat seat{};
    std::string reference;
    int count = 1;                  ///< in parallel
    Part part;                      ///< exactly on every line: it holds, and 1 % worse in any line it does not
    std::vector<WantedLine> lines;
    /// Figures that must be on record, but may be ten times worse than the part's without changing a verdict.
    std::vector<Symbol> any;
    bool found = false;
    SeatReport report;              ///< of `part`; where nothing was found, of the best that was tried
    std::vector<Finding> silent;    ///< what the rulebook does not cover, and so says nothing of
};

/// Everything else as fitted. Starts from what is fitted there (or from figures usual for the kind, common practice without a
/// source), makes it better until it holds, then lets each figure go as far as it holds: losses first, R_DS(on), V_F or ESR before
/// the others, ratings last. Other choices hold as well: a little more of one figure for a little less of another.
/// @param technology  of the part looked for ("film"); empty: as fitted, else schottky or aluminium
/// @throws as expose; InputError for a technology that the seat's family has not
[[nodiscard]] Wanted wanted(const Setup& setup, Seat seat, const Rulebook& book, const std::string& technology = {}, const Progress& progress = {});

/// The same part with one line worse by a share (temperatures in °C).
[[nodiscard]] Part worse_in(const Part& part, Symbol figure, double share);

}  // namespace binwright
