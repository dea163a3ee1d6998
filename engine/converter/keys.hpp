// SPDX-License-Identifier: GPL-3.0-or-later
// The keys of a converter file as one table: what each takes, its unit and bounds, and where it goes in a Converter.
// Reading, refusing, hints, listings and changes of single values all work from this table.
#pragma once
#include <span>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "engine/converter/converter.hpp"

namespace binwright {

/// Which of several like tables a key is in: the seat of [seat.x], the name of [heatsink.x], the number of [[across]].
struct Where {
    Seat seat{};
    std::string name;
    std::size_t index = 0;
};

/// Where a value is put.
using Slot = std::variant<double*, std::optional<double>*, Range*, std::optional<Range>*, std::string*, bool*, int*,
                          std::vector<double>*, LoadKind*>;

enum class Takes {
    quantity,  ///< "12 V"; a pure number or fraction also bare
    range,     ///< one quantity, or ["lowest", "highest"], or "lowest .. highest"
    whole,     ///< a whole number
    numbers,   ///< a list of pure numbers
    text,      ///< any text
    word,      ///< one of `words`
    flag,      ///< true or false
    special,   ///< read by a routine of its own: kind, format, topology, fitted, overshoot
};

/// Bits of the families whose seats have the key.
inline constexpr unsigned kSwitch = 1, kRectifier = 2, kCapacitor = 4, kAnyFamily = 7;

struct Key {
    std::string_view table;  ///< "" | "operating" | "heatsink.*" | "seat.*.element" | "across[]" …
    std::string_view key;
    Takes takes;
    Unit unit;
    double lowest, highest;  ///< bounds in base units (kelvin for celsius); a range may begin at 0 where lowest is 0
    bool above;              ///< `lowest` itself is out
    std::string_view words;  ///< "a|b|c"
    bool needed;
    unsigned families;
    std::string_view meaning;
    Slot (*slot)(Converter&, const Where&);  ///< null for special
};

[[nodiscard]] std::span<const Key> keys();

/// Tables that hold figures by symbol, with the attributes of their family beside them.
inline constexpr std::string_view kFigureTables[] = {"seat.*.figures", "across[]"};

/// Attributes that may stand beside figures; `words` empty: any text.
struct AttributeInfo {
    std::string_view name;
    unsigned families;
    std::string_view words;
    std::string_view meaning;
};
[[nodiscard]] std::span<const AttributeInfo> attributes();

[[nodiscard]] Family family_of(Seat seat);
[[nodiscard]] unsigned bit(Family family);
[[nodiscard]] std::vector<std::string> split_words(std::string_view words);

/// "operating.input_voltage" taken apart and recognised. A key of figures has `symbol` or `attribute` instead of `key`.
struct KeyPath {
    std::vector<std::string> parts;  ///< as in the file, e.g. {"seat", "switch", "figures", "V_DSS"}
    const Key* key = nullptr;
    std::optional<Symbol> symbol;
    const AttributeInfo* attribute = nullptr;
};
/// Also takes the short form of [operating] keys ("output_voltage"). `heatsinks` are names for the hint alone.
/// @throws InputError naming the nearest known key, placed at `place`
[[nodiscard]] KeyPath find_key(std::string_view dotted, const Place& place,
                               const std::vector<std::string>& heatsinks = {});

}  // namespace binwright
