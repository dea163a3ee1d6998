// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/rule/reading.hpp"

#include <algorithm>
#include <cmath>

namespace binwright {

std::string ticked(std::string_view text) { return "`" + std::string(text) + "`"; }

std::string listed(const std::vector<std::string>& words) {
    std::string out;
    for (std::size_t k = 0; k < words.size(); ++k) out += (k == 0 ? "" : k + 1 == words.size() ? " or " : ", ") + words[k];
    return out;
}

void Reading::fault(const Item& item, const std::string& field, std::string message, std::string expected) {
    faults.push_back({item.place, field, std::move(message), std::move(expected)});
}

void Reading::unknown(const Member& member, const std::string& path, const std::vector<std::string>& known) {
    const std::string near = nearest_word(member.key, known);
    std::string message = "unknown key " + ticked(member.key) + (path.empty() ? "" : " in [" + path + "]");
    if (!near.empty()) {
        message += "; did you mean " + ticked(near) + "?";
        misspelt.insert(path.empty() ? near : path + "." + near);
    }
    faults.push_back({member.place, path.empty() ? member.key : path + "." + member.key, std::move(message), "one of " + listed(known)});
}

std::optional<std::string> Reading::text_of(const Item& item, const std::string& field) {
    if (item.kind != Item::Kind::text) {
        fault(item, field, ticked(field) + " is a text in quotes, not " + std::string(kind_name(item.kind)));
        return std::nullopt;
    }
    if (item.text.find_first_not_of(" \t\n") == std::string::npos) {
        fault(item, field, ticked(field) + " is empty");
        return std::nullopt;
    }
    return item.text;
}

std::vector<std::string> Reading::texts_of(const Item& item, const std::string& field) {
    std::vector<std::string> out;
    if (item.kind == Item::Kind::array) {
        if (item.items.empty()) fault(item, field, ticked(field) + " is empty");
        for (const Item& one : item.items)
            if (auto text = text_of(one, field)) out.push_back(std::move(*text));
    } else if (auto text = text_of(item, field)) {
        out.push_back(std::move(*text));
    }
    return out;
}

std::optional<double> Reading::quantity(const Item& item, const std::string& field, Unit unit) {
    const bool pure = unit == Unit::none || unit == Unit::fraction;
    if (pure && (item.kind == Item::Kind::integer || item.kind == Item::Kind::number)) {
        if (std::isfinite(item.number)) return item.number;
        fault(item, field, ticked(field) + " is not a number", std::string(expected_text(unit)));
        return std::nullopt;
    }
    if (item.kind != Item::Kind::text) {
        fault(item, field, ticked(field) + (pure ? " is a number, not " : " is a text in quotes with its unit, not ") + std::string(kind_name(item.kind)),
              std::string(expected_text(unit)));
        return std::nullopt;
    }
    try {
        return parse_quantity(item.text, unit, pure);
    } catch (const InputError& error) {
        for (Fault one : error.faults) {
            one.place = {item.place.file, item.place.line, item.text_column ? *item.text_column + std::max(0, one.place.column - 1) : item.place.column};
            one.field = field;
            faults.push_back(std::move(one));
        }
        return std::nullopt;
    }
}

void Reading::by_level(const Item& item, const std::string& field, const std::vector<std::string>& wanted, const std::function<void(const Item&, bool)>& read) {
    if (item.kind != Item::Kind::table) return read(item, true);
    if (levels.empty()) return fault(item, field, ticked(field) + " tells levels apart, and the rulebook has none", "levels = [\"I\", \"II\", \"III\"] at its top");
    for (const Member& member : item.members) {
        if (std::find(levels.begin(), levels.end(), member.key) == levels.end())
            faults.push_back({member.place, field, "there is no level " + ticked(member.key), "one of " + listed(levels)});
        else if (std::find(wanted.begin(), wanted.end(), member.key) == wanted.end())
            faults.push_back({member.place, field, "the rule does not stand at level " + ticked(member.key), "one of " + listed(wanted)});
        else
            read(member.value, member.key == level);
    }
    for (const std::string& one : wanted)
        if (!item.find(one)) fault(item, field, ticked(field) + " says nothing of level " + ticked(one), one + " = …");
}

}  // namespace binwright
