// SPDX-License-Identifier: GPL-3.0-or-later
#include "import/delimited.hpp"

extern "C" {
#include <csv.h>
}

#include <algorithm>
#include <array>
#include <memory>

namespace binwright {
namespace {

/// The one that the first line holds most of outside quotes; the earlier of these where two are level.
char delimiter_of(std::string_view text) {
    constexpr std::string_view candidates = ",;\t";
    std::array<int, candidates.size()> count{};
    bool quoted = false;
    for (const char c : text) {
        if (c == '"') quoted = !quoted;
        if (quoted) continue;
        if (c == '\n') break;
        if (const std::size_t k = candidates.find(c); k != std::string_view::npos) ++count[k];
    }
    return candidates[static_cast<std::size_t>(std::max_element(count.begin(), count.end()) - count.begin())];
}

/// Every line end as one '\n': CR LF, and the bare CR of old machines.
std::string with_plain_line_ends(std::string_view text) {
    std::string plain;
    plain.reserve(text.size());
    for (std::size_t k = 0; k < text.size(); ++k) {
        if (text[k] != '\r') plain += text[k];
        else if (k + 1 == text.size() || text[k + 1] != '\n') plain += '\n';
    }
    return plain;
}

/// Comment lines would confuse the quoting rules: blanks them, keeping line numbers. A '#' inside a quoted field is no comment.
void blank_comments(std::string& text) {
    bool quoted = false, starts = true;
    for (std::size_t k = 0; k < text.size(); ++k) {
        if (starts && !quoted && text[k] == '#')
            while (k < text.size() && text[k] != '\n') text[k++] = ' ';
        if (k == text.size()) break;
        if (text[k] == '"') quoted = !quoted;
        starts = text[k] == '\n';
    }
}

/// Walks the text beside the parser, so that every field gets the place of its first character.
struct Walk {
    std::string_view text;
    char delimiter;
    std::size_t at = 0;
    int line = 1, column = 1;

    void step() {
        if (at >= text.size()) return;
        if (text[at] == '\n') {
            ++line;
            column = 1;
        } else if ((static_cast<unsigned char>(text[at]) & 0xC0) != 0x80) {
            ++column;
        }
        ++at;
    }
    /// To the first character of the next field's content; remembers it.
    Field begin_field() {
        while (at < text.size() && (text[at] == ' ' || (text[at] == '\t' && delimiter != '\t'))) step();
        return {"", line, at < text.size() && text[at] == '"' ? column + 1 : column};
    }
    /// Past the field and its delimiter or line end. @returns false at a row's end
    bool end_field() {
        bool quoted = at < text.size() && text[at] == '"';
        if (quoted) step();
        while (at < text.size()) {
            if (quoted && text[at] == '"') {
                step();
                if (at < text.size() && text[at] == '"') {
                    step();
                    continue;
                }
                quoted = false;
                continue;
            }
            if (!quoted && (text[at] == delimiter || text[at] == '\n')) break;
            step();
        }
        const bool more = at < text.size() && text[at] == delimiter;
        step();
        return more;
    }
};

struct Collected {
    std::vector<std::vector<std::string>> rows{{}};
};

void on_field(void* data, std::size_t size, void* into) {
    static_cast<Collected*>(into)->rows.back().emplace_back(static_cast<const char*>(data), size);
}
void on_row(int, void* into) { static_cast<Collected*>(into)->rows.emplace_back(); }

[[noreturn]] void refuse(const std::string& file, std::string_view text, std::size_t byte, std::string message) {
    Walk walk{text, ','};
    while (walk.at < byte && walk.at < text.size()) walk.step();
    throw InputError(Fault{{file, walk.line, walk.column}, "", std::move(message), "delimited text: fields apart by commas, quoted where they hold one"});
}

std::size_t not_utf8(std::string_view text) {
    for (std::size_t k = 0; k < text.size();) {
        const auto c = static_cast<unsigned char>(text[k]);
        const std::size_t length = c < 0x80 ? 1 : (c >> 5) == 6 ? 2 : (c >> 4) == 14 ? 3 : (c >> 3) == 30 ? 4 : 0;
        if (length == 0 || k + length > text.size()) return k;
        // RFC 3629, section 4: no longer form than needed, no surrogates, nothing above U+10FFFF.
        const auto second = static_cast<unsigned char>(length > 1 ? text[k + 1] : 0x80);
        if (c == 0xC0 || c == 0xC1 || c > 0xF4 || (c == 0xE0 && second < 0xA0) || (c == 0xED && second > 0x9F) || (c == 0xF0 && second < 0x90) ||
            (c == 0xF4 && second > 0x8F))
            return k;
        for (std::size_t j = 1; j < length; ++j)
            if ((static_cast<unsigned char>(text[k + j]) & 0xC0) != 0x80) return k;
        k += length;
    }
    return std::string_view::npos;
}

std::size_t last_opening_quote(std::string_view text) {
    std::size_t opening = 0;
    bool quoted = false;
    for (std::size_t k = 0; k < text.size(); ++k) {
        if (text[k] != '"') continue;
        if (quoted && k + 1 < text.size() && text[k + 1] == '"') ++k;
        else if ((quoted = !quoted)) opening = k;
    }
    return opening;
}

}  // namespace

std::vector<Row> read_delimited(std::string_view text, const std::string& file) {
    if (text.starts_with("\xEF\xBB\xBF")) text.remove_prefix(3);
    if (const std::size_t bad = not_utf8(text); bad != std::string_view::npos) refuse(file, text, bad, "the text is not UTF-8 here; save the file as UTF-8");
    std::string plain = with_plain_line_ends(text);
    blank_comments(plain);
    std::string_view body = plain;
    std::size_t head = body.find_first_not_of(" \n\t");
    const char delimiter = delimiter_of(head == std::string_view::npos ? body : body.substr(head));

    csv_parser parser;
    if (csv_init(&parser, CSV_STRICT | CSV_STRICT_FINI | CSV_REPALL_NL | CSV_EMPTY_IS_NULL) != 0) throw std::bad_alloc();
    const std::unique_ptr<csv_parser, void (*)(csv_parser*)> owner(&parser, csv_free);
    csv_set_delim(&parser, static_cast<unsigned char>(delimiter));
    Collected collected;
    const std::size_t used = csv_parse(&parser, plain.data(), plain.size(), on_field, on_row, &collected);
    if (used != plain.size())
        refuse(file, body, used, body[used] == '"' ? "a quote stands inside a field that does not begin with one" : "text follows the quote that closes its field");
    if (csv_fini(&parser, on_field, on_row, &collected) != 0) refuse(file, body, last_opening_quote(body), "this quote is never closed");

    std::vector<Row> rows;
    Walk walk{body, delimiter};
    for (const auto& fields : collected.rows) {
        if (walk.at >= body.size() && fields.empty()) break;
        Row row;
        std::size_t k = 0;
        for (bool more = true; more; ++k) {
            Field field = walk.begin_field();
            more = walk.end_field();
            if (k < fields.size()) field.text = fields[k];
            row.push_back(std::move(field));
        }
        const bool empty = std::all_of(row.begin(), row.end(), [](const Field& field) { return field.text.empty(); });
        if (!empty) rows.push_back(std::move(row));
    }
    return rows;
}

}  // namespace binwright
