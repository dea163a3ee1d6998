// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/converter/values.hpp"

#include <algorithm>
#include <cmath>

namespace binwright {

std::string quote(std::string_view key) {
    return "`" + std::string(key) + "`";
}

std::string listed(const std::vector<std::string>& words, std::string_view last) {
    std::string out;
    for (std::size_t k = 0; k < words.size(); ++k)
        out += (k == 0 ? "" : k + 1 == words.size() ? " " + std::string(last) + " " : ", ") + words[k];
    return out;
}

void Values::fault(const Place& place, const std::string& field, std::string message, std::string expected) {
    faults.push_back({place, field, std::move(message), std::move(expected)});
}

std::string dotted(const std::string& path, const std::string& key) {
    return path.empty() ? key : path + "." + key;
}

std::string named(const std::string& path, const std::string& key) {
    return path.empty() ? quote(key) : quote(key) + " in [" + path + "]";
}

bool Values::figure_or_attribute(const Member& member, const std::string& path, Family family, Known known_as,
                                 std::vector<Figure>& figures, std::map<std::string, std::string>& texts,
                                 std::set<Symbol>& seen) {
    if (const auto symbol = find_symbol(member.key, family)) {
        if (!seen.insert(*symbol).second)
            fault(member.place, dotted(path, member.key),
                  named(path, member.key) + " stands there twice, under two spellings",
                  "one list: \"" + std::string(info(*symbol).name) + "\" = [\"…\", \"…\"]");
        const auto one = [&](const Item& item) {
            const auto text = text_of(item);
            if (!text)
                return fault(item.place, dotted(path, member.key),
                             named(path, member.key) + " is a text in quotes with its unit, not " +
                                 std::string(kind_name(item.kind)),
                             std::string(expected_text(info(*symbol).unit)));
            try {
                Figure figure = parse_figure(*symbol, *text, known_as);
                const Spread& v = figure.value;
                if (!(v.best >= 0 && v.typical >= 0 && v.worst >= 0) && info(*symbol).unit != Unit::celsius)
                    fault(item.place, dotted(path, member.key),
                          named(path, member.key) + " is " + *text + ": it cannot be negative");
                else if (info(*symbol).rating && !(v.best > 0 && v.worst > 0))
                    fault(item.place, dotted(path, member.key),
                          named(path, member.key) + " is " + *text + ": a rating is more than 0");
                else
                    figures.push_back(std::move(figure));
            } catch (const InputError& error) {
                forward(error, item, path, member.key);
            }
        };
        if (member.value.kind == Item::Kind::array) {
            for (const Item& item : member.value.items) one(item);
            if (member.value.items.empty())
                fault(member.value.place, dotted(path, member.key), named(path, member.key) + " is an empty list");
        } else {
            one(member.value);
        }
        return true;
    }
    for (const AttributeInfo& attribute : attributes()) {
        if (attribute.name != member.key || !(attribute.families & bit(family))) continue;
        std::optional<std::string> text = text_of(member.value);
        if (!text && member.value.kind == Item::Kind::integer && member.value.number >= 0 && member.value.number < 100)
            text = std::to_string(static_cast<int>(member.value.number));
        if (!text)
            fault(member.value.place, dotted(path, member.key),
                  named(path, member.key) + " is a text, not " + std::string(kind_name(member.value.kind)));
        else if (one_of(*text, attribute.words, member.value, path, member.key))
            texts[member.key] = *text;
        return true;
    }
    return false;
}

std::optional<std::string> text_of(const Item& item) {
    if (item.kind == Item::Kind::text) return item.text;
    if (!item.typed.empty() && item.kind != Item::Kind::array && item.kind != Item::Kind::table) return item.typed;
    return std::nullopt;
}

// A parser's fault, moved to where its text stands.
void Values::forward(const InputError& error, const Item& item, const std::string& path, const std::string& key) {
    for (const Fault& inner : error.faults) {
        Place place = item.place;
        const std::optional<int> first = item.text_column ? item.text_column
                                         : item.typed.empty() || item.kind == Item::Kind::text
                                             ? std::nullopt
                                             : std::optional(item.place.column);
        if (first && inner.place.column > 0) place.column = *first + inner.place.column - 1;
        fault(place, dotted(path, key), named(path, key) + ": " + inner.message, inner.expected);
    }
}

std::string takes_text(const Key& key) {
    if (key.key == "topology") return "topology = \"boost\", or another of " + topology_names();
    if (key.takes == Takes::word) return "one of " + listed(split_words(key.words));
    if (key.takes == Takes::text) return "a text in quotes";
    return std::string(expected_text(key.unit));
}

std::string topology_names() {
    std::vector<std::string> names;
    for (const Topology& topology : topologies()) names.emplace_back(topology.name);
    return listed(names);
}

bool Values::one_of(const std::string& text, std::string_view words, const Item& item, const std::string& path,
                    const std::string& key) {
    const auto known_words = split_words(words);
    if (known_words.empty() || std::find(known_words.begin(), known_words.end(), text) != known_words.end())
        return true;
    const std::string near = nearest_word(text, known_words);
    fault(item.place, dotted(path, key),
          named(path, key) + " cannot be \"" + text + "\"" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"),
          "one of " + listed(known_words));
    return false;
}

void Values::value(const Key& key, const Item& item, const std::string& path, const Where& where) {
    const std::string name(key.key);
    const auto wrong = [&](const std::string& expected) {
        fault(item.place, dotted(path, name),
              named(path, std::string(key.key)) + " is " + expected + ", not " + std::string(kind_name(item.kind)),
              expected);
    };
    switch (key.takes) {
        case Takes::special:
            return special(key, item, path, where);
        case Takes::text: {
            const auto text = text_of(item);
            if (!text) return wrong("a text in quotes");
            *std::get<std::string*>(key.slot(converter, where)) = *text;
            return;
        }
        case Takes::word: {
            const auto text = text_of(item);
            if (!text) return wrong("one of " + listed(split_words(key.words)));
            if (!one_of(*text, key.words, item, path, name)) return;
            const Slot slot = key.slot(converter, where);
            if (auto* const* load = std::get_if<LoadKind*>(&slot))
                **load = *text == "current"      ? LoadKind::current
                         : *text == "resistance" ? LoadKind::resistance
                                                 : LoadKind::power;
            else
                *std::get<std::string*>(slot) = *text;
            return;
        }
        case Takes::flag:
            if (item.kind != Item::Kind::flag) return wrong("true or false, without quotes");
            *std::get<bool*>(key.slot(converter, where)) = item.flag;
            return;
        case Takes::whole: {
            if (item.kind != Item::Kind::integer) return wrong("a whole number without quotes");
            if (!within(item.number, key, item, path)) return;
            *std::get<int*>(key.slot(converter, where)) = static_cast<int>(item.number);
            return;
        }
        case Takes::numbers: {
            const bool good = item.kind == Item::Kind::array &&
                              std::all_of(item.items.begin(), item.items.end(), [](const Item& each) {
                                  return each.kind == Item::Kind::integer || each.kind == Item::Kind::number;
                              });
            if (!good || item.items.size() != 3)
                return fault(item.place, dotted(path, name),
                             named(path, std::string(key.key)) + " is a list of three numbers, k, alpha and beta",
                             "[k, alpha, beta]");
            std::vector<double> numbers;
            for (const Item& each : item.items) {
                if (!within(each.number, key, each, path)) return;
                numbers.push_back(each.number);
            }
            *std::get<std::vector<double>*>(key.slot(converter, where)) = std::move(numbers);
            return;
        }
        case Takes::quantity: {
            const auto number = quantity(key, item, path, false);
            if (!number || !within(*number, key, item, path)) return;
            const Slot slot = key.slot(converter, where);
            if (auto* const* plain = std::get_if<double*>(&slot))
                **plain = *number;
            else
                *std::get<std::optional<double>*>(slot) = *number;
            return;
        }
        case Takes::range: {
            const auto range = range_of(key, item, path);
            if (!range) return;
            const Slot slot = key.slot(converter, where);
            if (auto* const* plain = std::get_if<Range*>(&slot))
                **plain = *range;
            else
                *std::get<std::optional<Range>*>(slot) = *range;
            return;
        }
    }
}

std::optional<double> Values::quantity(const Key& key, const Item& item, const std::string& path, bool in_list) {
    const std::string name(key.key);
    const bool pure = key.unit == Unit::none || key.unit == Unit::fraction;
    if (pure && (item.kind == Item::Kind::integer || item.kind == Item::Kind::number)) {
        if (std::isfinite(item.number)) return item.number;
        fault(item.place, dotted(path, name), named(path, std::string(key.key)) + " is not a finite number",
              std::string(expected_text(key.unit)));
        return std::nullopt;
    }
    const auto text = text_of(item);
    if (!text) {
        const bool number = item.kind == Item::Kind::integer || item.kind == Item::Kind::number;
        if (number)
            fault(item.place, dotted(path, name), named(path, std::string(key.key)) + " is a number without a unit",
                  std::string(expected_text(key.unit)) + ", in quotes");
        else
            fault(item.place, dotted(path, name),
                  named(path, std::string(key.key)) + " is " + std::string(expected_text(key.unit)) +
                      (in_list || key.takes != Takes::range ? "" : ", or a range") + ", not " +
                      std::string(kind_name(item.kind)),
                  std::string(expected_text(key.unit)));
        return std::nullopt;
    }
    try {
        return parse_quantity(*text, key.unit, pure);
    } catch (const InputError& error) {
        forward(error, item, path, name);
        return std::nullopt;
    }
}

std::optional<Range> Values::range_of(const Key& key, const Item& item, const std::string& path) {
    const std::string name(key.key);
    const bool pure = key.unit == Unit::none || key.unit == Unit::fraction;
    Range range;
    if (item.kind == Item::Kind::array) {
        if (item.items.size() != 2) {
            fault(item.place, dotted(path, name),
                  named(path, std::string(key.key)) + " is a list of " + std::to_string(item.items.size()) +
                      "; a range has two ends",
                  "[lowest, highest]");
            return std::nullopt;
        }
        const auto lowest = quantity(key, item.items[0], path, true);
        const auto highest = quantity(key, item.items[1], path, true);
        if (!lowest || !highest) return std::nullopt;
        range = {*lowest, *highest};
        if (!(range.lowest <= range.highest)) {
            fault(item.place, dotted(path, name),
                  named(path, std::string(key.key)) + ": the lowest, " + format_quantity(range.lowest, key.unit) +
                      ", is above the highest, " + format_quantity(range.highest, key.unit),
                  "[lowest, highest]");
            return std::nullopt;
        }
        if (!within(range.lowest, key, item.items[0], path) || !within(range.highest, key, item.items[1], path))
            return std::nullopt;
        return range;
    }
    const auto text = text_of(item);
    if (!text) {
        const auto single = quantity(key, item, path, false);
        if (!single || !within(*single, key, item, path)) return std::nullopt;
        return Range{*single, *single};
    }
    try {
        range = parse_range(*text, key.unit, pure);
    } catch (const InputError& error) {
        forward(error, item, path, name);
        return std::nullopt;
    }
    if (!std::isfinite(range.lowest) || !std::isfinite(range.highest)) {
        fault(item.place, dotted(path, name), named(path, std::string(key.key)) + " needs both ends of its range",
              "[lowest, highest]");
        return std::nullopt;
    }
    if (!within(range.lowest, key, item, path) || !within(range.highest, key, item, path)) return std::nullopt;
    return range;
}

bool Values::within(double value, const Key& key, const Item& item, const std::string& path) {
    const bool low = key.above ? value > key.lowest : value >= key.lowest;
    if (low && value <= key.highest) return true;
    const auto shown = [&](double v) {
        return key.takes == Takes::whole || key.unit == Unit::none ? format_quantity(v, Unit::none, 6)
                                                                   : format_quantity(v, key.unit, 6);
    };
    const std::string bounds = key.above ? "more than " + shown(key.lowest) + " and at most " + shown(key.highest)
                                         : "between " + shown(key.lowest) + " and " + shown(key.highest);
    fault(item.place, dotted(path, std::string(key.key)),
          named(path, std::string(key.key)) + " is " + shown(value) + "; it must be " + bounds, bounds);
    return false;
}

void Values::special(const Key& key, const Item& item, const std::string& path, const Where& where) {
    const std::string name(key.key);
    if (name == "topology") return;  // read first
    if (name == "kind") {
        if (item.kind != Item::Kind::text || item.text != "converter")
            fault(item.place, name, "this is no converter file: its `kind` is " + shown_value(item),
                  "kind = \"converter\"");
    } else if (name == "format") {
        if (item.kind != Item::Kind::integer)
            fault(item.place, name, "`format` is a whole number, not " + std::string(kind_name(item.kind)),
                  "format = 1");
        else if (item.number != 1)
            fault(item.place, name, "`format` is " + shown_value(item) + "; this program reads format 1", "format = 1");
    } else if (name == "fitted") {
        fitted(item, path, where.seat);
    } else if (name == "overshoot") {
        overshoot(item, path, where.seat);
    }
}

std::string Values::shown_value(const Item& item) {
    if (item.kind == Item::Kind::text) return "\"" + item.text + "\"";
    if (item.kind == Item::Kind::integer) return format_quantity(item.number, Unit::none, 6);
    return std::string(kind_name(item.kind));
}

void Values::fitted(const Item& item, const std::string& path, Seat seat) {
    const std::string field = dotted(path, "fitted");
    auto& list = converter.seats[seat].fitted;
    const std::string expected = "a lot label or part name, or a list such as [{ lot = \"417-H\", count = 2 }]";
    if (const auto text = text_of(item)) {
        if (text->find_first_not_of(" \t") == std::string::npos)
            return fault(item.place, field,
                         named(path, "fitted") + " is empty; leave the key out where nothing is fitted", expected);
        list.push_back({*text, 1, item.place});
        return;
    }
    if (item.kind != Item::Kind::array)
        return fault(item.place, field,
                     named(path, "fitted") + " is " + expected + ", not " + std::string(kind_name(item.kind)),
                     expected);
    if (item.items.empty())
        return fault(item.place, field,
                     named(path, "fitted") + " is an empty list; leave the key out where nothing is fitted", expected);
    for (const Item& each : item.items) {
        if (each.kind == Item::Kind::text && each.text.find_first_not_of(" \t") != std::string::npos) {
            list.push_back({each.text, 1, each.place});
            continue;
        }
        if (each.kind != Item::Kind::table) {
            fault(each.place, field,
                  named(path, "fitted") + ": an entry is { lot = \"…\", count = 1 }, not " +
                      std::string(kind_name(each.kind)),
                  expected);
            continue;
        }
        FittedConfig one{"", 1, each.place};
        for (const Member& member : each.members) {
            const Item& v = member.value;
            if (member.key == "lot") {
                if (v.kind == Item::Kind::text && v.text.find_first_not_of(" \t") != std::string::npos)
                    one.lot = v.text;
                else
                    fault(v.place, field + ".lot",
                          "`lot` in " + named(path, "fitted") + " is a lot label or a part name in quotes", expected);
            } else if (member.key == "count") {
                if (v.kind == Item::Kind::integer && v.number >= 1 && v.number <= 1000)
                    one.count = static_cast<int>(v.number);
                else
                    fault(v.place, field + ".count",
                          "`count` in " + named(path, "fitted") + " is a whole number from 1 to 1000", expected);
            } else {
                const std::string near = nearest_word(member.key, {"lot", "count"});
                fault(member.place, field + "." + member.key,
                      "unknown key " + quote(member.key) + " in an entry of " + named(path, "fitted") +
                          (near.empty() ? "" : "; did you mean " + quote(near) + "?"),
                      "lot and count");
            }
        }
        if (!each.find("lot"))
            fault(each.place, field, "an entry of " + named(path, "fitted") + " names no `lot`", expected);
        list.push_back(std::move(one));
    }
}

void Values::overshoot(const Item& item, const std::string& path, Seat seat) {
    const std::string field = dotted(path, "overshoot");
    const auto text = text_of(item);
    if (!text)
        return fault(item.place, field,
                     named(path, "overshoot") + " is a voltage, best with the current at which it was measured",
                     "\"4 V @ 9.5 A\"");
    const auto at = text->find('@');
    const auto part = [&](std::size_t from, std::size_t to, Unit unit) -> std::optional<double> {
        try {
            return parse_quantity(std::string_view(*text).substr(from, to - from), unit);
        } catch (InputError& error) {
            for (Fault& inner : error.faults)
                if (inner.place.column > 0) {
                    const std::string_view before = std::string_view(*text).substr(0, from);
                    inner.place.column += static_cast<int>(std::count_if(before.begin(), before.end(), [](char c) {
                        return (static_cast<unsigned char>(c) & 0xC0) != 0x80;
                    }));
                }
            forward(error, item, path, "overshoot");
            return std::nullopt;
        }
    };
    const auto voltage = part(0, std::min(at, text->size()), Unit::volt);
    std::optional<double> current;
    if (at != std::string::npos) {
        current = part(at + 1, text->size(), Unit::ampere);
        if (!current) return;
    }
    if (!voltage) return;
    if (!(*voltage >= 0 && *voltage <= 5000))
        return fault(item.place, field,
                     named(path, "overshoot") + " is " + format_quantity(*voltage, Unit::volt, 6) +
                         "; it must be between 0 V and 5 kV");
    if (current && !(*current > 0 && *current <= 1e4))
        return fault(item.place, field,
                     named(path, "overshoot") + " was measured at " + format_quantity(*current, Unit::ampere, 6) +
                         "; that current must be more than 0 A and at most 10 kA");
    converter.seats[seat].overshoot = SeatConfig::Overshoot{*voltage, current};
}

}  // namespace binwright
