// SPDX-License-Identifier: GPL-3.0-or-later
// What the pieces of the rulebook reader share: where faults go, and values that may differ from level to level.
#pragma once
#include <functional>
#include <map>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "engine/converter/item.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {

/// The keys of one rule, by name.
using Keys = std::map<std::string, const Item*>;

struct Reading {
    std::vector<Fault>& faults;
    bool whole = true;                ///< the text was TOML throughout: what is missing is not in a line left out
    std::vector<std::string> levels;  ///< of the book; empty: it has none
    std::string level;                ///< the one that is read
    std::set<std::string> misspelt;   ///< keys that were meant, by their right spelling

    void fault(const Item& item, const std::string& field, std::string message, std::string expected = "");
    void unknown(const Member& member, const std::string& path, const std::vector<std::string>& known);
    [[nodiscard]] std::optional<std::string> text_of(const Item& item, const std::string& field);
    /// A text, or a list of texts.
    [[nodiscard]] std::vector<std::string> texts_of(const Item& item, const std::string& field);
    /// A quantity in quotes, or a bare number where its unit is a pure one.
    [[nodiscard]] std::optional<double> quantity(const Item& item, const std::string& field, Unit unit);
    /// Calls `read` with the value itself, or with that of each level of a table by levels; `mine` tells the level being read.
    void by_level(const Item& item, const std::string& field, const std::vector<std::string>& wanted, const std::function<void(const Item&, bool mine)>& read);
};

[[nodiscard]] std::string ticked(std::string_view text);
[[nodiscard]] std::string listed(const std::vector<std::string>& words);

/// What is known of the rule when its bound is read.
struct Subject {
    std::optional<Family> family;
    bool family_known = false, stress_known = false;
    std::vector<std::string> at_levels;  ///< at which the rule stands
};

/// Whether one of a rule's keys bounds something.
[[nodiscard]] bool gives_bound(const Keys& at);
/// `rating`, `requirement`, and the one key that bounds.
void read_bound(Reading& reading, Rule& rule, const Item& table, const Keys& at, const Subject& subject);
/// `where`, `charged_by`.
void read_conditions(Reading& reading, Rule& rule, const Keys& at, const Subject& subject);

}  // namespace binwright
