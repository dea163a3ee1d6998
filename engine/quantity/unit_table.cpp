// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/quantity/unit_table.hpp"

#include <fmt/format.h>

#include <array>
#include <charconv>
#include <cmath>

namespace binwright {
namespace {

constexpr UnitSpelling kSpellings[] = {
    {Unit::fraction, "%", false, 0.01},
    {Unit::volt, "V", true, 1},
    {Unit::ampere, "A", true, 1},
    {Unit::ohm, "Ω", true, 1},       // ohm sign and Greek capital omega
    {Unit::ohm, "\u2126", true, 1},
    {Unit::ohm, "ohm", true, 1},
    {Unit::ohm, "Ohm", true, 1},
    {Unit::ohm, "ohms", true, 1},
    {Unit::ohm, "R", false, 1},
    {Unit::siemens, "S", true, 1},
    {Unit::farad, "F", true, 1},
    {Unit::henry, "H", true, 1},
    {Unit::hertz, "Hz", true, 1},
    {Unit::second, "s", true, 1},
    {Unit::second, "min", false, 60},
    {Unit::second, "h", false, 3600},
    {Unit::second, "hours", false, 3600},
    {Unit::second, "d", false, 86400},
    {Unit::second, "years", false, 365.25 * 86400},
    {Unit::watt, "W", true, 1},
    {Unit::joule, "J", true, 1},
    {Unit::coulomb, "C", true, 1},
    {Unit::celsius, "°C", false, 1},
    {Unit::kelvin, "K", false, 1},
    {Unit::kelvin_per_watt, "K/W", true, 1},
    {Unit::kelvin_per_watt, "°C/W", false, 1},
    {Unit::kelvin_per_watt, "degC/W", false, 1},
    {Unit::kelvin_per_watt, "C/W", false, 1},
    {Unit::ampere_per_second, "A/s", true, 1},
    {Unit::ampere_per_second, "A/us", true, 1e6},
    {Unit::ampere_per_second, "A/µs", true, 1e6},
    {Unit::ampere_per_second, "A/μs", true, 1e6},
    {Unit::ampere_per_second, "A/ms", true, 1e3},
    {Unit::ampere2_second, "A2s", true, 1},
    {Unit::ampere2_second, "A²s", true, 1},
    {Unit::ampere2_second, "A^2s", true, 1},
    {Unit::metre, "m", true, 1},
    {Unit::metre, "cm", false, 1e-2},
    {Unit::metre2, "m2", false, 1},
    {Unit::metre2, "m²", false, 1},
    {Unit::metre2, "cm2", false, 1e-4},
    {Unit::metre2, "cm²", false, 1e-4},
    {Unit::metre2, "mm2", false, 1e-6},
    {Unit::metre2, "mm²", false, 1e-6},
    {Unit::metre3, "m3", false, 1},
    {Unit::metre3, "m³", false, 1},
    {Unit::metre3, "cm3", false, 1e-6},
    {Unit::metre3, "cm³", false, 1e-6},
    {Unit::metre3, "mm3", false, 1e-9},
    {Unit::metre3, "mm³", false, 1e-9},
    {Unit::gram, "g", true, 1},
    {Unit::per_kelvin, "1/K", false, 1},
    {Unit::per_kelvin, "/K", false, 1},
    {Unit::per_kelvin, "%/K", false, 0.01},
};

struct UnitText {
    Unit unit;
    std::string_view symbol, noun, example;
    bool prefixes;
};
constexpr UnitText kTexts[] = {
    {Unit::none, "", "a pure number", "a pure number such as 1.5", false},
    {Unit::fraction, "%", "a share", "a share such as 75 %", false},
    {Unit::volt, "V", "a voltage", "a voltage such as 12 V", true},
    {Unit::ampere, "A", "a current", "a current such as 2.5 A", true},
    {Unit::ohm, "Ω", "a resistance", "a resistance such as 17.5 mΩ", true},
    {Unit::siemens, "S", "a conductance", "a conductance such as 20 S", true},
    {Unit::farad, "F", "a capacitance", "a capacitance such as 470 µF", true},
    {Unit::henry, "H", "an inductance", "an inductance such as 33 µH", true},
    {Unit::hertz, "Hz", "a frequency", "a frequency such as 100 kHz", true},
    {Unit::second, "s", "a time", "a time such as 400 ns or 2000 h", true},
    {Unit::watt, "W", "a power", "a power such as 5 W", true},
    {Unit::joule, "J", "an energy", "an energy such as 12 µJ", true},
    {Unit::coulomb, "C", "a charge", "a charge such as 60 nC", true},
    {Unit::celsius, "°C", "a temperature", "a temperature such as 45 °C", false},
    {Unit::kelvin, "K", "a temperature difference", "a temperature difference such as 10 K", false},
    {Unit::kelvin_per_watt, "K/W", "a thermal resistance", "a thermal resistance such as 12 K/W", false},
    {Unit::ampere_per_second, "A/s", "a current slope", "a current slope such as 0.3 A/µs", true},
    {Unit::ampere2_second, "A²s", "a melting integral", "a melting integral such as 60 A²s", false},
    {Unit::metre, "m", "a length", "a length such as 1.5 mm", true},
    {Unit::metre2, "m²", "an area", "an area such as 65 mm²", false},
    {Unit::metre3, "m³", "a volume", "a volume such as 4.2 cm³", false},
    {Unit::gram, "g", "a mass", "a mass such as 12 g", true},
    {Unit::per_kelvin, "1/K", "a temperature coefficient", "a temperature coefficient such as 0.055 1/K", false},
};

const UnitText& text_of(Unit unit) {
    for (const UnitText& text : kTexts)
        if (text.unit == unit) return text;
    return kTexts[0];
}

struct Prefix {
    std::string_view text;
    int exponent;
};
constexpr Prefix kPrefixes[] = {{"f", -15}, {"p", -12}, {"n", -9}, {"u", -6}, {"µ", -6}, {"μ", -6}, {"m", -3},
                                {"k", 3},   {"K", 3},   {"M", 6},  {"G", 9},  {"T", 12}};

/// `digits` significant digits without an exponent, zeros behind the point dropped.
std::string significant(double value, int digits) {
    if (value == 0) return "0";
    const int exponent = static_cast<int>(std::floor(std::log10(std::abs(value))));
    const int decimals = std::max(0, digits - 1 - exponent);
    std::string text = fmt::format("{:.{}f}", value, decimals);
    if (decimals > 0) {
        while (text.back() == '0') text.pop_back();
        if (text.back() == '.') text.pop_back();
    }
    if (text == "-0") text = "0";
    return text;
}

/// Groups of three from five digits on: 20 000.
std::string grouped(std::string text) {
    const std::size_t point = std::min(text.find('.'), text.size());
    const std::size_t first = text.starts_with('-') ? 1 : 0;
    if (point - first < 5) return text;
    for (std::size_t k = point; k > first + 3;) {
        k -= 3;
        text.insert(k, " ");
    }
    return text;
}

double rounded(double value, int digits) {
    if (value == 0 || !std::isfinite(value)) return value;
    const int exponent = static_cast<int>(std::floor(std::log10(std::abs(value))));
    const double scale = std::pow(10.0, digits - 1 - exponent);
    return std::isfinite(scale) ? std::round(value * scale) / scale : value;
}

}  // namespace

std::span<const UnitSpelling> unit_spellings() { return kSpellings; }
bool prefixes_of(Unit unit) { return text_of(unit).prefixes; }
std::string_view unit_noun(Unit unit) { return text_of(unit).noun; }
std::string_view unit_symbol(Unit unit) { return text_of(unit).symbol; }
std::string_view expected_text(Unit unit) { return text_of(unit).example; }

std::optional<double> prefix_factor(std::string_view prefix) {
    for (const Prefix& known : kPrefixes)
        if (known.text == prefix) {
            double value = 0;
            const std::string text = "1e" + std::to_string(known.exponent);
            std::from_chars(text.data(), text.data() + text.size(), value);
            return value;
        }
    return std::nullopt;
}

std::string format_quantity(double value, Unit unit, int digits) {
    if (!std::isfinite(value)) return "unknown";
    const std::string symbol(unit_symbol(unit));
    switch (unit) {
        case Unit::none: return significant(value, digits);
        case Unit::fraction: return significant(100 * value, digits) + " %";
        case Unit::celsius: return significant(value - kCelsiusZero, digits) + " °C";
        case Unit::metre2: return significant(1e6 * value, digits) + " mm²";
        case Unit::metre3: return significant(1e6 * value, digits) + " cm³";
        case Unit::ampere_per_second: return significant(1e-6 * value, digits) + " A/µs";
        case Unit::second:
            if (std::abs(value) >= 3600) return grouped(significant(value / 3600, digits)) + " h";
            if (std::abs(value) >= 60) return significant(value / 60, digits) + " min";
            break;
        default: break;
    }
    if (!prefixes_of(unit)) return grouped(significant(value, digits)) + " " + symbol;
    constexpr std::string_view names[] = {"f", "p", "n", "µ", "m", "", "k", "M", "G", "T"};
    const double shown = rounded(value, digits);
    int step = shown == 0 ? 0 : static_cast<int>(std::floor(std::log10(std::abs(shown)) / 3 + 1e-12));
    step = std::clamp(step, -5, 4);
    if (unit == Unit::farad && step >= -2 && step <= -1 && std::abs(shown) < 0.1) step = -2;  // the trade writes 4700 µF
    if (unit == Unit::hertz && step < 0) step = 0;
    return significant(shown / std::pow(10.0, 3 * step), digits) + " " + std::string(names[step + 5]) + symbol;
}

std::string format_exact(double value, Unit unit) {
    // Shortest digits in the scaled unit, if they read back to the same double; else in base units.
    const auto reads_back = [&](const std::string& text) {
        try {
            return parse_quantity(text, unit, unit == Unit::none) == value;
        } catch (const InputError&) {
            return false;
        }
    };
    for (int digits = 1; digits <= 17; ++digits) {
        const std::string text = format_quantity(value, unit, digits);
        if (text.find("000 ") == std::string::npos && reads_back(text)) return text;
    }
    if (unit == Unit::celsius) {
        const std::string text = fmt::format("{} K", value);
        return text;
    }
    if (unit == Unit::fraction || unit == Unit::none) return fmt::format("{}", value);
    return fmt::format("{} {}", value, unit_symbol(unit));
}

}  // namespace binwright
