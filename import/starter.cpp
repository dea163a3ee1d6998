// SPDX-License-Identifier: GPL-3.0-or-later
#include "import/starter.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <charconv>
#include <map>
#include <span>

#include "engine/embedded.hpp"
#include "import/delimited.hpp"

namespace binwright {

std::span<const EmbeddedFile> starter_files();

namespace {

std::string_view embedded(std::string_view name) {
    for (const EmbeddedFile& file : starter_files())
        if (file.name == name) return file.text;
    return {};
}

std::vector<std::string_view> pieces(std::string_view cell) {
    std::vector<std::string_view> found;
    for (std::size_t from = 0;;) {
        const std::size_t bar = cell.find('|', from);
        std::string_view piece = cell.substr(from, bar == std::string_view::npos ? std::string_view::npos : bar - from);
        while (!piece.empty() && piece.front() == ' ') piece.remove_prefix(1);
        while (!piece.empty() && piece.back() == ' ') piece.remove_suffix(1);
        found.push_back(piece);
        if (bar == std::string_view::npos) return found;
        from = bar + 1;
    }
}

std::string in_small_letters(std::string_view text) {
    std::string small(text);
    for (char& c : small)
        if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
    return small;
}

/// A table of delimited text whose first row names the columns.
class Sheet {
  public:
    Sheet(std::string_view text, std::string file) : file_(std::move(file)) {
        rows_ = read_delimited(text, file_);
        if (rows_.empty()) throw InputError(Fault{{file_, 1, 1}, "", "the file has no row of column names", "a first row such as family,name,…"});
        header_ = rows_.front();
        rows_.erase(rows_.begin());
        for (std::size_t k = 0; k < header_.size(); ++k)
            for (std::size_t before = 0; before < k; ++before)
                if (header_[k].text == header_[before].text)
                    fault(header_[k], header_[k].text, fmt::format("the column \"{}\" stands twice in the first row", header_[k].text), "each column once");
    }
    /// A fault, where a column is not there. @returns whether it is
    bool needs(std::string_view column) {
        const bool there = std::any_of(header_.begin(), header_.end(), [&](const Field& field) { return field.text == column; });
        if (!there) fault(header_.front(), std::string(column), fmt::format("there is no column \"{}\"", column), "a first row such as family,name,…");
        return there;
    }
    /// A fault, where a row has not as many fields as there are columns. @returns whether it has
    bool fits(const Row& row) {
        if (row.size() == header_.size()) return true;
        const Field& at = row.size() > header_.size() ? row[header_.size()] : row.back();
        fault(at, "", fmt::format("the row has {} field{}, and there are {} columns", row.size(), row.size() == 1 ? "" : "s", header_.size()), "as many fields as columns");
        return false;
    }
    [[nodiscard]] const std::vector<Row>& rows() const { return rows_; }
    [[nodiscard]] const Row& header() const { return header_; }
    [[nodiscard]] Field cell(const Row& row, std::string_view column) const {
        for (std::size_t k = 0; k < header_.size(); ++k)
            if (header_[k].text == column) return k < row.size() ? row[k] : Field{"", row.empty() ? 0 : row.front().line, 0};
        return {"", row.empty() ? 0 : row.front().line, 0};
    }
    void fault(const Field& at, std::string field, std::string message, std::string expected) {
        faults_.push_back({{file_, at.line, at.column}, std::move(field), std::move(message), std::move(expected)});
    }
    void fault(const Field& at, const InputError& error, int offset, const std::string& field) {
        for (const Fault& inner : error.faults)
            faults_.push_back({{file_, at.line, at.column + offset + std::max(0, inner.place.column - 1)}, field, inner.message, inner.expected});
    }
    void raise() const {
        if (!faults_.empty()) throw InputError(faults_);
    }
    [[nodiscard]] std::optional<int> whole(const Field& field, const std::string& column) {
        int value = 0;
        const auto [end, error] = std::from_chars(field.text.data(), field.text.data() + field.text.size(), value);
        if (error == std::errc() && end == field.text.data() + field.text.size() && value >= 0) return value;
        fault(field, column, fmt::format("\"{}\" is no whole number", field.text), "a whole number, 0 or more");
        return std::nullopt;
    }

  private:
    std::string file_;
    Row header_;
    std::vector<Row> rows_;
    std::vector<Fault> faults_;
};

/// A cell of figures: "17.5 mΩ max @ 10 V | 25 mΩ max @ 10 V, 125 °C". A word of how it is known may stand first: "datasheet 15 mA @ …".
void read_figures(Sheet& sheet, const Field& cell, Symbol symbol, std::vector<Figure>& into) {
    const std::string name(info(symbol).name);
    for (std::string_view piece : pieces(cell.text)) {
        Known known = info(symbol).rating || symbol == Symbol::C ? Known::marked : Known::kind;
        const std::size_t space = piece.find(' ');
        if (space != std::string_view::npos)
            if (const auto said = find_known(piece.substr(0, space))) {
                known = *said;
                piece = piece.substr(space + 1);
            }
        try {
            if (known == Known::kind && info(symbol).rating)
                throw InputError(Fault{{"", 1, 1}, "", fmt::format("{} is a rating: printed or published, never typical of a kind", name), "a figure such as 55 V"});
            into.push_back(parse_figure(symbol, piece, known));
        } catch (const InputError& error) {
            int offset = 0;
            for (const char* c = cell.text.data(); c < piece.data(); ++c) offset += (static_cast<unsigned char>(*c) & 0xC0) != 0x80;
            sheet.fault(cell, error, offset, name);
        }
    }
}

}  // namespace

std::vector<PartRecord> read_part_types(std::string_view text, const std::string& file) {
    Sheet sheet(text, file);
    std::vector<PartRecord> parts;
    const std::vector<std::string> known_columns = {"family", "name", "technology", "package", "tab", "pins", "polarity", "arrangement", "can", "characteristic", "level"};
    for (const Field& column : sheet.header()) {
        bool known = std::find(known_columns.begin(), known_columns.end(), column.text) != known_columns.end();
        for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor}) known |= find_symbol(column.text, family).has_value();
        if (known) continue;
        std::vector<std::string> all = known_columns;
        for (const SymbolInfo& symbol : symbols()) all.emplace_back(symbol.name);
        const std::string near = nearest_word(column.text, all);
        sheet.fault(column, column.text, fmt::format("unknown column \"{}\"{}", column.text, near.empty() ? "" : fmt::format("; did you mean \"{}\"?", near)),
                    "a column named in the first row of the starter catalogue");
    }
    const bool complete = sheet.needs("family") & sheet.needs("name");
    std::map<std::string, int> line_of;  // by name in small letters: a bin takes "A" and "a" for one name
    for (const Row& row : sheet.rows()) {
        if (!complete) break;
        if (!sheet.fits(row)) continue;
        const Field family_cell = sheet.cell(row, "family");
        const auto family = find_family(family_cell.text);
        if (!family) {
            sheet.fault(family_cell, "family", fmt::format("\"{}\" is no family", family_cell.text), "switch, rectifier or capacitor");
            continue;
        }
        PartRecord record;
        record.starter = true;
        record.part.family = *family;
        const Field name = sheet.cell(row, "name");
        record.part.name = name.text;
        if (name.text.empty()) sheet.fault(name, "name", "the part has no name", "a name unique in the bin");
        else if (const auto [first, fresh] = line_of.emplace(in_small_letters(name.text), name.line); !fresh)
            sheet.fault(name, "name", fmt::format("\"{}\" is the name of the part in line {} already", name.text, first->second), "a name unique in the bin");
        for (std::size_t k = 0; k < row.size(); ++k) {
            const std::string& column = sheet.header()[k].text;
            if (row[k].text.empty() || column == "family" || column == "name") continue;
            if (const auto symbol = find_symbol(column, *family)) {
                read_figures(sheet, row[k], *symbol, record.part.figures);
            } else if (std::find(known_columns.begin(), known_columns.end(), column) != known_columns.end()) {
                record.part.attributes[column] = row[k].text;
            } else {
                sheet.fault(row[k], column, fmt::format("{} is no figure of a {}", column, to_string(*family)), "an empty field here");
            }
        }
        parts.push_back(std::move(record));
    }
    sheet.raise();
    return parts;
}

const std::vector<PartRecord>& starter_parts() {
    static const std::vector<PartRecord> parts = read_part_types(embedded("parts.csv"), "parts.csv");
    return parts;
}

namespace {

void add_types(const Store& store, const std::vector<PartRecord>& types, Edit& edit, std::map<std::string, std::int64_t>& ids) {
    for (const PartRecord& type : types) {
        if (const auto present = store.part_named(type.part.name)) {
            ids[type.part.name] = present->id;
            continue;
        }
        edit.changes.emplace_back(Change<PartRecord>{std::nullopt, type});
        ids[type.part.name] = -static_cast<std::int64_t>(edit.changes.size());
    }
}

}  // namespace

Edit starter_edit(const Store& store) {
    Edit edit{"add the starter catalogue", {}};
    std::map<std::string, std::int64_t> ids;
    add_types(store, starter_parts(), edit, ids);
    return edit;
}

Edit demo_edit(const Store& store) {
    if (!store.lots().empty()) throw EditRefused("the demo goes into an empty bin, and this one holds lots");
    Edit edit{"fill the bin of the tide-gauge station", {}};
    std::map<std::string, std::int64_t> types, lots;
    std::map<std::string, Family> families;
    add_types(store, starter_parts(), edit, types);
    const std::vector<PartRecord> own = read_part_types(embedded("demo-parts.csv"), "demo-parts.csv");
    add_types(store, own, edit, types);
    for (const auto* list : {&starter_parts(), &own})
        for (const PartRecord& type : *list) families[type.part.name] = type.part.family;

    Sheet sheet(embedded("demo-lots.csv"), "demo-lots.csv");
    std::map<std::string, Family> lot_family;
    for (const Row& row : sheet.rows()) {
        if (!sheet.fits(row)) continue;
        LotRecord lot;
        const Field part = sheet.cell(row, "part");
        const auto type = types.find(part.text);
        if (type == types.end()) {
            sheet.fault(part, "part", fmt::format("no part type is called \"{}\"", part.text), "a name of parts.csv or demo-parts.csv");
            continue;
        }
        lot.part_id = type->second;
        lot.number = sheet.whole(sheet.cell(row, "number"), "number").value_or(0);
        lot.count = sheet.whole(sheet.cell(row, "count"), "count").value_or(0);
        lot.place = sheet.cell(row, "place").text;
        const Field origin = sheet.cell(row, "origin");
        if (const auto known = find_origin(origin.text)) lot.origin = *known;
        else sheet.fault(origin, "origin", fmt::format("\"{}\" is no origin", origin.text), "new, surplus or pulled");
        lot.date_code = sheet.cell(row, "date_code").text;
        lot.donor = sheet.cell(row, "donor").text;
        lot.note = sheet.cell(row, "note").text;
        edit.changes.emplace_back(Change<LotRecord>{std::nullopt, lot});
        const std::string number = sheet.cell(row, "number").text;
        lots[number] = -static_cast<std::int64_t>(edit.changes.size());
        lot_family[number] = families[part.text];
    }
    sheet.raise();

    Sheet readings(embedded("demo-readings.csv"), "demo-readings.csv");
    for (const Row& row : readings.rows()) {
        if (!readings.fits(row)) continue;
        const Field number = readings.cell(row, "number"), symbol_cell = readings.cell(row, "symbol"), figure = readings.cell(row, "figure");
        const auto lot = lots.find(number.text);
        if (lot == lots.end()) {
            readings.fault(number, "number", fmt::format("no lot has the number {}", number.text), "a number of demo-lots.csv");
            continue;
        }
        const auto symbol = find_symbol(symbol_cell.text, lot_family[number.text]);
        if (!symbol) {
            readings.fault(symbol_cell, "symbol", fmt::format("\"{}\" is no figure of such a part", symbol_cell.text), "a letter symbol");
            continue;
        }
        ReadingRecord reading;
        reading.lot_id = lot->second;
        try {
            reading.figure = parse_figure(*symbol, figure.text, Known::measured);
        } catch (const InputError& error) {
            readings.fault(figure, error, 0, symbol_cell.text);
            continue;
        }
        reading.figure.date = readings.cell(row, "date").text;
        reading.figure.method = readings.cell(row, "method").text;
        edit.changes.emplace_back(Change<ReadingRecord>{std::nullopt, reading});
    }
    readings.raise();
    return edit;
}

}  // namespace binwright
