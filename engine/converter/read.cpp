// SPDX-License-Identifier: GPL-3.0-or-later
// One value of a converter file: from what is written to what is meant, or to a fault that says what was expected.
#include "engine/converter/read.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include "engine/converter/keys.hpp"

namespace binwright {
namespace {

std::string quote(std::string_view key) {
    return "`" + std::string(key) + "`";
}

std::string listed(const std::vector<std::string>& words, std::string_view last = "or") {
    std::string out;
    for (std::size_t k = 0; k < words.size(); ++k)
        out += (k == 0 ? "" : k + 1 == words.size() ? " " + std::string(last) + " " : ", ") + words[k];
    return out;
}

class Filler {
  public:
    Filler(const Item& root, const std::string& file, bool whole, std::vector<Fault>& faults)
        : root_(root), whole_(whole), faults_(faults) {
        converter_.file = file;
    }

    Converter run() {
        read_topology();
        table(root_, "", "", Where{}, {converter_.file, 0, 0});
        read_typical();
        share_windings();
        cross_check();
        return std::move(converter_);
    }

  private:
    // ---- messages
    void fault(const Place& place, const std::string& field, std::string message, std::string expected = "") {
        faults_.push_back({place, field, std::move(message), std::move(expected)});
    }
    static std::string dotted(const std::string& path, const std::string& key) {
        return path.empty() ? key : path + "." + key;
    }
    static std::string named(const std::string& path, const std::string& key) {
        return path.empty() ? quote(key) : quote(key) + " in [" + path + "]";
    }
    std::string name_in(const std::string& path, const Key& key) const { return named(path, std::string(key.key)); }

    // ---- tables
    // Reads a table against the keys of its pattern ("seat.*.element"); `path` is its name in this file.
    void table(const Item& item, const std::string& pattern, const std::string& path, const Where& where,
               const Place& place) {
        const unsigned families = pattern.starts_with("seat.*") ? bit(family_of(where.seat)) : kAnyFamily;
        const bool figures =
            std::find(std::begin(kFigureTables), std::end(kFigureTables), pattern) != std::end(kFigureTables);
        std::set<Symbol> seen;
        for (const Member& member : item.members) {
            if (const Key* key = known(pattern, member.key, families)) {
                value(*key, member.value, path, where);
            } else if (const std::string child = child_pattern(pattern, member.key); !child.empty()) {
                child_table(member, child, path, where);
            } else if (figures && figure_member(member, pattern, path, where, seen)) {
            } else {
                unknown(member, pattern, path, families, where);
            }
        }
        if (!whole_) return;
        for (const Key& key : keys())
            if (key.table == pattern && key.needed && !item.find(key.key)) {
                const std::string missing = dotted(path, std::string(key.key));
                if (path.empty())
                    fault(place, missing, "the file names no " + quote(key.key), takes_text(key));
                else
                    fault(place, missing, "[" + path + "] gives no " + quote(key.key), takes_text(key));
            }
        if (pattern.empty() && !item.find("operating"))
            fault(place, "operating", "the file has no table [operating]",
                  "a table [operating] with input_voltage, output_voltage, output_current, frequency and ambient");
    }

    static const Key* known(std::string_view pattern, std::string_view name, unsigned families) {
        for (const Key& key : keys())
            if (key.table == pattern && key.key == name && (key.families & families)) return &key;
        return nullptr;
    }

    // "winding" + "primary" → "winding.primary", "seat" + "switch" → "seat.*"; empty when there is no such table.
    static std::string child_pattern(const std::string& pattern, const std::string& name) {
        static const std::vector<std::string> own{"seat.*.as_fitted", "seat.*.figures"};
        const std::string exact = dotted(pattern, name);
        const std::string any = dotted(pattern, "*");
        const auto begins = [](std::string_view table, const std::string& with) {
            return table == with || table == with + "[]" ||
                   (table.starts_with(with) && table.size() > with.size() && table[with.size()] == '.');
        };
        for (const std::string& candidate : {exact, any}) {
            if (candidate == "*") continue;
            for (const Key& key : keys())
                if (begins(key.table, candidate)) return candidate;
            for (const std::string& table : own)
                if (begins(table, candidate)) return candidate;
        }
        return {};
    }

    static std::vector<std::string> child_names(const std::string& pattern) {
        std::set<std::string> names;
        if (pattern == "seat")
            for (const Seat seat : kSeats) names.insert(std::string(to_string(seat)));
        if (pattern == "seat.*") names = {"figures", "element", "as_fitted"};
        for (const Key& key : keys()) {
            const std::string with = pattern.empty() ? "" : pattern + ".";
            if (key.table.size() <= with.size() || !key.table.starts_with(with)) continue;
            const auto rest = key.table.substr(with.size());
            const auto name = rest.substr(0, rest.find_first_of(".["));
            if (name != "*") names.insert(std::string(name));
        }
        return {names.begin(), names.end()};
    }

    void child_table(const Member& member, const std::string& pattern, const std::string& path, Where where) {
        const std::string name = dotted(path, key_text(member.key));
        if (pattern == "across") return across(member);
        if (pattern == "seat.*") {
            const auto seat = find_seat(member.key);
            if (!seat) return unknown(member, "seat", path, kAnyFamily, where);
            where.seat = *seat;
            if (converter_.topology && !has_seat(*converter_.topology, *seat)) {
                std::vector<std::string> seats;
                for (const Seat other : kSeats)
                    if (has_seat(*converter_.topology, other)) seats.emplace_back(to_string(other));
                return fault(member.place, name,
                             "a " + std::string(converter_.topology->name) + " has no seat " + quote(member.key) +
                                 "; its seats are " + listed(seats, "and"));
            }
            converter_.seats[*seat];
        }
        if (pattern == "heatsink.*") where.name = member.key;
        if (pattern == "seat.*.as_fitted") return as_fitted(member, name, where);
        if (member.value.kind != Item::Kind::table)
            return fault(member.value.place, name,
                         quote(name) + " is a table, not " + std::string(kind_name(member.value.kind)),
                         "[" + name + "] with its keys below");
        if (pattern == "seat.*.element") converter_.seats[where.seat].element.emplace();
        if (pattern == "source") converter_.source.emplace();
        table(member.value, pattern, name, where, member.value.in_braces ? member.value.place : member.place);
        if (pattern == "seat.*.figures") check_figures(member.value, name, where.seat);
    }

    void across(const Member& member) {
        if (member.value.kind != Item::Kind::array)
            return fault(member.place, "across", "`across` is a list of tables",
                         "[[across]] with its keys below, once for each part");
        for (const Item& item : member.value.items) {
            if (item.kind != Item::Kind::table) {
                fault(item.place, "across", "`across` is a list of tables, not of " + std::string(kind_name(item.kind)),
                      "[[across]] with its keys below, once for each part");
                continue;
            }
            converter_.across.emplace_back();
            table(item, "across[]", "across", Where{{}, "", converter_.across.size() - 1}, item.place);
            if (whole_ && converter_.across.back().figures.empty() && only_known(item))
                fault(item.place, "across", "[across] gives no rating of the part", "\"U_R\" = \"25 V\"");
        }
    }
    static bool only_known(const Item& item) {
        return std::all_of(item.members.begin(), item.members.end(),
                           [](const Member& member) { return known("across[]", member.key, kAnyFamily); });
    }

    void unknown(const Member& member, const std::string& pattern, const std::string& path, unsigned families,
                 const Where& where) {
        std::vector<std::string> words;
        if (pattern != "seat" && pattern != "heatsink")
            for (const Key& key : keys())
                if (key.table == pattern && (key.families & families)) words.emplace_back(key.key);
        const std::size_t plain = words.size();
        for (const auto& name : child_names(pattern)) words.push_back(name);
        if (std::find(std::begin(kFigureTables), std::end(kFigureTables), pattern) != std::end(kFigureTables)) {
            const Family family = pattern == "across[]" ? Family::capacitor : family_of(where.seat);
            for (const SymbolInfo& symbol : symbols())
                if (find_symbol(symbol.name, family)) words.emplace_back(symbol.name);
            for (const AttributeInfo& info : attributes())
                if (info.families & bit(family)) words.emplace_back(info.name);
        }
        const std::string near = nearest_word(member.key, words);
        const bool is_table = member.value.kind == Item::Kind::table && !member.value.in_braces;
        const std::string full = dotted(path, key_text(member.key));
        std::string message;
        if (is_table) {
            message = "unknown table [" + full + "]";
            if (!near.empty())
                message += std::find(words.begin(), words.begin() + static_cast<std::ptrdiff_t>(plain), near) !=
                                   words.begin() + static_cast<std::ptrdiff_t>(plain)
                               ? "; did you mean the key " + quote(near) + "?"
                               : "; did you mean [" + dotted(path, near) + "]?";
        } else {
            message = "unknown key " + named(path, member.key);
            if (!near.empty()) message += "; did you mean " + quote(near) + "?";
        }
        fault(member.place, full, message, words.empty() ? "" : "one of " + listed(words));
    }

    // ---- figures
    bool figure_member(const Member& member, const std::string& pattern, const std::string& path, const Where& where,
                       std::set<Symbol>& seen) {
        const bool in_across = pattern == "across[]";
        const Family family = in_across ? Family::capacitor : family_of(where.seat);
        auto& figures = in_across ? converter_.across[where.index].figures : converter_.seats[where.seat].figures;
        auto& texts = in_across ? converter_.across[where.index].attributes : converter_.seats[where.seat].attributes;
        return figure_or_attribute(member, path, family, Known::told, figures, texts, seen);
    }

    bool figure_or_attribute(const Member& member, const std::string& path, Family family, Known known_as,
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
            if (!text && member.value.kind == Item::Kind::integer && member.value.number >= 0 &&
                member.value.number < 100)
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

    void check_figures(const Item& item, const std::string& path, Seat seat) {
        const SeatConfig& config = converter_.seats[seat];
        const Part part{family_of(seat), "", config.attributes, config.figures};
        for (const Figure& figure : config.figures) {
            const std::string why = implausible(part, figure);
            if (why.empty()) continue;
            for (const Member& member : item.members)
                if (find_symbol(member.key, part.family) == figure.symbol)
                    fault(member.value.place, dotted(path, member.key), named(path, member.key) + ": " + why);
        }
    }

    // [seat.x.as_fitted]: lot, part, origin, count, the attributes, and a table of figures for each way of knowing
    // them.
    void as_fitted(const Member& member, const std::string& path, const Where& where) {
        const auto one = [&](const Item& item) {
            if (item.kind != Item::Kind::table)
                return fault(item.place, path, quote(path) + " is a table, not " + std::string(kind_name(item.kind)));
            Lot lot;
            lot.part.family = family_of(where.seat);
            std::set<Symbol> seen;
            for (const Member& each : item.members) {
                const auto text = text_of(each.value);
                if (each.key == "lot" && text) {
                    lot.label = *text;
                } else if (each.key == "part" && text) {
                    lot.part.name = *text;
                } else if (each.key == "saved" && text) {  // a date, for people
                } else if (each.key == "origin" && text && find_origin(*text)) {
                    lot.origin = *find_origin(*text);
                } else if (each.key == "count" && each.value.kind == Item::Kind::integer && each.value.number >= 1 &&
                           each.value.number <= 1000) {
                    lot.count = static_cast<int>(each.value.number);
                } else if (each.key == "suspect" && text) {
                    lot.suspect = true;
                    lot.suspect_why = *text;
                } else if (const auto known_as = find_known(each.key);
                           known_as && each.value.kind == Item::Kind::table) {
                    std::set<Symbol> here;
                    const std::string below = path + "." + each.key;
                    for (const Member& figure : each.value.members)
                        if (!find_symbol(figure.key, lot.part.family))
                            unknown(figure, "seat.*.figures", below, bit(lot.part.family), where);
                        else
                            figure_or_attribute(figure, below, lot.part.family, *known_as, lot.part.figures,
                                                lot.part.attributes, here);
                } else if (!figure_or_attribute(each, path, lot.part.family, Known::told, lot.part.figures,
                                                lot.part.attributes, seen)) {
                    fault(each.place, dotted(path, each.key), "unknown key or value: " + named(path, each.key),
                          "lot, part, origin (new, surplus or pulled), count, saved, suspect, an attribute, a figure, "
                          "or a "
                          "table measured, datasheet, marked, told or kind");
                }
            }
            converter_.seats[where.seat].as_fitted.push_back(std::move(lot));
        };
        if (member.value.kind == Item::Kind::array)
            for (const Item& item : member.value.items) one(item);
        else
            one(member.value);
    }

    // ---- single values
    static std::optional<std::string> text_of(const Item& item) {
        if (item.kind == Item::Kind::text) return item.text;
        if (!item.typed.empty() && item.kind != Item::Kind::array && item.kind != Item::Kind::table) return item.typed;
        return std::nullopt;
    }

    // A parser's fault, moved to where its text stands.
    void forward(const InputError& error, const Item& item, const std::string& path, const std::string& key) {
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

    static std::string takes_text(const Key& key) {
        if (key.key == "topology") return "topology = \"boost\", or another of " + topology_names();
        if (key.takes == Takes::word) return "one of " + listed(split_words(key.words));
        if (key.takes == Takes::text) return "a text in quotes";
        return std::string(expected_text(key.unit));
    }
    static std::string topology_names() {
        std::vector<std::string> names;
        for (const Topology& topology : topologies()) names.emplace_back(topology.name);
        return listed(names);
    }

    bool one_of(const std::string& text, std::string_view words, const Item& item, const std::string& path,
                const std::string& key) {
        const auto known_words = split_words(words);
        if (known_words.empty() || std::find(known_words.begin(), known_words.end(), text) != known_words.end())
            return true;
        const std::string near = nearest_word(text, known_words);
        fault(
            item.place, dotted(path, key),
            named(path, key) + " cannot be \"" + text + "\"" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"),
            "one of " + listed(known_words));
        return false;
    }

    void value(const Key& key, const Item& item, const std::string& path, const Where& where) {
        const std::string name(key.key);
        const auto wrong = [&](const std::string& expected) {
            fault(item.place, dotted(path, name),
                  name_in(path, key) + " is " + expected + ", not " + std::string(kind_name(item.kind)), expected);
        };
        switch (key.takes) {
            case Takes::special:
                return special(key, item, path, where);
            case Takes::text: {
                const auto text = text_of(item);
                if (!text) return wrong("a text in quotes");
                *std::get<std::string*>(key.slot(converter_, where)) = *text;
                return;
            }
            case Takes::word: {
                const auto text = text_of(item);
                if (!text) return wrong("one of " + listed(split_words(key.words)));
                if (!one_of(*text, key.words, item, path, name)) return;
                const Slot slot = key.slot(converter_, where);
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
                *std::get<bool*>(key.slot(converter_, where)) = item.flag;
                return;
            case Takes::whole: {
                if (item.kind != Item::Kind::integer) return wrong("a whole number without quotes");
                if (!within(item.number, key, item, path)) return;
                *std::get<int*>(key.slot(converter_, where)) = static_cast<int>(item.number);
                return;
            }
            case Takes::numbers: {
                const bool good = item.kind == Item::Kind::array &&
                                  std::all_of(item.items.begin(), item.items.end(), [](const Item& each) {
                                      return each.kind == Item::Kind::integer || each.kind == Item::Kind::number;
                                  });
                if (!good || item.items.size() != 3)
                    return fault(item.place, dotted(path, name),
                                 name_in(path, key) + " is a list of three numbers, k, alpha and beta",
                                 "[k, alpha, beta]");
                std::vector<double> numbers;
                for (const Item& each : item.items) {
                    if (!within(each.number, key, each, path)) return;
                    numbers.push_back(each.number);
                }
                *std::get<std::vector<double>*>(key.slot(converter_, where)) = std::move(numbers);
                return;
            }
            case Takes::quantity: {
                const auto number = quantity(key, item, path, false);
                if (!number || !within(*number, key, item, path)) return;
                const Slot slot = key.slot(converter_, where);
                if (auto* const* plain = std::get_if<double*>(&slot))
                    **plain = *number;
                else
                    *std::get<std::optional<double>*>(slot) = *number;
                return;
            }
            case Takes::range: {
                const auto range = range_of(key, item, path);
                if (!range) return;
                const Slot slot = key.slot(converter_, where);
                if (auto* const* plain = std::get_if<Range*>(&slot))
                    **plain = *range;
                else
                    *std::get<std::optional<Range>*>(slot) = *range;
                return;
            }
        }
    }

    std::optional<double> quantity(const Key& key, const Item& item, const std::string& path, bool in_list) {
        const std::string name(key.key);
        const bool pure = key.unit == Unit::none || key.unit == Unit::fraction;
        if (pure && (item.kind == Item::Kind::integer || item.kind == Item::Kind::number)) {
            if (std::isfinite(item.number)) return item.number;
            fault(item.place, dotted(path, name), name_in(path, key) + " is not a finite number",
                  std::string(expected_text(key.unit)));
            return std::nullopt;
        }
        const auto text = text_of(item);
        if (!text) {
            const bool number = item.kind == Item::Kind::integer || item.kind == Item::Kind::number;
            if (number)
                fault(item.place, dotted(path, name), name_in(path, key) + " is a number without a unit",
                      std::string(expected_text(key.unit)) + ", in quotes");
            else
                fault(item.place, dotted(path, name),
                      name_in(path, key) + " is " + std::string(expected_text(key.unit)) +
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

    std::optional<Range> range_of(const Key& key, const Item& item, const std::string& path) {
        const std::string name(key.key);
        const bool pure = key.unit == Unit::none || key.unit == Unit::fraction;
        Range range;
        if (item.kind == Item::Kind::array) {
            if (item.items.size() != 2) {
                fault(item.place, dotted(path, name),
                      name_in(path, key) + " is a list of " + std::to_string(item.items.size()) +
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
                      name_in(path, key) + ": the lowest, " + format_quantity(range.lowest, key.unit) +
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
            fault(item.place, dotted(path, name), name_in(path, key) + " needs both ends of its range",
                  "[lowest, highest]");
            return std::nullopt;
        }
        if (!within(range.lowest, key, item, path) || !within(range.highest, key, item, path)) return std::nullopt;
        return range;
    }

    bool within(double value, const Key& key, const Item& item, const std::string& path) {
        const bool low = key.above ? value > key.lowest : value >= key.lowest;
        if (low && value <= key.highest) return true;
        const auto shown = [&](double v) {
            return key.takes == Takes::whole || key.unit == Unit::none ? format_quantity(v, Unit::none, 6)
                                                                       : format_quantity(v, key.unit, 6);
        };
        const std::string bounds = key.above ? "more than " + shown(key.lowest) + " and at most " + shown(key.highest)
                                             : "between " + shown(key.lowest) + " and " + shown(key.highest);
        fault(item.place, dotted(path, std::string(key.key)),
              name_in(path, key) + " is " + shown(value) + "; it must be " + bounds, bounds);
        return false;
    }

    // ---- keys with a reading of their own
    void special(const Key& key, const Item& item, const std::string& path, const Where& where) {
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
                fault(item.place, name, "`format` is " + shown_value(item) + "; this program reads format 1",
                      "format = 1");
        } else if (name == "fitted") {
            fitted(item, path, where.seat);
        } else if (name == "overshoot") {
            overshoot(item, path, where.seat);
        }
    }

    static std::string shown_value(const Item& item) {
        if (item.kind == Item::Kind::text) return "\"" + item.text + "\"";
        if (item.kind == Item::Kind::integer) return format_quantity(item.number, Unit::none, 6);
        return std::string(kind_name(item.kind));
    }

    void read_topology() {
        const Item* item = root_.find("topology");
        if (!item) return;
        const auto text = text_of(*item);
        if (!text)
            return fault(item->place, "topology",
                         "`topology` is a text in quotes, not " + std::string(kind_name(item->kind)),
                         "one of " + topology_names());
        converter_.topology = find_topology(*text);
        if (converter_.topology) return;
        std::vector<std::string> names;
        for (const Topology& topology : topologies()) names.emplace_back(topology.name);
        const std::string near = nearest_word(*text, names);
        fault(item->place, "topology",
              "unknown topology \"" + *text + "\"" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"),
              "one of " + listed(names));
    }

    void fitted(const Item& item, const std::string& path, Seat seat) {
        const std::string field = dotted(path, "fitted");
        auto& list = converter_.seats[seat].fitted;
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
                         named(path, "fitted") + " is an empty list; leave the key out where nothing is fitted",
                         expected);
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
                              "`lot` in " + named(path, "fitted") + " is a lot label or a part name in quotes",
                              expected);
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

    void overshoot(const Item& item, const std::string& path, Seat seat) {
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
        converter_.seats[seat].overshoot = SeatConfig::Overshoot{*voltage, current};
    }

    // ---- what keys say together
    [[nodiscard]] const Item* at(std::initializer_list<std::string_view> path) const {
        const Item* item = &root_;
        for (const auto key : path) {
            item = item->find(key);
            if (!item) return nullptr;
        }
        return item;
    }

    void read_typical() {
        if (!converter_.operating.typical) return;
        At& typical = *converter_.operating.typical;
        for (const OperatingInfo& each : kOperating) {
            const Range range = converter_.operating.get(each.quantity);
            const Item* given = at({"operating", "typical", each.key});
            if (!given) {
                typical.set(each.quantity, range.middle());
                continue;
            }
            const double value = typical.get(each.quantity);
            const bool both_read =
                value != 0 && at({"operating", each.key}) && (range.lowest != 0 || range.highest != 0);
            if (both_read && !(value >= range.lowest && value <= range.highest))
                fault(given->place, "operating.typical." + std::string(each.key),
                      "the typical " + std::string(each.meaning) + ", " + format_quantity(value, each.unit) +
                          ", lies outside the operating range, " + format_quantity(range.lowest, each.unit) + " to " +
                          format_quantity(range.highest, each.unit));
        }
    }

    // A second winding is as the first in what is not said of it, unless both are one transformer.
    void share_windings() {
        auto& winding = converter_.winding;
        if (!winding.secondary || !winding.primary || !converter_.topology || converter_.topology->transformer) return;
        if (!at({"winding", "secondary", "inductance"})) winding.secondary->inductance = winding.primary->inductance;
        if (!at({"winding", "secondary", "resistance"})) winding.secondary->resistance = winding.primary->resistance;
    }

    void cross_check() {
        const auto& winding = converter_.winding;
        const Topology* topology = converter_.topology;
        const Item* coupling = at({"winding", "coupling"});
        const Item* leakage = at({"winding", "leakage"});
        if (coupling && leakage)
            fault(leakage->place, "winding.leakage",
                  "`coupling` and `leakage` in [winding] say the same thing in two ways; give one of them");
        if (topology && !has_secondary(*topology)) {
            const std::string one = "a " + std::string(topology->name) + " has one winding";
            if (leakage) fault(leakage->place, "winding.leakage", one + ": it has no leakage to another");
            if (coupling && winding.coupling && winding.coupling->highest > 0)
                fault(coupling->place, "winding.coupling", one + ": it has no coupling to another");
            if (const Item* second = at({"winding", "secondary"}))
                fault(second->place, "winding.secondary", one + ": leave [winding.secondary] out");
        }
        const bool transformer = topology && topology->transformer;
        if (whole_)
            for (const char* name : {"primary", "secondary"}) {
                const Item* item = at({"winding", name});
                const bool inherits =
                    std::string_view(name) == "secondary" && (transformer || at({"winding", "primary"}));
                if (item && item->kind == Item::Kind::table && !item->find("inductance") && !inherits)
                    fault(item->place, "winding." + std::string(name) + ".inductance",
                          "[winding." + std::string(name) + "] gives no `inductance`",
                          std::string(expected_text(Unit::henry)));
            }
        const Item* surge = at({"source", "surge"});
        if (surge && converter_.source && converter_.source->surge &&
            !(*converter_.source->surge >= converter_.operating.input_voltage.highest))
            fault(surge->place, "source.surge",
                  "the surge, " + format_quantity(*converter_.source->surge, Unit::volt) +
                      ", is below the highest input voltage, " +
                      format_quantity(converter_.operating.input_voltage.highest, Unit::volt));
        const Item* current = at({"operating", "output_current"});
        if (current && current->kind != Item::Kind::table && converter_.operating.output_current.highest == 0 &&
            whole_ && faults_.empty())
            fault(current->place, "operating.output_current",
                  "`output_current` in [operating] is 0 A throughout; its highest must be more",
                  std::string(expected_text(Unit::ampere)));
        for (auto& [seat, config] : converter_.seats) seat_check(seat, config);
    }

    void seat_check(Seat seat, SeatConfig& config) {
        const std::string name(to_string(seat));
        const std::string path = "seat." + name;
        const Item* sink = at({"seat", name, "heatsink"});
        if (sink && !config.heatsink.empty() && !at({"heatsink", config.heatsink})) {
            std::vector<std::string> names;
            if (const Item* all = root_.find("heatsink"))
                for (const Member& member : all->members) names.push_back(member.key);
            const std::string near = nearest_word(config.heatsink, names);
            if (whole_)
                fault(sink->place, path + ".heatsink",
                      named(path, "heatsink") + " names \"" + config.heatsink + "\", and there is no [heatsink." +
                          key_text(config.heatsink) + "]" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"),
                      names.empty() ? "a table [heatsink." + key_text(config.heatsink) + "] with its resistance"
                                    : "one of " + listed(names));
        }
        const Item* count = at({"seat", name, "count"});
        const Item* list = at({"seat", name, "fitted"});
        if (!count) return;
        if (list && list->kind == Item::Kind::array)
            fault(count->place, path + ".count",
                  named(path, "count") + " stands beside a list of lots; give each entry of `fitted` its own count");
        else if (!config.fitted.empty())
            config.fitted.front().count = config.count;
    }

    const Item& root_;
    bool whole_;
    std::vector<Fault>& faults_;
    Converter converter_;
};

}  // namespace

Item* find_member(Item& table, const std::string& key, std::optional<Symbol> symbol, Family family) {
    for (Member& member : table.members)
        if (member.key == key || (symbol && find_symbol(member.key, family) == symbol)) return &member.value;
    return nullptr;
}

Converter converter_from(const Item& root, const std::string& file, bool whole, std::vector<Fault>& faults) {
    return Filler(root, file, whole, faults).run();
}

}  // namespace binwright
