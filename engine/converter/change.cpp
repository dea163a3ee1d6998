// SPDX-License-Identifier: GPL-3.0-or-later
// One value changed: among the values that were read (KEY=VALUE beside a file), or in the text itself to the byte.
#include <algorithm>
#include <utility>

#include "engine/converter/item.hpp"
#include "engine/converter/keys.hpp"
#include "engine/converter/read.hpp"

namespace binwright {
namespace {

int characters(std::string_view text) {
    return static_cast<int>(
        std::count_if(text.begin(), text.end(), [](char c) { return (static_cast<unsigned char>(c) & 0xC0) != 0x80; }));
}

std::vector<std::string> heatsink_names(const Item& root) {
    std::vector<std::string> names;
    if (const Item* all = root.find("heatsink"))
        for (const Member& member : all->members) names.push_back(member.key);
    return names;
}

Family family_in(const KeyPath& path) {
    const auto seat = path.parts.size() > 1 ? find_seat(path.parts[1]) : std::nullopt;
    return seat ? family_of(*seat) : Family::switch_;
}

// The table that holds the key; made where it is missing, when `make` is given. Null when something else stands there.
Item* parent_of(Item& root, const KeyPath& path, const Place* make) {
    Item* table = &root;
    for (std::size_t k = 0; k + 1 < path.parts.size(); ++k) {
        Item* next = table->find(path.parts[k]);
        if (!next) {
            if (!make) return nullptr;
            Item made;
            made.place = *make;
            table->members.push_back({path.parts[k], *make, std::move(made)});
            next = &table->members.back().value;
        }
        if (next->kind != Item::Kind::table) return nullptr;
        table = next;
    }
    return table;
}

void put(Item& root, const KeyPath& path, Item value) {
    const Place place = value.place;
    Item* table = parent_of(root, path, &place);
    if (!table) return;
    if (Item* present = find_member(*table, path.parts.back(), path.symbol, family_in(path)))
        *present = std::move(value);
    else
        table->members.push_back({path.parts.back(), place, std::move(value)});
}

std::string trimmed(std::string_view text) {
    const auto first = text.find_first_not_of(" \t");
    if (first == std::string_view::npos) return {};
    return std::string(text.substr(first, text.find_last_not_of(" \t") - first + 1));
}

// A value as the file is to say it: quotes where the key takes a text, a list where it takes a range.
std::string rendered(const KeyPath& path, std::string_view value) {
    const Item item = typed_item(value, {"", 0, 1});
    const std::string typed = trimmed(value);
    const bool numeric = item.kind == Item::Kind::integer || item.kind == Item::Kind::number;
    if (item.kind == Item::Kind::array || item.kind == Item::Kind::table) return typed;
    const std::string text = item.kind == Item::Kind::text ? item.text : typed;
    if (!path.key) return quoted(text);
    const bool pure = path.key->unit == Unit::none || path.key->unit == Unit::fraction;
    switch (path.key->takes) {
        case Takes::whole:
            return numeric ? typed : quoted(text);
        case Takes::flag:
            return item.kind == Item::Kind::flag ? typed : quoted(text);
        case Takes::quantity:
            return numeric && pure ? typed : quoted(text);
        case Takes::special:
            return path.key->key == "format" && numeric ? typed : quoted(text);
        case Takes::range: {
            if (numeric && pure) return typed;
            const auto dots = text.find("..");
            if (dots == std::string::npos) return quoted(text);
            const std::string lowest = trimmed(text.substr(0, dots)), highest = trimmed(text.substr(dots + 2));
            try {
                (void)parse_quantity(lowest, path.key->unit, pure);
                (void)parse_quantity(highest, path.key->unit, pure);
            } catch (const InputError&) {
                return quoted(text);  // "10.5 .. 15 V": the ends cannot stand alone
            }
            return "[" + quoted(lowest) + ", " + quoted(highest) + "]";
        }
        case Takes::numbers:
        case Takes::text:
        case Takes::word:
            return quoted(text);
    }
    return quoted(text);
}

// ---- the text in lines and sections
struct Region {
    std::size_t begin, end;
};
struct Header {
    std::vector<std::string> path;
    bool list;               ///< [[…]]
    std::size_t begin, end;  ///< its line, with the line's end
};

std::size_t line_begin(std::string_view text, std::size_t at) {
    const auto found = at == 0 ? std::string_view::npos : text.rfind('\n', at - 1);
    return found == std::string_view::npos ? 0 : found + 1;
}
std::size_t line_end(std::string_view text, std::size_t at) {
    const auto found = text.find('\n', at);
    return found == std::string_view::npos ? text.size() : found + 1;
}

void collect_values(const Item& item, std::string_view text, std::vector<Region>& regions) {
    for (const Member& member : item.members) {
        const Item& value = member.value;
        const auto begin = line_begin(text, value.begin);
        const bool headed = text.substr(begin, value.begin - begin).find_first_not_of(" \t") == std::string_view::npos;
        if (value.kind == Item::Kind::table && !value.in_braces) {
            collect_values(value, text, regions);
        } else if (value.kind == Item::Kind::array && headed) {
            for (const Item& each : value.items) collect_values(each, text, regions);
        } else {
            regions.push_back({value.begin, value.end});
        }
    }
}

std::vector<Header> find_headers(std::string_view text, const std::vector<Region>& values) {
    std::vector<Header> headers;
    for (std::size_t at = text.starts_with("\xEF\xBB\xBF") ? 3 : 0; at < text.size(); at = line_end(text, at)) {
        const auto first = text.find_first_not_of(" \t", at);
        const bool inside = std::any_of(values.begin(), values.end(),
                                        [first](const Region& r) { return first >= r.begin && first < r.end; });
        if (first == std::string_view::npos || inside || text[first] != '[') continue;
        const bool list = text.substr(first, 2) == "[[";
        std::string name;
        char quote = 0;
        for (std::size_t k = first + (list ? 2 : 1); k < text.size() && (quote || text[k] != ']'); ++k) {
            const char c = text[k];
            if (quote ? c == quote : (c == '"' || c == '\'')) quote = quote ? 0 : c;
            if (quote || (c != ' ' && c != '\t')) name += c;
        }
        headers.push_back({split_key(name), list, at, line_end(text, at)});
    }
    return headers;
}

// Where a line can be added to a section: after the last value between its header and the next one.
std::size_t section_end(std::string_view text, std::size_t from, std::size_t to, const std::vector<Region>& values) {
    std::size_t at = from;
    for (const Region& region : values)
        if (region.begin >= from && region.begin < to)
            at = std::max(at, line_end(text, std::max(region.begin, region.end - 1)));
    return at;
}

std::string inserted(std::string_view text, std::size_t at, std::string_view what) {
    const std::string eol = text.find("\r\n") != std::string_view::npos ? "\r\n" : "\n";
    std::string out(text.substr(0, at));
    if (!out.empty() && out.back() != '\n' && out != "\xEF\xBB\xBF") out += eol;
    for (const char c : what)
        if (c == '\n')
            out += eol;
        else
            out += c;
    out += text.substr(at);
    return out;
}

std::string join(const std::vector<std::string>& parts, std::size_t from, std::size_t to) {
    std::string out;
    for (std::size_t k = from; k < to; ++k) out += (k == from ? "" : ".") + key_text(parts[k]);
    return out;
}

// The ways in which a missing key can be added, the usual one first; which of them is right depends on how its table
// was written, so each is tried by reading the result.
std::vector<std::string> additions(std::string_view text, const Item& root, const KeyPath& path,
                                   const std::string& value) {
    std::vector<std::string> ways;
    std::vector<Region> values;
    collect_values(root, text, values);
    const auto headers = find_headers(text, values);
    const auto& parts = path.parts;
    const std::size_t depth = parts.size() - 1;
    const std::size_t root_end = headers.empty() ? text.size() : headers.front().begin;
    const auto section = [&](std::size_t k) {
        const std::size_t next = k + 1 < headers.size() ? headers[k + 1].begin : text.size();
        return section_end(text, headers[k].end, next, values);
    };
    const auto in_section = [&](std::size_t count) {  // under the header of the first `count` parts
        const std::string line = join(parts, count, parts.size()) + " = " + value + "\n";
        if (count == 0) {
            const std::size_t at = section_end(text, 0, root_end, values);
            ways.push_back(inserted(text, at == 0 ? root_end : at, line));
            return;
        }
        for (std::size_t k = 0; k < headers.size(); ++k)
            if (!headers[k].list && headers[k].path.size() == count &&
                std::equal(headers[k].path.begin(), headers[k].path.end(), parts.begin()))
                ways.push_back(inserted(text, section(k), line));
    };

    in_section(depth);
    const Item* table = &root;
    for (std::size_t k = 0; k < depth && table; ++k) {
        table = table->find(parts[k]);
        if (table && table->in_braces && table->end > table->begin) {
            const std::size_t close = table->end - 1;
            std::string out(text.substr(0, close));
            while (!out.empty() && (out.back() == ' ' || out.back() == '\t')) out.pop_back();
            const std::string rest(text.substr(out.size()));
            out += (table->members.empty() ? " " : ", ") + join(parts, k + 1, parts.size()) + " = " + value;
            ways.push_back(out + (table->members.empty() ? " }" + rest.substr(rest.find('}') + 1) : rest));
        }
    }
    if (depth > 0) {
        const std::string block = "\n[" + join(parts, 0, depth) + "]\n" + key_text(parts.back()) + " = " + value + "\n";
        for (std::size_t k = headers.size(); k-- > 0;)
            if (!headers[k].path.empty() && headers[k].path.front() == parts.front()) {
                ways.push_back(inserted(text, section(k), block));
                break;
            }
        ways.push_back(inserted(text, text.size(), block));
    }
    for (std::size_t count = depth; count-- > 0;) in_section(count);
    return ways;
}

}  // namespace

void apply_change(Item& root, const std::string& change, std::vector<Fault>& faults) {
    const auto equals = change.find('=');
    if (equals == std::string::npos) {
        faults.push_back({{"--with", 0, 1},
                          change,
                          "`" + change + "` has no `=` between a key and its value",
                          "KEY=VALUE, such as output_voltage=18 V"});
        return;
    }
    const std::string key = trimmed(std::string_view(change).substr(0, equals));
    KeyPath path;
    try {
        path = find_key(key, {"--with", 0, 1}, heatsink_names(root));
    } catch (const InputError& error) {
        faults.insert(faults.end(), error.faults.begin(), error.faults.end());
        return;
    }
    const std::string value = trimmed(std::string_view(change).substr(equals + 1));
    const auto first = std::min(change.find_first_not_of(" \t", equals + 1), change.size());
    const Place place{"--with", 0, characters(std::string_view(change).substr(0, first)) + 1};
    if (value.empty()) {
        Item* table = parent_of(root, path, nullptr);
        const Item* present = table ? find_member(*table, path.parts.back(), path.symbol, family_in(path)) : nullptr;
        if (present)
            std::erase_if(table->members, [present](const Member& member) { return &member.value == present; });
        return;
    }
    if (!parent_of(root, path, &place)) return;  // something other than a table stands there: said when it is read
    put(root, path, typed_item(value, place));
}

std::string change_converter_text(std::string_view text, const std::string& file, std::string_view key,
                                  std::string_view value) {
    std::vector<Fault> faults;
    const ItemText items = read_items(text, file, faults);
    if (!faults.empty()) throw InputError(faults);
    const KeyPath path = find_key(key, {file, 0, 0}, heatsink_names(items.root));
    if (trimmed(value).empty())
        throw InputError(Fault{{file, 0, 0},
                               join(path.parts, 0, path.parts.size()),
                               "`" + std::string(key) + "` is given no value",
                               "a value"});
    const std::string written = rendered(path, value);

    // What the result must say: the same as before, but for this value.
    Item wanted = items.root;
    Item spoken = typed_item(written, {file, 0, 1});
    spoken.typed.clear();
    put(wanted, path, spoken);

    Item before = items.root;
    Item* table = parent_of(before, path, nullptr);
    const Item* present = table ? find_member(*table, path.parts.back(), path.symbol, family_in(path)) : nullptr;
    std::vector<std::string> ways;
    if (present && present->kind != Item::Kind::table) {
        std::string out(text);
        ways.push_back(out.replace(present->begin, present->end - present->begin, written));
    } else if (!present) {
        ways = additions(text, items.root, path, written);
    }
    for (std::string& way : ways) {
        std::vector<Fault> ignored;
        const ItemText now = read_items(way, file, ignored);
        if (!ignored.empty() || !same_value(now.root, wanted)) continue;
        (void)read_converter(way, file);  // throws what is wrong with it
        return std::move(way);
    }
    throw InputError(Fault{{file, 0, 0},
                           join(path.parts, 0, path.parts.size()),
                           "`" + std::string(key) + "` cannot be changed in this file as it is written",
                           "a table of its own for this key"});
}

}  // namespace binwright
