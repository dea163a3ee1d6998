// SPDX-License-Identifier: GPL-3.0-or-later
// Comparisons: one lot under several rulebooks, and two lots rule by rule.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/answer/judge.hpp"

namespace binwright {

struct UnderBook {
    const Rulebook* book = nullptr;
    SeatReport report;
};
/// The first kind fitted in a seat, judged by each book. Books of the same allowances share what it sees.
/// @throws as expose
[[nodiscard]] std::vector<UnderBook> under_books(const Setup& setup, Seat seat, const std::vector<const Rulebook*>& books, const Progress& progress = {});

/// What the books say of one stress.
struct StressUnderBooks {
    Stress stress{};
    struct Entry {
        std::size_t book;   ///< index into what under_books returned
        Finding finding;
    };
    std::vector<Entry> entries;  ///< the tightest limit first; what is not covered or has no limit last
};
/// Stress by stress, those that some book rejects first. Findings without a stress (not permitted) are in the reports alone.
[[nodiscard]] std::vector<StressUnderBooks> by_stress(const std::vector<UnderBook>& books);

/// One rule at two lots.
struct SideBySide {
    Rule rule;
    std::optional<Finding> first, second;  ///< empty: the rule does not apply to it
    int better = 0;                        ///< −1: the first has more headroom or the better verdict, +1: the second, 0: alike or not comparable
};
/// Rule by rule, where the two differ in verdict first, then by the least headroom of either.
[[nodiscard]] std::vector<SideBySide> side_by_side(const SeatReport& first, const SeatReport& second);

}  // namespace binwright
