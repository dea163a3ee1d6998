// SPDX-License-Identifier: GPL-3.0-or-later
// The tables of a converter file against the table of keys, and what keys say together.
#include "engine/converter/read.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include "engine/converter/values.hpp"

namespace binwright {
namespace {

class Filler {
  public:
    Filler(const Item& root, const std::string& file, bool whole, bool changed, std::vector<Fault>& faults)
        : root_(root), whole_(whole), changed_(changed), values_{{}, faults} {
        values_.converter.file = file;
    }

    Converter run() {
        read_topology();
        table(root_, "", "", Where{}, {values_.converter.file, 0, 0});
        read_typical();
        share_windings();
        cross_check();
        return std::move(values_.converter);
    }

  private:
    void fault(const Place& place, const std::string& field, std::string message, std::string expected = "") {
        values_.fault(place, field, std::move(message), std::move(expected));
    }

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
                values_.value(*key, member.value, path, where);
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
                if (misspelt_.contains(missing)) continue;  // said already
                if (path.empty())
                    fault(place, missing, "the file names no " + quote(key.key), takes_text(key));
                else
                    fault(place, missing, "[" + path + "] gives no " + quote(key.key), takes_text(key));
            }
        if (pattern.empty() && !item.find("operating") && !misspelt_.contains("operating"))
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
            if (values_.converter.topology && !has_seat(*values_.converter.topology, *seat)) {
                std::vector<std::string> seats;
                for (const Seat other : kSeats)
                    if (has_seat(*values_.converter.topology, other)) seats.emplace_back(to_string(other));
                return fault(member.place, name,
                             "a " + std::string(values_.converter.topology->name) + " has no seat " +
                                 quote(member.key) + "; its seats are " + listed(seats, "and"));
            }
            values_.converter.seats[*seat];
        }
        if (pattern == "heatsink.*") where.name = member.key;
        if (pattern == "seat.*.as_fitted") return as_fitted(member, name, where);
        if (member.value.kind != Item::Kind::table)
            return fault(member.value.place, name,
                         quote(name) + " is a table, not " + std::string(kind_name(member.value.kind)),
                         "[" + name + "] with its keys below");
        if (pattern == "seat.*.element") values_.converter.seats[where.seat].element.emplace();
        if (pattern == "source") values_.converter.source.emplace();
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
            values_.converter.across.emplace_back();
            table(item, "across[]", "across", Where{{}, "", values_.converter.across.size() - 1}, item.place);
            if (whole_ && values_.converter.across.back().figures.empty() && only_known(item))
                fault(item.place, "across", "[across] gives no rating of the part", "\"U_R\" = \"25 V\"");
        }
    }
    static bool only_known(const Item& item) {
        return std::all_of(item.members.begin(), item.members.end(),
                           [](const Member& member) { return known("across[]", member.key, kAnyFamily); });
    }

    // "switch" where the key is one of a switch's and stands in a seat of another family; else empty.
    static std::string elsewhere(const std::string& pattern, const std::string& name, unsigned families) {
        if (!pattern.starts_with("seat.*")) return {};
        std::vector<std::string> owners;
        for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor}) {
            const bool symbol = pattern == "seat.*.figures" && find_symbol(name, family);
            if (!(families & bit(family)) && (symbol || known(pattern, name, bit(family))))
                owners.emplace_back(to_string(family));
        }
        return listed(owners);
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
        if (const auto owner = elsewhere(pattern, member.key, families); !owner.empty())
            return fault(member.place, dotted(path, member.key), named(path, member.key) + " belongs to a " + owner,
                         "one of " + listed(words));
        const std::string near = nearest_word(member.key, words);
        if (!near.empty()) misspelt_.insert(dotted(path, near));
        const bool is_table = member.value.kind == Item::Kind::table && !member.value.in_braces;
        const std::string full = dotted(path, member.key);
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
        auto& figures =
            in_across ? values_.converter.across[where.index].figures : values_.converter.seats[where.seat].figures;
        auto& texts = in_across ? values_.converter.across[where.index].attributes
                                : values_.converter.seats[where.seat].attributes;
        return values_.figure_or_attribute(member, path, family, Known::told, figures, texts, seen);
    }

    void check_figures(const Item& item, const std::string& path, Seat seat) {
        const SeatConfig& config = values_.converter.seats[seat];
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
                            values_.figure_or_attribute(figure, below, lot.part.family, *known_as, lot.part.figures,
                                                        lot.part.attributes, here);
                } else if (!values_.figure_or_attribute(each, path, lot.part.family, Known::told, lot.part.figures,
                                                        lot.part.attributes, seen)) {
                    fault(each.place, dotted(path, each.key), "unknown key or value: " + named(path, each.key),
                          "lot, part, origin (new, surplus or pulled), count, saved, suspect, an attribute, a figure, "
                          "or a "
                          "table measured, datasheet, marked, told or kind");
                }
            }
            values_.converter.seats[where.seat].as_fitted.push_back(std::move(lot));
        };
        if (member.value.kind == Item::Kind::array)
            for (const Item& item : member.value.items) one(item);
        else
            one(member.value);
    }

    void read_topology() {
        const Item* item = root_.find("topology");
        if (!item) return;
        const auto text = text_of(*item);
        if (!text)
            return fault(item->place, "topology",
                         "`topology` is a text in quotes, not " + std::string(kind_name(item->kind)),
                         "one of " + topology_names());
        values_.converter.topology = find_topology(*text);
        if (values_.converter.topology) return;
        std::vector<std::string> names;
        for (const Topology& topology : topologies()) names.emplace_back(topology.name);
        const std::string near = nearest_word(*text, names);
        fault(item->place, "topology",
              "unknown topology \"" + *text + "\"" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"),
              "one of " + listed(names));
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
        if (!values_.converter.operating.typical) return;
        At& typical = *values_.converter.operating.typical;
        for (const OperatingInfo& each : kOperating) {
            const Range range = values_.converter.operating.get(each.quantity);
            const Item* given = at({"operating", "typical", each.key});
            if (!given) {
                typical.set(each.quantity, range.middle());
                continue;
            }
            const double value = typical.get(each.quantity);
            const bool both_read =
                value != 0 && at({"operating", each.key}) && (range.lowest != 0 || range.highest != 0);
            if (both_read && changed_ && !(value >= range.lowest && value <= range.highest)) {
                typical.set(each.quantity, std::clamp(value, range.lowest, range.highest));  // a trial leaves what is usual behind
                continue;
            }
            if (both_read && !(value >= range.lowest && value <= range.highest))
                fault(given->place, "operating.typical." + std::string(each.key),
                      "the typical " + std::string(each.meaning) + ", " + format_quantity(value, each.unit) +
                          ", lies outside the operating range, " + format_quantity(range.lowest, each.unit) + " to " +
                          format_quantity(range.highest, each.unit));
        }
    }

    // A second winding is as the first in what is not said of it, unless both are one transformer.
    void share_windings() {
        auto& winding = values_.converter.winding;
        if (!winding.secondary || !winding.primary || !values_.converter.topology ||
            values_.converter.topology->transformer)
            return;
        if (!at({"winding", "secondary", "inductance"})) winding.secondary->inductance = winding.primary->inductance;
        if (!at({"winding", "secondary", "resistance"})) winding.secondary->resistance = winding.primary->resistance;
    }

    void cross_check() {
        const auto& winding = values_.converter.winding;
        const Topology* topology = values_.converter.topology;
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
        if (surge && values_.converter.source && values_.converter.source->surge &&
            !(*values_.converter.source->surge >= values_.converter.operating.input_voltage.highest))
            fault(surge->place, "source.surge",
                  "the surge, " + format_quantity(*values_.converter.source->surge, Unit::volt) +
                      ", is below the highest input voltage, " +
                      format_quantity(values_.converter.operating.input_voltage.highest, Unit::volt));
        const Item* current = at({"operating", "output_current"});
        if (current && current->kind != Item::Kind::table && values_.converter.operating.output_current.highest == 0 &&
            whole_ && values_.faults.empty())
            fault(current->place, "operating.output_current",
                  "`output_current` in [operating] is 0 A throughout; its highest must be more",
                  std::string(expected_text(Unit::ampere)));
        for (auto& [seat, config] : values_.converter.seats) seat_check(seat, config);
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
    bool changed_;  ///< by a trial, on top of what the file says
    Values values_;
    std::set<std::string> misspelt_;  // keys that an unknown one was probably meant to be
};

}  // namespace

Item* find_member(Item& table, const std::string& key, std::optional<Symbol> symbol, Family family) {
    for (Member& member : table.members)
        if (member.key == key || (symbol && find_symbol(member.key, family) == symbol)) return &member.value;
    return nullptr;
}

Converter converter_from(const Item& root, const std::string& file, bool whole, bool changed, std::vector<Fault>& faults) {
    return Filler(root, file, whole, changed, faults).run();
}

}  // namespace binwright
