// SPDX-License-Identifier: GPL-3.0-or-later
// Rulebooks: derating practice as data. A rule selects parts, names a stress and a rating, and bounds one by the other.
#pragma once
#include <functional>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "engine/part/part.hpp"

namespace binwright {

/// What a rule can speak of. One table (stresses()) gives name, unit, meaning and family.
enum class Stress {
    voltage_average, voltage_peak_repetitive, voltage_peak_single, voltage_reverse,
    gate_voltage, drive_voltage_lowest,
    current_average, current_rms, current_peak, current_surge, ripple_current,
    surge_integral,  ///< ∫i²dt of the hot connection, for a fuse
    output_ripple,  ///< peak to peak at the output's terminals
    power, junction_temperature, hot_spot_temperature, runaway_gain, life,
    air_temperature,    ///< of the air beside a capacitor
    series_resistance,  ///< of the path that charges a capacitor, without its own ESR
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
    not_permitted,  ///< such a part may not be used at all
    not_covered,    ///< the rulebook says nothing of it: an answer of its own
};

/// An expression of figures, "(T_jmax - 25 °C) / R_th(j-c)", in postfix order; its unit is that of the stress it limits.
struct Expression {
    struct Step {
        char what = 'n';  ///< f: a figure, n: a number; + - * /
        Symbol figure{};
        double number = 0;
    };
    std::string text;  ///< as written
    std::vector<Step> steps;
};

/// One bound of several, of which the lowest or the greatest counts.
struct Piece {
    BoundKind bound{};
    std::optional<Symbol> rating;
    std::string requirement;
    std::optional<Expression> expression;
    double value = 0;
};

/// A value over a temperature: linear between its points, constant before the first; beyond the last nothing is permitted.
struct Curve {
    Stress over{};  ///< air_temperature, hot_spot_temperature, junction_temperature
    std::vector<std::pair<double, double>> points;  ///< [K], value
};

/// `where`: a figure of the part against a value, or an attribute against a word.
struct Condition {
    std::string text;            ///< "T_jmax >= 175 °C"
    std::optional<Symbol> figure;
    std::string attribute, word;
    std::string compare;         ///< >= <= > < = !=
    double value = 0;
};

/// At which case temperature a rating counts that falls with it (I_D, P_tot).
enum class RatedAt { usual, case_, printed };  ///< usual: I_D at the case's own temperature, all else as printed

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

    bool of_part = false;                  ///< not permitted or not covered whatever it sees: there is no stress
    std::optional<Expression> expression;  ///< instead of a rating
    std::vector<Piece> several;            ///< instead of one bound
    bool lowest = true;                    ///< of several the lowest counts; else the greatest
    std::optional<Curve> curve;            ///< instead of `value`
    RatedAt rated_at = RatedAt::usual;
    std::vector<Condition> where;          ///< all must be true
    std::string charged_by;                ///< "low impedance" | "high impedance": border kLowImpedance
    std::string instead_of;                ///< id of the rule that this one stands in for where it applies
    std::string reading;                   ///< which of several readings of the source was taken, and which was not
    std::string book;                      ///< the rulebook it was written in, where that is another (based_on)
};

/// A path of less than this for each volt applied charges from a low impedance [Ω/V]: the traditional border of 3 Ω/V that
/// GJB/Z 35 also names.
inline constexpr double kLowImpedance = 3;

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
    std::string name, title, text_source;  ///< name: with its level, "gjb-z-35:II"
    Allowances allowances;
    std::vector<Rule> rules;
    std::string stem;                 ///< the name without its level
    std::string level;                ///< of this reading; empty where the book has none
    std::vector<std::string> levels;  ///< in the order of the file
    std::string usual_level;          ///< taken where none is named
    std::string based_on;             ///< name of the book below it
};

/// Gives the book that a `based_on` names; empty where there is none of that name.
using FindBook = std::function<const Rulebook*(const std::string& name)>;

/// @param level  which level of the book; empty: the one it names as its usual one
/// @param find   for `based_on`; empty: the shipped ones
/// @throws InputError with every fault at once, each with line and column
[[nodiscard]] Rulebook read_rulebook(std::string_view text, const std::string& file, const std::string& level = {}, const FindBook& find = {});
/// Those that came with the program, one for each level; the first is "house".
[[nodiscard]] const std::vector<Rulebook>& rulebooks();
/// By name, with or without a level ("gjb-z-35:II", "gjb-z-35").
[[nodiscard]] const Rulebook* find_rulebook(std::string_view name);

/// The rules that apply to a part: of those on one stress with the same id stem the most specific selector wins, and a rule
/// goes before the one that it names in instead_of; several different rules on one stress all apply (the tightest binds).
/// Those whose condition cannot be told for want of a figure are among them.
[[nodiscard]] std::vector<const Rule*> rules_for(const Rulebook& book, const Part& part);

/// A rule that applies to a part in its place.
struct Applied {
    const Rule* rule = nullptr;
    std::string unknown;               ///< the figure without which it cannot be told whether it applies; empty: it does
    std::vector<const Rule*> before;   ///< more general rules that it goes before
};
/// @param ohms_per_volt  of the path that charges a capacitor; empty: not known, then low
[[nodiscard]] std::vector<Applied> applied_rules(const Rulebook& book, const Part& part, std::optional<double> ohms_per_volt = std::nullopt);

}  // namespace binwright
