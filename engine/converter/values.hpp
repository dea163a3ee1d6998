// SPDX-License-Identifier: GPL-3.0-or-later
// Single values of a converter file: from what is written to where it goes, or to a fault that says what was expected.
#pragma once
#include <initializer_list>
#include <map>
#include <optional>
#include <set>
#include <string>
#include <string_view>
#include <vector>

#include "engine/converter/converter.hpp"
#include "engine/converter/item.hpp"
#include "engine/converter/keys.hpp"

namespace binwright {

[[nodiscard]] std::string quote(std::string_view key);  ///< `key`
/// "a, b or c"
[[nodiscard]] std::string listed(const std::vector<std::string>& words, std::string_view last = "or");

/// "winding.primary.turns"; `turns` in [winding.primary]
[[nodiscard]] std::string dotted(const std::string& path, const std::string& key);
[[nodiscard]] std::string named(const std::string& path, const std::string& key);
[[nodiscard]] std::optional<std::string> text_of(const Item& item);
[[nodiscard]] std::string takes_text(const Key& key);
[[nodiscard]] std::string topology_names();

/// Reads values into a converter and notes every fault. `path` is the name of the table that a value stands in.
struct Values {
    Converter converter;
    std::vector<Fault>& faults;

    void fault(const Place& place, const std::string& field, std::string message, std::string expected = "");
    bool figure_or_attribute(const Member& member, const std::string& path, Family family, Known known_as,
                             std::vector<Figure>& figures, std::map<std::string, std::string>& texts,
                             std::set<Symbol>& seen);
    // A parser's fault, moved to where its text stands.
    void forward(const InputError& error, const Item& item, const std::string& path, const std::string& key);
    bool one_of(const std::string& text, std::string_view words, const Item& item, const std::string& path,
                const std::string& key);
    void value(const Key& key, const Item& item, const std::string& path, const Where& where);
    std::optional<double> quantity(const Key& key, const Item& item, const std::string& path, bool in_list);
    std::optional<Range> range_of(const Key& key, const Item& item, const std::string& path);
    bool within(double value, const Key& key, const Item& item, const std::string& path);
    void special(const Key& key, const Item& item, const std::string& path, const Where& where);
    static std::string shown_value(const Item& item);
    void fitted(const Item& item, const std::string& path, Seat seat);
    void overshoot(const Item& item, const std::string& path, Seat seat);
};

}  // namespace binwright
