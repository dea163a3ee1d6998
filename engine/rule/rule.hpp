// SPDX-License-Identifier: GPL-3.0-or-later
// Rulebooks: derating practice as data. A rule selects parts, names a stress and a rating, and bounds one by the other.
#pragma once
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "engine/part/part.hpp"

namespace binwright {

/// What a rule can speak of. One table (stresses()) gives name, unit, meaning and family.
enum class Stress {
    voltage_average, voltage_peak_repetitive, voltage_peak_single, voltage_reverse,
    gate_voltage, drive_voltage_lowest,
    current_average, current_rms, current_peak, current_surge, ripple_current,
    output_ripple,  ///< peak to peak at the output's terminals
    power, junction_temperature, hot_spot_temperature, runaway_gain, life,
    regulation,  ///< of the converter: 1 where every point of the operating range is reached, else the share that is
};
struct StressInfo {
    Stress stress;
    std::string_view name;     ///< "voltage_peak_repetitive"
    std::string_view meaning;  ///< "repetitive peak voltage"
    Unit unit;
};
[[nodiscard]] std::span<const StressInfo> stresses();
[[nodiscard]] const StressInfo& info(Stress stress);
[[nodiscard]] std::optional<Stress> find_stress(std::string_view name);

enum class BoundKind {
    fraction,   ///< stress ≤ value · rating (temperatures taken in °C)
    absolute,   ///< stress ≤ value
    below,      ///< stress ≤ rating − value
    at_least,   ///< stress ≥ value, or ≥ the named rating or requirement
};

struct Rule {
    std::string id;       ///< "aluminium-voltage"
    std::string title;    ///< "aluminium voltage"
    std::string selects;  ///< "switch", "rectifier/schottky", "capacitor/aluminium", "capacitor", "converter"
    Stress stress{};
    std::optional<Symbol> rating;
    std::string requirement;  ///< instead of a rating: "life", "R_DS(on) gate voltage" … as the file names it
    BoundKind bound{};
    double value = 0;     ///< fraction, limit in the stress's unit (kelvin for temperatures), or distance [K or unit]
    std::string why, source, clause, known;  ///< known: seen | seen, secondary | from memory | common practice
    Place place;
};

/// What a rulebook assumes where nothing was measured; each is named in the findings that rest on it.
struct Allowances {
    double switch_overshoot = 0.20;      ///< fraction of the off-state voltage
    double rectifier_overshoot = 0.30;
    double sharing = 0.10;               ///< a dual's or parallel's busier leg carries (1 + sharing)/n of the current
    double aged_capacitance = 0.80;      ///< pulled aluminium, unmeasured: factor on C
    double aged_esr = 2.0;               ///< and on ESR
    double measurement_expiry = 2 * 365.25 * 86400;  ///< of parts that age [s]
};

struct Rulebook {
    std::string name, title, text_source;
    Allowances allowances;
    std::vector<Rule> rules;
};

/// @throws InputError with every fault at once, each with line and column
[[nodiscard]] Rulebook read_rulebook(std::string_view text, const std::string& file);
/// Those that came with the program; the first is "house".
[[nodiscard]] const std::vector<Rulebook>& rulebooks();
[[nodiscard]] const Rulebook* find_rulebook(std::string_view name);

/// The rules that apply to a part: of those on one stress with the same id stem the most specific selector wins; several
/// different rules on one stress all apply (the tightest binds).
[[nodiscard]] std::vector<const Rule*> rules_for(const Rulebook& book, const Part& part);

}  // namespace binwright
