// SPDX-License-Identifier: GPL-3.0-or-later
// `bin show`: one lot with its readings, or one part type, with every figure and how it is known.
#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

std::string known_text(const Figure& figure) {
    std::string text(to_string(figure.known));
    if (!figure.date.empty()) text += " " + figure.date;
    if (!figure.method.empty()) text += ", " + figure.method;
    return text;
}

std::string figure_rows(const Part& part) {
    Rows rows;
    for (const auto& [name, value] : part.attributes) rows.rows.push_back({name, "", value});
    for (const Figure& figure : part.figures) {
        const SymbolInfo& about = info(figure.symbol);
        rows.rows.push_back({std::string(about.meaning), std::string(about.name), figure_text(figure) + "  (" + known_text(figure) + ")"});
    }
    return rows.text(2);
}

int show_type(Session& session, const OpenBin& bin, const PartRecord& record) {
    if (session.json) {
        Json figures = Json::array();
        for (const Figure& figure : record.part.figures) figures.push_back(json_of(figure));
        print_json(session, "bin show", {{"bin", bin.name}, {"part", record.part.name}, {"family", std::string(to_string(record.part.family))},
                                         {"starter", record.starter}, {"attributes", record.part.attributes}, {"figures", figures}});
        return 0;
    }
    session.out << record.part.name << " (" << to_string(record.part.family) << (record.starter ? ", came with the program" : "") << ")\n" << figure_rows(record.part);
    std::vector<LotRecord> lots = bin.store.lots();
    std::erase_if(lots, [&](const LotRecord& lot) { return lot.part_id != record.id; });
    if (!lots.empty()) session.out << "\nlots\n" << lot_rows(bin.store, lots);
    return 0;
}

int run(Session& session, const Call& call) {
    const std::string name = *call.text("LABEL");
    const OpenBin bin = bin_for_reading(session);
    if (const std::optional<PartRecord> type = bin.store.part_named(name)) return show_type(session, bin, *type);
    const LotRecord lot = lot_of(bin.store, name);
    const PartRecord type = part_of(bin.store, lot);
    const std::vector<ReadingRecord> readings = bin.store.readings(lot.id);
    const Lot judged = as_lot(type, lot, readings);
    if (session.json) {
        Json body = {{"bin", bin.name}};
        const Json of_lot = json_of(lot, type.part);
        for (const auto& [key, value] : of_lot.items()) body[key] = value;
        body["suspect"] = judged.suspect;
        if (judged.suspect) body["suspect_why"] = judged.suspect_why;
        body["attributes"] = type.part.attributes;
        body["figures"] = Json::array();
        for (const Figure& figure : judged.part.figures) body["figures"].push_back(json_of(figure));
        body["readings"] = Json::array();
        for (const ReadingRecord& reading : readings) {
            Json entry = json_of(reading.figure);
            entry["reading"] = reading.id;
            entry["set_aside"] = reading.set_aside;
            body["readings"].push_back(std::move(entry));
        }
        print_json(session, "bin show", body);
        return 0;
    }
    session.out << lot_label(lot.number) << "  " << type.part.name << '\n';
    Rows rows;
    rows.rows.push_back({"pieces", std::to_string(lot.count)});
    const auto add = [&](const char* what, const std::string& text) {
        if (!text.empty()) rows.rows.push_back({what, text});
    };
    add("place", lot.place);
    add("origin", std::string(to_string(lot.origin)));
    add("date code", lot.date_code);
    add("from", lot.donor);
    add("note", lot.note);
    if (judged.suspect) rows.rows.push_back({"suspect", judged.suspect_why});
    session.out << rows.text(2) << "\nfigures, as the lot is judged\n" << figure_rows(judged.part);
    if (!readings.empty()) {
        session.out << "\nreadings\n";
        Rows list;
        for (const ReadingRecord& reading : readings)
            list.rows.push_back({"no. " + std::to_string(reading.id), std::string(info(reading.figure.symbol).name), figure_text(reading.figure), reading.figure.date,
                                 reading.figure.method + (reading.set_aside ? " (set aside)" : "")});
        session.out << list.text(2);
    }
    return 0;
}

}  // namespace

Command bin_show_command() {
    return {.name = "bin show",
            .summary = "one lot with its readings, or one part type, with every figure and how it is known",
            .about = "",
            .options = {{"LABEL", "LABEL|TYPE", "a lot's label (417-H; the letter may be left out), or the name of a type", false, true}},
            .example = "binwright --bin demo bin show 101",
            .example_says = "the demo bin's first lot",
            .run = run};
}

}  // namespace binwright
