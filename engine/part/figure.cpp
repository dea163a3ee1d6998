// SPDX-License-Identifier: GPL-3.0-or-later
// Figures as written: a value or a spread, its column, its conditions.
#include <algorithm>
#include <cmath>

#include "engine/part/part.hpp"

namespace binwright {
namespace {

int character(std::string_view text, std::size_t byte) {
    int count = 1;
    for (std::size_t k = 0; k < byte && k < text.size(); ++k)
        if ((static_cast<unsigned char>(text[k]) & 0xC0) != 0x80) ++count;
    return count;
}

std::string_view trimmed(std::string_view text) {
    while (!text.empty() && (text.front() == ' ' || text.front() == '\t')) text.remove_prefix(1);
    while (!text.empty() && (text.back() == ' ' || text.back() == '\t')) text.remove_suffix(1);
    return text;
}

/// Runs a reading of `part`, which lies within `whole`, and counts its places in the whole.
template <class Read>
auto placed(std::string_view whole, std::string_view part, Read read) {
    try {
        return read(part);
    } catch (InputError& error) {
        const int offset = character(whole, static_cast<std::size_t>(part.data() - whole.data())) - 1;
        for (Fault& fault : error.faults) fault.place.column += offset;
        throw InputError(error.faults);
    }
}

/// Takes a word off the front or the back; true when it was there.
bool take_word(std::string_view& text, std::string_view word) {
    if (text.starts_with(word) && (text.size() == word.size() || text[word.size()] == ' ')) {
        text = trimmed(text.substr(word.size()));
        return true;
    }
    if (text.ends_with(word) && text.size() > word.size() && text[text.size() - word.size() - 1] == ' ') {
        text = trimmed(text.substr(0, text.size() - word.size()));
        return true;
    }
    return false;
}

bool takes_current(Symbol symbol) { return symbol == Symbol::V_F || symbol == Symbol::R_DSon || symbol == Symbol::Q_rr || symbol == Symbol::t_rr; }

void read_condition(Figure& figure, std::string_view whole, std::string_view text) {
    const auto try_unit = [&](Unit unit) -> std::optional<double> {
        try {
            return parse_quantity(text, unit);
        } catch (const InputError&) {
            return std::nullopt;
        }
    };
    if (text.ends_with("C") || text.ends_with("K")) {
        figure.at.temperature = placed(whole, text, [](std::string_view part) { return parse_quantity(part, Unit::celsius); });
        return;
    }
    // Only a unit tells conditions apart, so one must be written: a last letter that is none of a prefix.
    if (text.ends_with("Hz")) {
        figure.at.frequency = placed(whole, text, [](std::string_view part) { return parse_quantity(part, Unit::hertz); });
    } else if (text.ends_with("V")) {
        figure.at.voltage = placed(whole, text, [](std::string_view part) { return parse_quantity(part, Unit::volt); });
    } else if (text.ends_with("A")) {
        figure.at.current = placed(whole, text, [](std::string_view part) { return parse_quantity(part, Unit::ampere); });
    } else if (const auto value = try_unit(Unit::hertz);
               value && (figure.symbol == Symbol::ESR || figure.symbol == Symbol::tan_delta || figure.symbol == Symbol::I_ripple ||
                         figure.symbol == Symbol::C)) {
        figure.at.frequency = value;  // "38m@100k": only a frequency is meant
    } else if (const auto volts = try_unit(Unit::volt); volts && !takes_current(figure.symbol)) {
        figure.at.voltage = volts;
    } else {
        throw InputError(Fault{{"", 0, character(whole, static_cast<std::size_t>(text.data() - whole.data()))},
                               "",
                               "the condition \"" + std::string(text) + "\" has no unit that tells what it is",
                               "a voltage, a current, a frequency or a temperature with its unit"});
    }
}

Spread read_spread(std::string_view whole, std::string_view text, Unit unit, bool bare_allowed, Better better) {
    std::vector<std::string_view> pieces;
    for (std::size_t at = 0;;) {
        const std::size_t dots = text.find("..", at);
        pieces.push_back(trimmed(text.substr(at, dots == std::string_view::npos ? std::string_view::npos : dots - at)));
        if (dots == std::string_view::npos) break;
        at = dots + 2;
    }
    if (pieces.size() == 1) {
        const double value = placed(whole, text, [&](std::string_view part) { return parse_quantity(part, unit, bare_allowed); });
        return {value, value, value};
    }
    const auto refuse = [&](std::string message) {
        throw InputError(Fault{{"", 0, character(whole, static_cast<std::size_t>(text.data() - whole.data()))}, "", std::move(message),
                               "best .. typical .. worst, such as 12 .. 15 .. 17.5 mΩ"});
    };
    if (pieces.size() > 3) refuse("a spread has two or three values, not " + std::to_string(pieces.size()));
    std::size_t tail = pieces.back().size();  // the unit may stand once, behind the last value
    while (tail > 0 && !(pieces.back()[tail - 1] >= '0' && pieces.back()[tail - 1] <= '9')) --tail;
    std::vector<double> values;
    for (std::size_t k = 0; k < pieces.size(); ++k) {
        const bool bare = !pieces[k].empty() && pieces[k].back() >= '0' && pieces[k].back() <= '9';
        const std::string with_unit = std::string(pieces[k]) + (bare && k + 1 < pieces.size() ? std::string(pieces.back().substr(tail)) : "");
        try {
            values.push_back(parse_quantity(with_unit, unit, bare_allowed));
        } catch (InputError& error) {
            for (Fault& fault : error.faults)
                fault.place.column += character(whole, static_cast<std::size_t>(pieces[k].data() - whole.data())) - 1;
            throw InputError(error.faults);
        }
    }
    if (values.size() == 2) values.insert(values.begin() + 1, 0.5 * (values[0] + values[1]));
    const bool rising = values[0] <= values[1] && values[1] <= values[2];
    const bool falling = values[0] >= values[1] && values[1] >= values[2];
    if (!rising && !falling) refuse("the typical value lies outside the two ends");
    if ((better == Better::lower && !rising) || (better == Better::higher && !falling))
        refuse(std::string("the best value stands first, and here ") + (better == Better::lower ? "lower" : "higher") + " is better");
    return {values[0], values[1], values[2]};
}

}  // namespace

Figure parse_figure(Symbol symbol, std::string_view text, Known known, bool bare_allowed) {
    const SymbolInfo& row = info(symbol);
    Figure figure;
    figure.symbol = symbol;
    figure.known = known;
    const std::size_t at = text.find('@');
    std::string_view value = trimmed(text.substr(0, at));
    for (const auto& [word, column] : {std::pair{std::string_view("max"), Column::maximum}, {"min", Column::minimum}, {"typ", Column::typical}})
        if (take_word(value, word)) figure.column = column;
    figure.both_legs = take_word(value, "both legs");
    for (const auto& [word, column] : {std::pair{std::string_view("max"), Column::maximum}, {"min", Column::minimum}, {"typ", Column::typical}})
        if (figure.column == Column::none && take_word(value, word)) figure.column = column;
    try {
        figure.value = read_spread(text, value, row.unit, bare_allowed, row.better);
    } catch (InputError& error) {
        for (Fault& fault : error.faults) {
            if (fault.field.empty()) fault.field = std::string(row.name);
            const std::size_t stop = fault.message.find(" has no unit. ");  // say whose unit is missing
            if (stop != std::string::npos) fault.message.replace(stop, 13, " has no unit, and " + std::string(row.name) + " needs one.");
        }
        throw InputError(error.faults);
    }
    if (at != std::string_view::npos) {
        std::string_view rest = text.substr(at + 1);
        for (;;) {
            // A comma parts conditions when a blank follows or what follows is no digit; "0,5 A" keeps its decimal comma.
            std::size_t comma = rest.find(',');
            while (comma != std::string_view::npos && comma + 1 < rest.size() && rest[comma + 1] >= '0' && rest[comma + 1] <= '9' &&
                   comma > 0 && rest[comma - 1] >= '0' && rest[comma - 1] <= '9')
                comma = rest.find(',', comma + 1);
            const std::string_view piece = trimmed(rest.substr(0, comma));
            if (piece.empty())
                throw InputError(Fault{{"", 0, character(text, static_cast<std::size_t>(rest.data() - text.data()))},
                                       std::string(row.name), "a condition is missing behind @",
                                       "a voltage, a current, a frequency or a temperature with its unit"});
            read_condition(figure, text, piece);
            if (comma == std::string_view::npos) break;
            rest = rest.substr(comma + 1);
        }
    }
    return figure;
}

std::string format_figure(const Figure& figure) {
    const Unit unit = info(figure.symbol).unit;
    std::string text = figure.both_legs ? "both legs " : "";
    text += format_exact(figure.value.best, unit);
    if (!figure.value.exact())
        text += " .. " + format_exact(figure.value.typical, unit) + " .. " + format_exact(figure.value.worst, unit);
    if (figure.column != Column::none) text += " " + std::string(to_string(figure.column));
    std::string conditions;
    const auto add = [&](const std::optional<double>& value, Unit of) {
        if (value) conditions += (conditions.empty() ? " @ " : ", ") + format_exact(*value, of);
    };
    add(figure.at.voltage, Unit::volt);
    add(figure.at.current, Unit::ampere);
    add(figure.at.frequency, Unit::hertz);
    add(figure.at.temperature, Unit::celsius);
    return text + conditions;
}

std::string implausible(const Part& part, const Figure& figure) {
    struct Bounds { Symbol symbol; double lowest, highest; };
    // What small power parts can be at all; common practice, no source.
    constexpr Bounds kBounds[] = {
        {Symbol::V_DSS, 8, 2000},       {Symbol::V_GSS, 5, 50},        {Symbol::I_D, 0.05, 1000},      {Symbol::I_DM, 0.1, 5000},
        {Symbol::P_tot, 0.1, 2000},     {Symbol::R_DSon, 2e-4, 50},    {Symbol::V_GSth, 0.2, 8},       {Symbol::Q_g, 1e-10, 2e-6},
        {Symbol::Q_gd, 1e-11, 1e-6},    {Symbol::Q_gs, 1e-11, 1e-6},   {Symbol::C_oss, 1e-12, 5e-8},   {Symbol::R_g, 0.05, 100},
        {Symbol::V_RRM, 10, 3000},      {Symbol::I_FAV, 0.01, 500},    {Symbol::I_FSM, 0.1, 10000},    {Symbol::V_F, 0.1, 5},
        {Symbol::I_R, 1e-12, 1},        {Symbol::C_j, 1e-13, 2e-8},    {Symbol::Q_rr, 1e-11, 1e-4},    {Symbol::t_rr, 1e-9, 1e-4},
        {Symbol::T_jmax, 353, 573},     {Symbol::R_thjc, 0.05, 200},   {Symbol::R_thja, 5, 1000},      {Symbol::C, 1e-12, 1},
        {Symbol::U_R, 1, 2000},         {Symbol::ESR, 1e-4, 500},      {Symbol::tan_delta, 1e-5, 2},   {Symbol::I_ripple, 1e-3, 200},
        {Symbol::T_max, 333, 473},      {Symbol::life, 3.6e5, 3.6e8},
    };
    const SymbolInfo& row = info(figure.symbol);
    const double low = std::min(figure.value.best, figure.value.worst), high = std::max(figure.value.best, figure.value.worst);
    for (const Bounds& bounds : kBounds)
        if (bounds.symbol == figure.symbol && (!(low >= bounds.lowest) || !(high <= bounds.highest)))
            return std::string(row.name) + " of " + format_quantity(!(low >= bounds.lowest) ? low : high, row.unit) + " is outside what such a part can be (" +
                   format_quantity(bounds.lowest, row.unit) + " to " + format_quantity(bounds.highest, row.unit) + ")";
    if (figure.symbol == Symbol::ESR && part.family == Family::capacitor) {
        // ESR·C as a time: an aluminium electrolytic starts near 100 µs wet and is dead beyond some milliseconds; others are lower.
        for (const Figure& other : part.figures) {
            if (other.symbol != Symbol::C) continue;
            const double seconds = figure.value.typical * other.value.typical;
            const bool wet = attribute(part, "technology") == "aluminium";
            if (!(seconds <= (wet ? 5e-3 : 2e-3)))
                return "an ESR of " + format_quantity(figure.value.typical, Unit::ohm) + " on " + format_quantity(other.value.typical, Unit::farad) +
                       " is far beyond even a dried-out part";
            break;
        }
    }
    return "";
}

}  // namespace binwright
