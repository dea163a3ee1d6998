// SPDX-License-Identifier: GPL-3.0-or-later
#include "catalog/record_json.hpp"

namespace binwright {
namespace {

using nlohmann::json;

template <class Enum, class Find>
Enum word(const json& value, Find find) {
    const auto found = find(value.get<std::string>());
    if (!found) throw StoreError("the bin holds the unknown word \"" + value.get<std::string>() + "\"");
    return *found;
}

json record(const PartRecord& part) {
    json figures = json::array();
    for (const Figure& figure : part.part.figures) figures.push_back(to_json(figure));
    return {{"id", part.id}, {"family", to_string(part.part.family)}, {"name", part.part.name},
            {"attributes", part.part.attributes}, {"figures", figures}, {"starter", part.starter}};
}

json record(const LotRecord& lot) {
    return {{"id", lot.id}, {"number", lot.number}, {"part_id", lot.part_id}, {"count", lot.count}, {"place", lot.place},
            {"origin", to_string(lot.origin)}, {"date_code", lot.date_code}, {"donor", lot.donor}, {"note", lot.note}};
}

json record(const ReadingRecord& reading) {
    return {{"id", reading.id}, {"lot_id", reading.lot_id}, {"figure", to_json(reading.figure)}, {"set_aside", reading.set_aside}};
}

void read(const json& from, PartRecord& part) {
    part.id = from.at("id");
    part.part.family = word<Family>(from.at("family"), find_family);
    part.part.name = from.at("name");
    part.part.attributes = from.at("attributes").get<std::map<std::string, std::string>>();
    for (const json& figure : from.at("figures")) part.part.figures.push_back(figure_from_json(figure, part.part.family));
    part.starter = from.at("starter");
}

void read(const json& from, LotRecord& lot) {
    lot = {from.at("id"), from.at("number"), from.at("part_id"), from.at("count"), from.at("place"),
           word<Origin>(from.at("origin"), find_origin), from.at("date_code"), from.at("donor"), from.at("note")};
}

void read(const json& from, ReadingRecord& reading) {
    reading.id = from.at("id");
    reading.lot_id = from.at("lot_id");
    // A symbol belongs to one family or means the same in two: the first that knows it will do.
    const json& figure = from.at("figure");
    for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor})
        if (find_symbol(figure.at("symbol").get<std::string>(), family)) {
            reading.figure = figure_from_json(figure, family);
            break;
        }
    reading.set_aside = from.at("set_aside");
}

template <class Record>
json change(const Change<Record>& one, const char* table) {
    return {{"table", table}, {"before", one.before ? record(*one.before) : json()}, {"after", one.after ? record(*one.after) : json()}};
}

template <class Record>
Change<Record> change_from(const json& from) {
    Change<Record> one;
    if (!from.at("before").is_null()) read(from.at("before"), one.before.emplace());
    if (!from.at("after").is_null()) read(from.at("after"), one.after.emplace());
    return one;
}

}  // namespace

json to_json(const Figure& figure) {
    json out = {{"symbol", info(figure.symbol).name}, {"known", to_string(figure.known)}};
    if (figure.value.exact() && figure.value.best == figure.value.typical) out["value"] = figure.value.best;
    else out["spread"] = {figure.value.best, figure.value.typical, figure.value.worst};
    if (figure.column != Column::none) out["column"] = to_string(figure.column);
    if (figure.at.voltage) out["voltage"] = *figure.at.voltage;
    if (figure.at.current) out["current"] = *figure.at.current;
    if (figure.at.frequency) out["frequency"] = *figure.at.frequency;
    if (figure.at.temperature) out["kelvin"] = *figure.at.temperature;
    if (figure.both_legs) out["both_legs"] = true;
    if (!figure.date.empty()) out["date"] = figure.date;
    if (!figure.method.empty()) out["method"] = figure.method;
    return out;
}

Figure figure_from_json(const json& from, Family family) {
    Figure figure;
    figure.symbol = word<Symbol>(from.at("symbol"), [family](std::string_view text) { return find_symbol(text, family); });
    figure.known = word<Known>(from.at("known"), find_known);
    if (from.contains("value")) {
        const double value = from.at("value");
        figure.value = {value, value, value};
    } else {
        figure.value = {from.at("spread").at(0), from.at("spread").at(1), from.at("spread").at(2)};
    }
    if (from.contains("column")) figure.column = word<Column>(from.at("column"), find_column);
    const auto number = [&](const char* key, std::optional<double>& into) {
        if (from.contains(key)) into = from.at(key).get<double>();
    };
    number("voltage", figure.at.voltage);
    number("current", figure.at.current);
    number("frequency", figure.at.frequency);
    number("kelvin", figure.at.temperature);
    figure.both_legs = from.value("both_legs", false);
    figure.date = from.value("date", "");
    figure.method = from.value("method", "");
    return figure;
}

json to_json(const Edit& edit) {
    json changes = json::array();
    for (const auto& one : edit.changes)
        changes.push_back(std::visit(
            [](const auto& inner) {
                using Type = std::decay_t<decltype(inner)>;
                if constexpr (std::is_same_v<Type, Change<PartRecord>>) return change(inner, "part");
                else if constexpr (std::is_same_v<Type, Change<LotRecord>>) return change(inner, "lot");
                else return change(inner, "reading");
            },
            one));
    return {{"what", edit.what}, {"changes", changes}};
}

Edit edit_from_json(const json& from) {
    Edit edit;
    edit.what = from.at("what");
    for (const json& one : from.at("changes")) {
        const std::string table = one.at("table");
        if (table == "part") edit.changes.emplace_back(change_from<PartRecord>(one));
        else if (table == "lot") edit.changes.emplace_back(change_from<LotRecord>(one));
        else edit.changes.emplace_back(change_from<ReadingRecord>(one));
    }
    return edit;
}

}  // namespace binwright
