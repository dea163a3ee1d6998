// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/command/bin.hpp"

#include <algorithm>
#include <charconv>
#include <chrono>
#include <ctime>
#include <filesystem>
#include <map>

#include "app/command/text.hpp"
#include "engine/converter/keys.hpp"
#include "import/starter.hpp"

namespace binwright {
namespace {

InputError option_error(const std::string& option, int column, std::string message, std::string expected) {
    return InputError(Fault{{option, 0, column}, option, std::move(message), std::move(expected)});
}

bool bin_exists(const std::string& path) {
    std::error_code ignored;
    return std::filesystem::exists(path, ignored);
}

std::string part_text(const PartRecord& record) {
    std::string text = std::string(to_string(record.part.family)) + " type \"" + record.part.name + "\"";
    for (const auto& [name, value] : record.part.attributes) text += ", " + name + " " + value;
    for (const Figure& figure : record.part.figures) text += ", " + std::string(info(figure.symbol).name) + " " + figure_text(figure);
    return text;
}

std::string lot_text(const Store& store, const LotRecord& lot) {
    std::string text = lot.number ? "lot " + lot_label(lot.number) : std::string("a new lot");
    text += ": " + counted(static_cast<std::size_t>(std::max(lot.count, 0)), "piece");
    if (const std::optional<PartRecord> part = lot.part_id ? store.part(lot.part_id) : std::nullopt) text += " of " + part->part.name;
    if (!lot.place.empty()) text += ", at " + lot.place;
    text += ", " + std::string(to_string(lot.origin));
    if (!lot.date_code.empty()) text += ", date code " + lot.date_code;
    if (!lot.donor.empty()) text += ", from " + lot.donor;
    if (!lot.note.empty()) text += ", note: " + lot.note;
    return text;
}

std::string reading_text(const Store& store, const ReadingRecord& reading) {
    std::string text = "reading " + std::string(info(reading.figure.symbol).name) + " " + figure_text(reading.figure);
    if (const std::optional<LotRecord> lot = reading.lot_id ? store.lot(reading.lot_id) : std::nullopt) text += " of " + lot_label(lot->number);
    if (!reading.figure.date.empty()) text += ", " + reading.figure.date;
    if (!reading.figure.method.empty()) text += ", " + reading.figure.method;
    if (reading.set_aside) text += ", set aside";
    return text;
}

std::string row_text(const Store&, const PartRecord& record) { return part_text(record); }
std::string row_text(const Store& store, const LotRecord& record) { return lot_text(store, record); }
std::string row_text(const Store& store, const ReadingRecord& record) { return reading_text(store, record); }

std::vector<std::string> change_lines(const Store& store, const Edit& edit) {
    std::vector<std::string> lines;
    for (const auto& change : edit.changes)
        std::visit(
            [&](const auto& row) {
                if (row.before) lines.push_back("- " + row_text(store, *row.before));
                if (row.after) lines.push_back("+ " + row_text(store, *row.after));
            },
            change);
    return lines;
}

void report(Session& session, const std::string& command, const Store& store, const Edit& edit, const std::string& bin, bool applied) {
    std::vector<std::string> labels;
    for (const auto& change : edit.changes)
        if (const auto* lot = std::get_if<Change<LotRecord>>(&change)) {
            const LotRecord* row = lot->after ? &*lot->after : lot->before ? &*lot->before : nullptr;
            if (row && row->number) labels.push_back(lot_label(row->number));
        }
    const std::vector<std::string> lines = change_lines(store, edit);
    if (session.json) {
        Json body = {{"what", edit.what}, {"bin", bin}, {"dry_run", !applied}, {"lots", labels}, {"changes", lines}};
        print_json(session, command, body);
    } else if (session.quiet) {
        for (const std::string& label : labels) session.out << label << '\n';
    } else {
        session.out << (applied ? "" : "would ") << edit.what;
        if (labels.size() == 1 && edit.what.find(labels.front()) == std::string::npos) session.out << ": " << labels.front();
        session.out << '\n';
        if (lines.size() > 40) {
            session.out << "  " << lines.size() << " rows\n";
            return;
        }
        for (const std::string& line : lines) session.out << "  " << folded(line, 2, 6) << '\n';
    }
}

/// The change as it was made, with the ids and numbers that were given: the inverse, turned round.
Edit turned(Edit inverse, std::string what) {
    for (auto& change : inverse.changes) std::visit([](auto& row) { std::swap(row.before, row.after); }, change);
    std::ranges::reverse(inverse.changes);
    inverse.what = std::move(what);
    return inverse;
}

}  // namespace

std::string bin_to_change(Session& session) {
    const std::string path = session.bin ? *session.bin : default_bin_path();
    if (path == "demo" && !session.dry_run)
        throw InputError(Fault{{}, "--bin", "the demo bin is in memory: no change to it would remain; `binwright --bin trial.binwright bin demo` "
                                            "makes one on disk to try things in",
                               "the path of a bin file"});
    return path;
}

int change_bin(Session& session, const std::string& command, bool creates, const EditOf& build) {
    const std::string path = bin_to_change(session);
    const bool there = path != "demo" && bin_exists(path);
    if (!there && path != "demo" && !creates)
        throw InputError(Fault{{path, 0, 0}, "--bin", "there is no bin yet; `binwright bin add` makes one", "the path of a bin file"});
    {
        Store store = there ? Store(path, Store::Open::read_only) : bin_in_memory(path == "demo").store;
        const Edit edit = build(store);
        if (edit.changes.empty()) {
            note(session, "nothing to change");
            if (session.json) print_json(session, command, {{"what", edit.what}, {"bin", path}, {"dry_run", session.dry_run}, {"changes", Json::array()}});
            return 0;
        }
        if (!there) {
            const Edit done = turned(store.apply(edit), edit.what);  // what it would refuse, it refuses here
            if (session.dry_run) {
                report(session, command, store, done, path, false);
                return 0;
            }
        } else if (session.dry_run) {
            report(session, command, store, edit, path, false);
            return 0;
        }
    }
    if (!there) {
        const std::filesystem::path folder = std::filesystem::path(path).parent_path();
        std::error_code failed;
        if (!folder.empty()) std::filesystem::create_directories(folder, failed);
        if (failed) throw StoreError(path + ": its folder cannot be made: " + failed.message());
    }
    Store store(path, there ? Store::Open::existing : Store::Open::create);
    if (!there) {
        (void)store.apply(starter_edit(store));
        note(session, "made the bin " + path);
    }
    const Edit edit = build(store);
    const Edit done = turned(store.apply(edit), edit.what);
    report(session, command, store, done, path, true);
    return 0;
}

NamedText named_text(const std::string& option, const std::string& value) {
    const std::size_t equals = value.find('=');
    if (equals == std::string::npos || equals == 0)
        throw option_error(option, 1, "\"" + value + "\" is not NAME=VALUE", "a name, = and a value");
    std::string name = value.substr(0, equals);
    while (name.ends_with(' ')) name.pop_back();
    return {name, value.substr(equals + 1), text_width(value.substr(0, equals + 1))};
}

Figure figure_of(const std::string& option, const std::string& value, Family family, Known known) {
    const NamedText pair = named_text(option, value);
    const std::optional<Symbol> symbol = find_symbol(pair.name, family);
    if (!symbol) {
        std::vector<std::string> names;
        for (const SymbolInfo& row : symbols())
            if (family == Family::switch_ ? row.in_switch : family == Family::rectifier ? row.in_rectifier : row.in_capacitor) {
                names.emplace_back(row.name);
                names.emplace_back(row.plain);
            }
        const std::string near = nearest_word(pair.name, names);
        throw option_error(option, 1, "a " + std::string(to_string(family)) + " has no figure `" + pair.name + "`; " +
                                          (near.empty() ? "see `binwright help figures`" : "did you mean `" + near + "`?"),
                           "a figure of a " + std::string(to_string(family)));
    }
    try {
        return parse_figure(*symbol, pair.text, known);
    } catch (InputError& error) {
        for (Fault& fault : error.faults) {
            fault.place.file = option;
            if (fault.place.column > 0) fault.place.column += pair.offset;
            fault.message = "in \"" + value + "\"" + (fault.place.column > 0 ? " at character " + std::to_string(fault.place.column) : "") + ": " + fault.message;
            if (fault.field.empty()) fault.field = std::string(info(*symbol).name);
        }
        throw InputError(error.faults);
    }
}

std::pair<std::string, std::string> attribute_of(const std::string& option, const std::string& value, Family family) {
    const NamedText pair = named_text(option, value);
    std::vector<std::string> names;
    for (const AttributeInfo& row : attributes()) {
        if (!(row.families & bit(family))) continue;
        names.emplace_back(row.name);
        if (row.name != pair.name) continue;
        const std::vector<std::string> allowed = split_words(row.words);
        if (!row.words.empty() && std::ranges::find(allowed, pair.text) == allowed.end()) {
            std::string list;
            for (const std::string& word : allowed) list += (list.empty() ? "" : ", ") + word;
            const std::string near = nearest_word(pair.text, allowed);
            throw option_error(option, pair.offset + 1, "`" + pair.name + "` cannot be \"" + pair.text + "\"; " +
                                                            (near.empty() ? "it is one of " + list : "did you mean \"" + near + "\"?"), "one of " + list);
        }
        return {pair.name, pair.text};
    }
    const std::string near = nearest_word(pair.name, names);
    std::string list;
    for (const std::string& word : names) list += (list.empty() ? "" : ", ") + word;
    throw option_error(option, 1, "a " + std::string(to_string(family)) + " has no attribute `" + pair.name + "`; " +
                                      (near.empty() ? "it is one of " + list : "did you mean `" + near + "`?"), "one of " + list);
}

void refuse_implausible(const Session& session, const Part& part, const std::vector<Figure>& figures, const std::string& option) {
    if (session.sure) return;
    std::vector<Fault> faults;
    for (const Figure& figure : figures) {
        const std::string why = implausible(part, figure);
        if (!why.empty())
            faults.push_back({{option, 0, 0}, std::string(info(figure.symbol).name), why + "; add --sure if it is meant", "a value that such a part can have"});
    }
    if (!faults.empty()) throw InputError(faults);
}

Origin origin_of(const std::string& text) {
    if (const std::optional<Origin> origin = find_origin(text)) return *origin;
    throw option_error("--origin", 0, "\"" + text + "\" is no origin; it is new, surplus or pulled", "new, surplus or pulled");
}

std::string today() {
    const std::time_t now = std::time(nullptr);
    std::tm local{};
    localtime_r(&now, &local);
    char text[16];
    std::strftime(text, sizeof text, "%Y-%m-%d", &local);
    return text;
}

std::string date_of(const std::string& text) {
    const auto number = [&](std::size_t at, std::size_t length) {
        int value = -1;
        const char* end = text.data() + at + length;
        const auto [stop, error] = std::from_chars(text.data() + at, end, value);
        return error == std::errc() && stop == end ? value : -1;
    };
    const bool shaped = text.size() == 10 && text[4] == '-' && text[7] == '-';
    const int year = shaped ? number(0, 4) : -1, month = shaped ? number(5, 2) : -1, day = shaped ? number(8, 2) : -1;
    const std::chrono::year_month_day date{std::chrono::year(year), std::chrono::month(static_cast<unsigned>(month)), std::chrono::day(static_cast<unsigned>(day))};
    if (year < 0 || month < 0 || day < 0 || !date.ok())
        throw option_error("--date", 0, "\"" + text + "\" is no date; it is written 2026-03-01", "a date such as 2026-03-01");
    if (text > today()) throw option_error("--date", 0, text + " is still to come", "a date not later than today");
    return text;
}

LotRecord lot_of(const Store& store, const std::string& label) {
    if (const std::optional<LotRecord> lot = store.lot_labelled(label)) return *lot;
    throw InputError(Fault{{}, "LABEL", "there is no lot " + label + " in this bin", "the label of a lot, such as 417-H"});
}

PartRecord part_of(const Store& store, const LotRecord& lot) {
    if (std::optional<PartRecord> part = store.part(lot.part_id)) return *part;
    throw StoreError("lot " + lot_label(lot.number) + " has lost its part type");
}

std::string nearest_part(const Store& store, const std::string& name) {
    std::vector<std::string> names;
    for (const PartRecord& record : store.parts()) names.push_back(record.part.name);
    return nearest_word(name, names);
}

std::string lot_rows(const Store& store, const std::vector<LotRecord>& lots) {
    Rows rows;
    rows.right = {1};
    std::map<std::int64_t, std::string> names;
    for (const PartRecord& record : store.parts()) names[record.id] = record.part.name;
    for (const LotRecord& lot : lots)
        rows.rows.push_back({lot_label(lot.number), std::to_string(lot.count), names[lot.part_id], std::string(to_string(lot.origin)),
                             lot.place + (lot.note.empty() ? "" : (lot.place.empty() ? "" : "; ") + lot.note)});
    return rows.text();
}

Json lot_list(const Store& store, const std::vector<LotRecord>& lots) {
    std::map<std::int64_t, Part> parts;
    for (const PartRecord& record : store.parts()) parts[record.id] = record.part;
    Json list = Json::array();
    for (const LotRecord& lot : lots) list.push_back(json_of(lot, parts[lot.part_id]));
    return list;
}

std::string figure_text(const Figure& figure) {
    const Unit unit = info(figure.symbol).unit;
    std::string text = figure.both_legs ? "both legs " : "";
    text += format_quantity(figure.value.best, unit);
    if (!figure.value.exact()) text += " … " + format_quantity(figure.value.typical, unit) + " … " + format_quantity(figure.value.worst, unit);
    if (figure.column != Column::none) text += " " + std::string(to_string(figure.column));
    std::string conditions;
    const auto add = [&](const std::optional<double>& value, Unit of) {
        if (value) conditions += (conditions.empty() ? " @ " : ", ") + format_quantity(*value, of);
    };
    add(figure.at.voltage, Unit::volt);
    add(figure.at.current, Unit::ampere);
    add(figure.at.frequency, Unit::hertz);
    add(figure.at.temperature, Unit::celsius);
    return text + conditions;
}

}  // namespace binwright
