// SPDX-License-Identifier: GPL-3.0-or-later
// Physical quantities as people write them: reading, range-checking of form, and printing. Inside the program every
// quantity is a double in base SI units; temperatures are kelvin inside and °C wherever people or files see them.
#pragma once
#include <string>
#include <string_view>
#include <vector>

#include "engine/fault.hpp"

namespace binwright {

inline constexpr double kCelsiusZero = 273.15;  ///< 0 °C in kelvin

enum class Unit {
    none,  ///< pure number (turns ratio, counts)
    fraction,  ///< "75 %" or 0.75
    volt, ampere, ohm, siemens, farad, henry, hertz, second, watt, joule, coulomb,
    celsius,          ///< a temperature: read and printed in °C, held in kelvin
    kelvin,           ///< a temperature difference
    kelvin_per_watt, ampere_per_second, ampere2_second, metre, metre2, metre3, gram, per_kelvin,
};

/// Reads one quantity: "22 uF", "22 µF", "17.5 mohm", "-10 °C", "20 000 h", "8 K/W", "75 %", "0.30 A/us", "60 A2s",
/// RKM codes of IEC 60062 ("4R7", "2u2", "R015"), a prefix without unit ("470u") where the unit is known.
/// @param bare_allowed  accept a number without prefix and unit, taken in base units (°C for celsius)
/// @returns base SI units (kelvin for celsius, seconds for "2 h", 0.75 for "75 %"); always finite
/// @throws InputError with place.column = 1-based character within `text`, a whole sentence, and what was expected
[[nodiscard]] double parse_quantity(std::string_view text, Unit unit, bool bare_allowed = false);

/// A closed interval, lowest ≤ highest.
struct Range {
    double lowest = 0;
    double highest = 0;
    [[nodiscard]] bool single() const { return lowest == highest; }
    [[nodiscard]] double middle() const { return 0.5 * (lowest + highest); }
};

/// Reads "10.5 V .. 15 V", "10.5 .. 15 V" or a single quantity (lowest = highest); an open end ("..50m", "60..") is
/// ±infinity. @throws InputError as parse_quantity; also when lowest > highest.
[[nodiscard]] Range parse_range(std::string_view text, Unit unit, bool bare_allowed = false);

/// Prints with an SI prefix and `digits` significant digits, trailing zeros dropped unless they matter:
/// 0.0175 Ω → "17.5 mΩ", 318.15 K as celsius → "45 °C", 7.2e7 s → "20 000 h", 0.8 → "80 %". A space before the unit.
[[nodiscard]] std::string format_quantity(double value, Unit unit, int digits = 3);

/// Prints so that parse_quantity gives back the same double (for files).
[[nodiscard]] std::string format_exact(double value, Unit unit);

/// "V", "Ω", "°C", "K/W" …: the base unit as printed.
[[nodiscard]] std::string_view unit_symbol(Unit unit);

/// "a voltage such as 12 V": what to say when something of this unit was expected.
[[nodiscard]] std::string_view expected_text(Unit unit);

/// Of the known words, the one nearest to `word` by edit distance, or empty when none is near (for "did you mean").
[[nodiscard]] std::string nearest_word(std::string_view word, const std::vector<std::string>& known);

}  // namespace binwright
