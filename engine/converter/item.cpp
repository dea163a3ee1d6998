// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/converter/item.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cctype>
#include <utility>

#include "engine/toml.hpp"

namespace binwright {
namespace {

constexpr std::string_view kByteOrderMark = "\xEF\xBB\xBF";
constexpr std::size_t kMostBytes = 1 << 20;  // a converter file takes a few thousand
constexpr int kMostDots = 100;               // in one line outside quotes: no key of a converter is as deep as this
constexpr int kMostSyntaxFaults = 50;

class Reader {
  public:
    Reader(std::string_view text, const std::string& file) : text_(text), file_(file) {
        starts_.push_back(0);
        for (std::size_t k = 0; k < text.size(); ++k)
            if (text[k] == '\n') starts_.push_back(k + 1);
    }

    [[nodiscard]] std::size_t offset(toml::source_position at) const {
        if (at.line == 0 || at.line > starts_.size()) return text_.size();
        std::size_t k = starts_[at.line - 1];
        for (auto left = at.column; left > 1 && k < text_.size(); --left) {
            ++k;
            while (k < text_.size() && (static_cast<unsigned char>(text_[k]) & 0xC0) == 0x80) ++k;
        }
        return k;
    }

    [[nodiscard]] Place place(toml::source_position at) const {
        return {file_, static_cast<int>(at.line), static_cast<int>(at.column)};
    }

    [[nodiscard]] Item item(const toml::node& node) const {
        Item out;
        const auto& region = node.source();
        out.place = place(region.begin);
        out.begin = offset(region.begin);
        out.end = std::max(out.begin, offset(region.end));
        const std::string_view slice = text_.substr(out.begin, out.end - out.begin);
        if (const auto* table = node.as_table()) {
            out.kind = Item::Kind::table;
            out.in_braces = table->is_inline() && !slice.empty() && slice.front() == '{';
            for (const auto& [key, value] : *table)
                out.members.push_back({std::string(key.str()), place(key.source().begin), item(value)});
            std::stable_sort(out.members.begin(), out.members.end(), [](const Member& a, const Member& b) {
                return std::pair(a.place.line, a.place.column) < std::pair(b.place.line, b.place.column);
            });
        } else if (const auto* array = node.as_array()) {
            out.kind = Item::Kind::array;
            for (const auto& value : *array) out.items.push_back(item(value));
        } else if (const auto* text = node.as_string()) {
            out.kind = Item::Kind::text;
            out.text = text->get();
            if (slice.size() == out.text.size() + 2 && slice.substr(1, out.text.size()) == out.text)
                out.text_column = out.place.column + 1;
        } else if (const auto* whole = node.as_integer()) {
            out.kind = Item::Kind::integer;
            out.number = static_cast<double>(whole->get());
        } else if (const auto* number = node.as_floating_point()) {
            out.kind = Item::Kind::number;
            out.number = number->get();
        } else if (const auto* flag = node.as_boolean()) {
            out.kind = Item::Kind::flag;
            out.flag = flag->get();
        } else {
            out.kind = Item::Kind::date;
            out.text = slice;
        }
        return out;
    }

  private:
    std::string_view text_;
    const std::string& file_;
    std::vector<std::size_t> starts_;
};

std::string_view trimmed(std::string_view text) {
    const auto first = text.find_first_not_of(" \t\r");
    if (first == std::string_view::npos) return {};
    return text.substr(first, text.find_last_not_of(" \t\r") - first + 1);
}

// Length of a bare or quoted, possibly dotted key at the start of a line; 0 when there is none.
std::size_t key_length(std::string_view line) {
    std::size_t k = 0;
    while (k < line.size()) {
        const char c = line[k];
        if (c == '"' || c == '\'') {
            const auto close = line.find(c, k + 1);
            if (close == std::string_view::npos) return 0;
            k = close + 1;
        } else if (std::isalnum(static_cast<unsigned char>(c)) || c == '_' || c == '-' || c == '.') {
            ++k;
        } else {
            break;
        }
    }
    return k;
}

bool has(std::string_view text, std::string_view piece) {
    return text.find(piece) != std::string_view::npos;
}

// What is wrong with a line that TOML does not take, in the words of somebody who writes converter files.
Fault syntax_fault(std::string_view line, std::string_view description, Place place) {
    const std::string_view plain = trimmed(line);
    const auto length = key_length(plain);
    const std::string key(plain.substr(0, length));
    const std::string_view rest = trimmed(plain.substr(length));
    Fault fault{std::move(place), "", "", ""};
    if (has(description, "utf-8")) {
        fault.message = "the text is not UTF-8 here; save the file as UTF-8";
    } else if (plain.empty() && has(description, "end-of-file")) {
        fault.message = "the file ends inside a list, a table in braces or a text that was never closed";
    } else if (has(description, "cannot redefine existing table") ||
               (has(description, "redefine") && plain.starts_with('['))) {
        fault.message =
            "the table " + std::string(trimmed(plain.substr(0, plain.find('#')))) + " stands here for the second time";
    } else if (has(description, "redefine") && length > 0) {
        fault.field = key;
        fault.message = "`" + key + "` stands here for the second time in its table";
    } else if (plain.starts_with('[')) {
        fault.message = "the name of a table stands between [ and ], and nothing else on its line";
        fault.expected = "a line such as [operating]";
    } else if (length > 0 && rest.empty()) {
        fault.field = key;
        fault.message = "`" + key + "` has no value";
        fault.expected = key + " = …";
    } else if (length > 0 && !rest.starts_with('=')) {
        fault.field = key;
        fault.message = "a `=` is missing between `" + key + "` and its value";
        fault.expected = key + " = …";
    } else if (length > 0) {
        fault.field = key;
        const std::string_view value = trimmed(rest.substr(1));
        const std::string_view shown = trimmed(value.substr(0, value.find('#')));
        const bool quantity = !shown.empty() && (std::isdigit(static_cast<unsigned char>(shown.front())) ||
                                                 has("+-.", shown.substr(0, 1)) || (shown.front() & 0x80) != 0);
        const bool word = !shown.empty() && std::isalpha(static_cast<unsigned char>(shown.front()));
        if (shown.empty()) {
            fault.message = "`" + key + "` has no value";
        } else if ((shown.front() == '"' || shown.front() == '\'') &&
                   std::count(shown.begin(), shown.end(), shown.front()) == 1) {
            fault.message = "the text that `" + key + "` begins has no closing quote";
        } else if ((quantity || word) && !has(shown, "\"")) {
            fault.message = "the value of `" + key + "` stands in quotes: " + key + " = \"" + std::string(shown) + "\"";
        } else {
            fault.message = "the value of `" + key + "` cannot be read: " + std::string(description);
        }
    } else {
        fault.message = "this line is neither a [table], a key = value nor a # comment";
    }
    return fault;
}

// Keys nested so deeply that reading them would need more stack than there is. Dots in quotes and comments do not
// count.
bool too_deep(std::string_view text) {
    int dots = 0;
    std::size_t line_end = std::min(text.find('\n'), text.size());
    for (std::size_t k = 0; k < text.size(); ++k) {
        const char c = text[k];
        if (c == '\n') {
            dots = 0;
            line_end = std::min(text.find('\n', k + 1), text.size());
        }
        if (c == '#') k = line_end - 1;
        if (c == '"' || c == '\'') {
            auto close = k + 1;
            while (close < line_end && text[close] != c) close += (c == '"' && text[close] == '\\') ? 2 : 1;
            if (close < line_end) k = close;
        }
        if (c == '.' && ++dots > kMostDots) return true;
    }
    return false;
}

// TOML has no letter beyond ASCII outside quotes and comments, and the parser (3.3) is undefined where it meets one
// there. Each becomes one `$`, which stands nowhere in TOML either: it is refused at the same place. `unsafe` is set
// where the same would happen inside a text: on the line after a `\` that ends a line of a long text.
std::string plain_outside_quotes(std::string_view text, bool& unsafe) {
    std::string out;
    out.reserve(text.size());
    unsafe = false;
    std::size_t k = 0;
    const auto sequence = [&](std::size_t at) -> std::size_t {  // bytes of a well-formed letter beyond ASCII, else 0
        const auto lead = static_cast<unsigned char>(text[at]);
        const std::size_t length = lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : lead >= 0xC0 ? 2 : 0;
        for (std::size_t j = 1; j < length; ++j)
            if (at + j >= text.size() || (static_cast<unsigned char>(text[at + j]) & 0xC0) != 0x80) return 0;
        return length;
    };
    while (k < text.size()) {
        const char c = text[k];
        std::size_t end = k + 1;
        if (c == '#') {
            end = std::min(text.find('\n', k), text.size());
        } else if ((c == '"' || c == '\'') && (k == 0 || has(" \t\r\n=,[{.", text.substr(k - 1, 1)))) {
            const std::string mark(3, c);
            const bool is_long = text.substr(k, 3) == mark;
            end = k + (is_long ? 3 : 1);
            while (end < text.size()) {
                if (c == '"' && text[end] == '\\') {
                    const auto next = text.find_first_not_of(" \t\r\n", end + 1);
                    if (is_long && next != std::string_view::npos && next > end + 1 && (text[next] & 0x80) != 0)
                        unsafe = true;
                    end += 2;
                } else if (is_long ? text.substr(end, 3) == mark : text[end] == c) {
                    end += is_long ? 3 : 1;
                    for (int extra = 0; is_long && extra < 2 && end < text.size() && text[end] == c; ++extra) ++end;
                    break;
                } else if (!is_long && text[end] == '\n') {
                    break;
                } else {
                    ++end;
                }
            }
            end = std::min(end, text.size());
        } else if (const auto length = sequence(k); length > 0) {
            out += '$';
            k += length;
            continue;
        }
        out += text.substr(k, end - k);
        k = end;
    }
    return out;
}

}  // namespace

const Item* Item::find(std::string_view key) const {
    for (const Member& member : members)
        if (member.key == key) return &member.value;
    return nullptr;
}
Item* Item::find(std::string_view key) {
    return const_cast<Item*>(std::as_const(*this).find(key));
}

std::size_t offset_of(std::string_view text, int line, int column) {
    static const std::string none;
    return Reader(text, none).offset({static_cast<toml::source_index>(line), static_cast<toml::source_index>(column)});
}

ItemText read_items(std::string_view text, const std::string& file, std::vector<Fault>& faults) {
    ItemText out;
    const std::size_t skipped = text.starts_with(kByteOrderMark) ? kByteOrderMark.size() : 0;
    const std::string_view body = text.substr(skipped);
    if (body.size() > kMostBytes) {
        faults.push_back({{file, 0, 0}, "", "the file is larger than 1 MiB: that is no converter file", ""});
        out.whole = false;
        return out;
    }
    if (too_deep(body)) {
        faults.push_back({{file, 0, 0}, "", "a line nests its keys more than 100 deep: that is no converter file", ""});
        out.whole = false;
        return out;
    }
    std::string readable(body);
    const Reader reader(body, file);
    for (int round = 0; round < kMostSyntaxFaults; ++round) {
        try {
            bool unsafe = false;
            const std::string plain = plain_outside_quotes(readable, unsafe);
            if (unsafe) {
                faults.push_back({{file, 0, 0},
                                  "",
                                  "a text goes on after a \\ at the end of a line with a letter beyond ASCII; "
                                  "write it in one line",
                                  ""});
                out.whole = false;
                break;
            }
            const toml::table table = toml::parse(std::string_view(plain));
            out.root = reader.item(table);
            break;
        } catch (const toml::parse_error& error) {
            out.whole = false;
            auto at = error.source().begin;
            const auto offset = std::min(reader.offset(at), readable.size());
            auto begin = readable.rfind('\n', offset == 0 ? 0 : offset - 1);
            begin = begin == std::string::npos ? 0 : begin + 1;
            const auto end = std::min(readable.find('\n', begin), readable.size());
            const std::string line = readable.substr(begin, end - begin);
            faults.push_back(syntax_fault(line, error.description(), reader.place(at)));
            // A line `key = value` can be left out and the rest read; anything else changes the meaning of what
            // follows.
            const std::string_view plain = trimmed(line);
            const auto length = key_length(plain);
            if (length == 0 || has(line, "\"\"\"") || has(line, "'''")) break;
            for (std::size_t k = begin; k < end; ++k)
                if (readable[k] != '\r') readable[k] = ' ';
        }
    }
    if (skipped > 0) {
        const auto shift = [skipped](auto&& self, Item& item) -> void {
            item.begin += skipped;
            item.end += skipped;
            for (Item& child : item.items) self(self, child);
            for (Member& child : item.members) self(self, child.value);
        };
        shift(shift, out.root);
    }
    return out;
}

Item typed_item(std::string_view value, const Place& place) {
    Item out;
    out.kind = Item::Kind::text;
    const std::string_view plain = trimmed(value);
    if (!plain.empty() && plain.find('\n') == std::string_view::npos && !too_deep(plain) &&
        (has("[{\"'", plain.substr(0, 1)) || std::isalnum(static_cast<unsigned char>(plain.front())) ||
         has("+-", plain.substr(0, 1)))) {
        try {
            const std::string line = "x=" + std::string(plain);
            bool unsafe = false;
            const std::string masked = plain_outside_quotes(line, unsafe);
            const toml::table table = toml::parse(std::string_view(unsafe ? "" : masked));
            const Reader reader(line, place.file);
            if (table.size() == 1) out = reader.item(*table.get("x"));
        } catch (const toml::parse_error&) {
            out = Item{};
            out.kind = Item::Kind::text;
        }
    }
    if (out.kind == Item::Kind::text && out.begin == 0) {
        out.text = plain;
        out.text_column = place.column;
    }
    const int shift = place.column - 3;  // "x=" stands before what was typed
    const auto move = [&](auto&& self, Item& item) -> void {
        item.place = {place.file, place.line, item.place.column == 0 ? place.column : item.place.column + shift};
        if (item.begin > 0 && item.text_column) *item.text_column += shift;
        for (Item& child : item.items) self(self, child);
        for (Member& child : item.members) {
            child.place = {place.file, place.line, child.place.column + shift};
            self(self, child.value);
        }
    };
    move(move, out);
    out.typed = plain;
    return out;
}

bool same_value(const Item& a, const Item& b) {
    if (a.kind != b.kind || a.text != b.text || a.flag != b.flag || a.items.size() != b.items.size() ||
        a.members.size() != b.members.size())
        return false;
    if (!(a.number == b.number) && !(a.number != a.number && b.number != b.number)) return false;
    for (std::size_t k = 0; k < a.items.size(); ++k)
        if (!same_value(a.items[k], b.items[k])) return false;
    for (const Member& member : a.members) {
        const Item* other = b.find(member.key);
        if (!other || !same_value(member.value, *other)) return false;
    }
    return true;
}

std::string quoted(std::string_view text) {
    std::string out = "\"";
    for (const char c : text) {
        if (c == '"' || c == '\\') {
            out += '\\';
            out += c;
        } else if (static_cast<unsigned char>(c) < 0x20 || c == 0x7f) {
            out += fmt::format("\\u{:04X}", static_cast<int>(static_cast<unsigned char>(c)));
        } else {
            out += c;
        }
    }
    return out + '"';
}

std::string key_text(std::string_view key) {
    const bool bare = !key.empty() && std::all_of(key.begin(), key.end(), [](char c) {
        return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_' || c == '-';
    });
    return bare ? std::string(key) : quoted(key);
}

std::vector<std::string> split_key(std::string_view dotted) {
    std::vector<std::string> parts(1);
    bool was_quoted = false;
    for (std::size_t k = 0; k < dotted.size(); ++k) {
        const char c = dotted[k];
        if (c == '.') {
            if (parts.back().empty()) return {};
            parts.emplace_back();
            was_quoted = false;
        } else if ((c == '"' || c == '\'') && parts.back().empty()) {
            const auto close = dotted.find(c, k + 1);
            if (close == std::string_view::npos) return {};
            parts.back() = dotted.substr(k + 1, close - k - 1);
            was_quoted = true;
            k = close;
        } else if (was_quoted) {
            return {};
        } else {
            parts.back() += c;
        }
    }
    if (parts.back().empty()) return {};
    return parts;
}

std::string_view kind_name(Item::Kind kind) {
    switch (kind) {
        case Item::Kind::table:
            return "a table";
        case Item::Kind::array:
            return "a list";
        case Item::Kind::text:
            return "a text";
        case Item::Kind::integer:
            return "a whole number";
        case Item::Kind::number:
            return "a number";
        case Item::Kind::flag:
            return "true or false";
        case Item::Kind::date:
            return "a date";
    }
    return "";
}

}  // namespace binwright
