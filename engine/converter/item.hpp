// SPDX-License-Identifier: GPL-3.0-or-later
// A TOML text as plain values that remember where they stand, so that messages can point and changes can be exact.
#pragma once
#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "engine/fault.hpp"

namespace binwright {

struct Member;

/// One value of the text. `begin` and `end` are the bytes it takes there (tables with a header: not meant).
struct Item {
    enum class Kind { table, array, text, integer, number, flag, date };
    Kind kind = Kind::table;
    std::string text;   ///< of a text; of a date as written
    double number = 0;  ///< of an integer or a number
    bool flag = false;
    std::vector<Item> items;      ///< of an array
    std::vector<Member> members;  ///< of a table, in the order of the text
    Place place;
    std::size_t begin = 0, end = 0;
    std::optional<int> text_column;  ///< column of a text's first character, where it stands there without escapes
    bool in_braces = false;          ///< a table written { … } in place
    std::string typed;               ///< given beside the file (KEY=VALUE): the value as typed; else empty

    [[nodiscard]] const Item* find(std::string_view key) const;
    [[nodiscard]] Item* find(std::string_view key);
};

struct Member {
    std::string key;
    Place place;
    Item value;
};

/// Byte offset of a line and column (from 1, in characters) of a UTF-8 text; its size when beyond the end.
[[nodiscard]] std::size_t offset_of(std::string_view text, int line, int column);

/// Reads a TOML 1.0 text. Lines that are no TOML become faults and are left out, where the rest can still be read
/// without them; then `whole` is false and what is missing may stand in such a line.
struct ItemText {
    Item root;
    bool whole = true;
};
[[nodiscard]] ItemText read_items(std::string_view text, const std::string& file, std::vector<Fault>& faults);

/// The value of "KEY=VALUE": as TOML where it is one (list, table, quoted text, number, true), else as text.
[[nodiscard]] Item typed_item(std::string_view value, const Place& place);

/// Two values say the same (places apart).
[[nodiscard]] bool same_value(const Item& a, const Item& b);

/// A text in TOML's quotes.
[[nodiscard]] std::string quoted(std::string_view text);

/// A key as TOML writes it: bare where that is allowed, else in quotes.
[[nodiscard]] std::string key_text(std::string_view key);

/// Parts of a dotted key; quotes keep dots together. Empty when it is no key.
[[nodiscard]] std::vector<std::string> split_key(std::string_view dotted);

/// "a text", "a list" …
[[nodiscard]] std::string_view kind_name(Item::Kind kind);

}  // namespace binwright
