// SPDX-License-Identifier: GPL-3.0-or-later
// Lots: their labels, what the engine is to judge of them, finding them, and the edits people make of them.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <sstream>

#include "catalog/store.hpp"

namespace binwright {
namespace {

std::string folded(std::string_view text) {
    std::string out(text);
    for (char& c : out)
        if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
    return out;
}

/// Whether a measurement says less good than another, by the symbol's own direction.
bool worse(const Figure& a, const Figure& b) {
    switch (info(a.symbol).better) {
        case Better::higher: return a.value.worst < b.value.worst;
        case Better::lower: return a.value.worst > b.value.worst;
        default: return false;
    }
}

/// Measurements of one figure under different conditions are different figures.
bool same_conditions(const Figure& a, const Figure& b) { return a.symbol == b.symbol && a.at == b.at && a.both_legs == b.both_legs; }

/// Whether a reading speaks of what a type's figure speaks of: within a factor of 2 in voltage, 3 in current and in frequency, and
/// within 20 K; a condition that is not stated counts as the usual one. Common practice, no source.
bool comparable(const Figure& reading, const Figure& figure) {
    const Conditions& usual = info(figure.symbol).usual;
    const auto near = [](std::optional<double> a, std::optional<double> b, const std::optional<double>& otherwise, double factor) {
        if (!a) a = otherwise;
        if (!b) b = otherwise;
        if (!a || !b) return true;
        if (*a == *b) return true;
        return *a > 0 && *b > 0 && std::max(*a / *b, *b / *a) <= factor * (1 + 1e-9);
    };
    const auto warm = [&](const Conditions& at) { return at.temperature ? at.temperature : usual.temperature; };
    if (const auto a = warm(reading.at), b = warm(figure.at); a && b && std::abs(*a - *b) > 20) return false;
    return near(reading.at.voltage, figure.at.voltage, usual.voltage, 2) && near(reading.at.current, figure.at.current, usual.current, 3) &&
           near(reading.at.frequency, figure.at.frequency, usual.frequency, 3);
}

bool matches_comparison(const Lot& lot, std::string_view piece, bool& understood) {
    for (const std::string_view op : {">=", "<=", "=", ">", "<"}) {
        const std::size_t at = piece.find(op);
        if (at == std::string_view::npos || at == 0) continue;
        const auto symbol = find_symbol(piece.substr(0, at), lot.part.family);
        if (!symbol) {
            for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor}) understood |= find_symbol(piece.substr(0, at), family).has_value();
            return false;
        }
        understood = true;
        const double wanted = parse_quantity(piece.substr(at + op.size()), info(*symbol).unit);
        for (const Figure& figure : lot.part.figures) {
            if (figure.symbol != *symbol) continue;
            const double value = figure.value.worst;
            const double slack = 1e-9 * std::abs(wanted);
            if (op == ">=" ? value >= wanted - slack : op == "<=" ? value <= wanted + slack : op == ">" ? value > wanted + slack
                : op == "<" ? value < wanted - slack : std::abs(value - wanted) <= slack)
                return true;
        }
        return false;
    }
    return false;
}

}  // namespace

std::string lot_label(std::int64_t number) {
    // 23 is prime and none of 1 … 9, 9·10^k is divisible by it: changing one digit, or swapping neighbours, changes the rest.
    constexpr std::string_view letters = "ABCDEFGHJKLMNPRSTUVWXYZ";
    static_assert(letters.size() == 23);
    return std::to_string(number) + "-" + letters[static_cast<std::size_t>(number % 23)];
}

Lot as_lot(const PartRecord& part, const LotRecord& lot, const std::vector<ReadingRecord>& readings) {
    Lot result;
    result.label = lot_label(lot.number);
    result.part = part.part;
    result.origin = lot.origin;
    result.count = lot.count;
    std::vector<Figure> counted;
    for (const ReadingRecord& reading : readings) {
        if (reading.set_aside) continue;
        if (std::string why = outside_limits(part.part, reading.figure); !why.empty() && !result.suspect) {
            result.suspect = true;
            result.suspect_why = std::move(why);
        }
        if (info(reading.figure.symbol).rating) continue;  // a rating is what the type promises, not what one part bore once
        Figure figure = reading.figure;
        figure.known = Known::measured;
        const auto found = std::find_if(counted.begin(), counted.end(), [&](const Figure& other) { return same_conditions(figure, other); });
        if (found == counted.end()) counted.push_back(std::move(figure));
        else if (worse(figure, *found)) *found = std::move(figure);
    }
    // A measurement takes the place of estimates of its kind under like conditions, and of a published figure under the same. One under
    // quite other conditions speaks for none of them: carried over decades of current or by tens of kelvin it would be a guess.
    std::vector<Figure> merged;
    for (Figure& figure : counted) {
        const auto of_symbol = [&](const Figure& other) { return other.symbol == figure.symbol; };
        const auto like = [&](const Figure& other) { return of_symbol(other) && comparable(figure, other); };
        const auto& type = part.part.figures;
        if (std::any_of(type.begin(), type.end(), of_symbol) && std::none_of(type.begin(), type.end(), like)) {
            result.uncounted.emplace_back(figure.symbol, fmt::format("{} measured as {}: too far from the conditions of its type's figures to count", info(figure.symbol).name,
                                                                     format_figure(figure)));
            continue;
        }
        std::erase_if(result.part.figures, [&](const Figure& other) {
            return of_symbol(other) && (other.known == Known::kind ? like(other) : same_conditions(other, figure));
        });
        merged.push_back(std::move(figure));
    }
    result.part.figures.insert(result.part.figures.begin(), merged.begin(), merged.end());
    return result;
}

std::vector<Lot> Store::engine_lots(std::optional<Family> family) const {
    std::map<std::int64_t, PartRecord> types;
    for (PartRecord& part : parts()) types.emplace(part.id, std::move(part));
    std::vector<Lot> result;
    for (const LotRecord& lot : lots()) {
        const PartRecord& part = types.at(lot.part_id);
        if (family && part.part.family != *family) continue;
        result.push_back(as_lot(part, lot, readings(lot.id)));
    }
    return result;
}

std::optional<Lot> Store::engine_lot(std::string_view label_or_part_name) const {
    if (const auto lot = lot_labelled(label_or_part_name)) return as_lot(*part(lot->part_id), *lot, readings(lot->id));
    if (const auto type = part_named(label_or_part_name)) {
        Lot lot;
        lot.part = type->part;
        return lot;
    }
    return std::nullopt;
}

std::vector<LotRecord> Store::find(std::string_view query) const {
    std::map<std::int64_t, PartRecord> types;
    for (PartRecord& part : parts()) types.emplace(part.id, std::move(part));
    std::vector<std::string> pieces;
    std::istringstream words{std::string(query)};
    for (std::string piece; words >> piece;) pieces.push_back(piece);
    std::vector<LotRecord> found;
    for (const LotRecord& record : lots()) {
        const PartRecord& type = types.at(record.part_id);
        const Lot lot = as_lot(type, record, readings(record.id));
        std::string text = lot.label + " " + type.part.name + " " + record.place + " " + record.note + " " + record.donor + " " + record.date_code + " " +
                           std::string(to_string(record.origin)) + " " + std::string(to_string(type.part.family));
        for (const auto& [name, value] : type.part.attributes) text += " " + value;
        for (const Figure& figure : lot.part.figures)
            text += " " + std::string(info(figure.symbol).name) + " " + format_quantity(figure.value.worst, info(figure.symbol).unit);
        text = folded(text);
        const bool all = std::all_of(pieces.begin(), pieces.end(), [&](const std::string& piece) {
            const std::size_t colon = piece.find(':');
            if (colon != std::string::npos) {
                const std::string key = folded(piece.substr(0, colon)), value = folded(piece.substr(colon + 1));
                if (key == "family") return folded(to_string(type.part.family)) == value;
                if (key == "origin") return folded(to_string(record.origin)) == value;
                if (key == "place") return folded(record.place).find(value) != std::string::npos;
                if (key == "technology") return folded(attribute(type.part, "technology")) == value;
            }
            bool understood = false;
            if (matches_comparison(lot, piece, understood)) return true;
            return !understood && text.find(folded(piece)) != std::string::npos;
        });
        if (all) found.push_back(record);
    }
    return found;
}

Edit take_edit(const Store& store, const LotRecord& lot, int count) {
    (void)store;
    if (count < 1) throw EditRefused(fmt::format("{} pieces cannot be taken", count));
    if (count > lot.count)
        throw EditRefused(fmt::format("{} holds {} {}; {} cannot be taken", lot_label(lot.number), lot.count, lot.count == 1 ? "piece" : "pieces", count));
    LotRecord after = lot;
    after.count -= count;
    return {fmt::format("take {} of {}", count, lot_label(lot.number)), {Change<LotRecord>{lot, after}}};
}

Edit put_edit(const Store& store, const LotRecord& lot, int count, const std::string& place) {
    (void)store;
    if (count < 1) throw EditRefused(fmt::format("{} pieces cannot be put", count));
    LotRecord after = lot;
    after.count += count;
    if (!place.empty()) after.place = place;
    return {fmt::format("put {} to {}", count, lot_label(lot.number)), {Change<LotRecord>{lot, after}}};
}

}  // namespace binwright
