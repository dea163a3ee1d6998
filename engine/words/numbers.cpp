// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/words/numbers.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cctype>
#include <cmath>

namespace binwright {
namespace {

constexpr int kMostDecimals = 9;

std::string grouped(std::string text) {
    const std::size_t point = std::min(text.find('.'), text.size()), first = text.starts_with('-') ? 1 : 0;
    if (point - first < 5) return text;
    for (std::size_t k = point; k > first + 3;) {
        k -= 3;
        text.insert(k, " ");
    }
    return text;
}

std::string fixed(double value, int decimals) {
    std::string text = fmt::format("{:.{}f}", value, std::max(0, decimals));
    if (text.find_first_not_of("-0.") == std::string::npos && text.starts_with('-')) text.erase(0, 1);
    return grouped(text);
}

}  // namespace

double Shown::round(double value) const {
    const double own = (unit == Unit::celsius ? value - kCelsiusZero : value) / factor, scale = std::pow(10.0, decimals);
    return std::round(own * scale) / scale;
}

std::string Shown::operator()(double value) const {
    if (!std::isfinite(value)) return "beyond all bounds";
    return fixed(round(value), decimals) + (symbol.empty() ? "" : " " + symbol);
}

std::string Shown::difference(double value) const {
    const double own = std::abs(value);
    if (unit == Unit::celsius) return fixed(std::round(own * std::pow(10.0, decimals)) / std::pow(10.0, decimals), decimals) + " K";
    const bool prefixed = unit == Unit::volt || unit == Unit::ampere || unit == Unit::watt;
    if (prefixed && own < 0.1 * factor) return format_quantity(own, unit, 2);
    const double scale = std::pow(10.0, decimals);
    return fixed(std::round(own / factor * scale) / scale, decimals) + (symbol.empty() ? "" : " " + symbol);
}

Shown shown_for(double value, Unit unit) {
    Shown shown;
    shown.unit = unit;
    const double size = std::abs(unit == Unit::celsius ? value - kCelsiusZero : value);
    if (unit == Unit::celsius) {
        shown.symbol = "°C";
        return shown;
    }
    if (unit == Unit::second) {
        shown.factor = size >= 3600 ? 3600 : 1;
        shown.symbol = size >= 3600 ? "h" : "s";
    } else if (unit == Unit::fraction) {
        shown.factor = 0.01;
        shown.symbol = "%";
    } else {
        shown.symbol = unit_symbol(unit);
        if (unit != Unit::none && unit != Unit::kelvin && unit != Unit::kelvin_per_watt && size > 0 && size < 0.9995) {
            shown.factor = size < 0.9995e-3 ? 1e-6 : 1e-3;
            shown.symbol = (size < 0.9995e-3 ? "µ" : "m") + shown.symbol;
        }
    }
    if (size > 0 && std::isfinite(size)) {
        const int exponent = static_cast<int>(std::floor(std::log10(size / shown.factor) + 2.2e-4));
        shown.decimals = 2 - exponent;
        if (unit != Unit::second) shown.decimals = std::max(0, shown.decimals);
        if (unit == Unit::none) shown.decimals = std::min(2, shown.decimals);
    }
    return shown;
}

Shown shown_for(double stress, double limit, Unit unit) {
    const double distance = std::isfinite(stress) ? std::abs(stress - limit) : 0;
    const bool first = std::isfinite(stress) && std::abs(stress) >= std::abs(limit);
    Shown shown = shown_for(first ? stress : limit, unit);
    if (!(distance > 1e-9 * std::abs(limit))) return shown;
    while (shown.decimals < kMostDecimals) {
        const double apart = std::abs(shown.round(stress) - shown.round(limit)) * shown.factor;
        if (apart > 0 && std::abs(apart - distance) <= 0.12 * distance) break;
        ++shown.decimals;
    }
    return shown;
}

std::string with_article(const std::string& text) {
    if (text.empty()) return text;
    const auto whole = text.substr(0, text.find_first_not_of("0123456789"));
    bool vowel = text[0] == '8' || whole == "11" || whole == "18";
    if (std::isalpha(static_cast<unsigned char>(text[0]))) {
        const bool letter = text.size() == 1 || text[1] == '_' || std::isupper(static_cast<unsigned char>(text[1]));  // spelt out
        vowel = letter ? std::string("AEFHILMNORSX").find(text[0]) != std::string::npos : std::string("aeioAEIO").find(text[0]) != std::string::npos;
    }
    return (vowel ? "an " : "a ") + text;
}

std::string joined(const std::vector<std::string>& pieces, std::string_view last) {
    std::string out;
    for (std::size_t k = 0; k < pieces.size(); ++k) {
        if (k > 0) out += k + 1 == pieces.size() ? std::string(last) : ", ";
        out += pieces[k];
    }
    return out;
}

}  // namespace binwright
