// SPDX-License-Identifier: GPL-3.0-or-later
// Parts as values: a family, its figures with their conditions and with how each is known, and the lots of a bin.
#pragma once
#include <map>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "engine/quantity/quantity.hpp"

namespace binwright {

/// The first three are kept in bins and fitted into seats; the others stand beside them, in converter files only.
enum class Family { switch_, rectifier, capacitor, fuse, choke, resistor };

/// Letter symbols of IEC 60747-8 (switch), IEC 60747-2 (rectifier) and IEC 60384 (capacitor).
enum class Symbol {
    V_DSS, V_GSS, I_D, I_DM, P_tot, R_DSon, V_GSth, Q_g, Q_gd, Q_gs, C_oss, R_g,  // switch
    V_RRM, I_FAV, I_FSM, V_F, I_R, C_j, Q_rr, t_rr,                              // rectifier
    T_jmax, R_thjc, R_thja,                                                      // both
    C, U_R, ESR, tan_delta, I_ripple, T_max, life,                               // capacitor
    I_N, I2t, I_sat, P_N,                                                        // fuse, fuse, choke, resistor
};

/// Conditions of a figure; absent = not stated. Temperature in kelvin (junction, case or body as the symbol implies).
struct Conditions {
    std::optional<double> voltage;      ///< [V] gate drive (R_DS(on), Q_g), reverse voltage (I_R, C_j), drain voltage (C_oss)
    std::optional<double> current;      ///< [A] V_F
    std::optional<double> frequency;    ///< [Hz] ESR, tan δ, I_R~
    std::optional<double> temperature;  ///< [K]
    friend bool operator==(const Conditions&, const Conditions&) = default;
};

/// Which way a figure is the harmless way: decides which end of an interval is "best".
enum class Better { higher, lower, neither };

struct SymbolInfo {
    Symbol symbol;
    std::string_view name;    ///< as in files: "R_DS(on)"
    std::string_view plain;   ///< as a shell takes it: "Rdson"
    std::string_view meaning; ///< long name: "on-state resistance"
    Unit unit;
    bool in_switch, in_rectifier, in_capacitor;
    bool rating;              ///< a limit printed for the type: never `kind` for a lot, never measured up
    bool ages;                ///< a measurement of it on a pulled part expires
    Better better;
    Conditions usual;         ///< taken when a figure states none; the finding then says so
};

[[nodiscard]] std::span<const SymbolInfo> symbols();
[[nodiscard]] const SymbolInfo& info(Symbol symbol);
/// By either spelling, case ignored, within a family. Empty when there is none.
[[nodiscard]] std::optional<Symbol> find_symbol(std::string_view spelling, Family family);

/// How a figure is known, best first. told = typed or imported, source unknown; kind = typical of its kind.
enum class Known { measured, datasheet, marked, told, kind };
enum class Column { none, minimum, typical, maximum };

/// best … typical … worst of a figure, by Better of its symbol; all equal when it is one number. Base SI units.
struct Spread {
    double best = 0, typical = 0, worst = 0;
    [[nodiscard]] bool exact() const { return best == worst; }
    friend bool operator==(const Spread&, const Spread&) = default;
};

/// Which end of every figure's spread is computed with. Ageing of pulled parts belongs to the worst end.
enum class End { best, typical, worst };
[[nodiscard]] constexpr double at_end(const Spread& spread, End end) {
    return end == End::best ? spread.best : end == End::worst ? spread.worst : spread.typical;
}

struct Figure {
    Symbol symbol{};
    Spread value;
    Known known = Known::told;
    Column column = Column::none;
    Conditions at;
    bool both_legs = false;  ///< dual rectifiers: for the package, not for one leg
    std::string date;        ///< of a measurement, ISO 8601; else empty
    std::string method;      ///< of a measurement, or the source of a figure
    friend bool operator==(const Figure&, const Figure&) = default;
};

/// A kind of part: what is printed on it and published of it.
struct Part {
    Family family{};
    std::string name;                               ///< of the type, unique in a bin: "N-MOSFET 55 V 17.5 mΩ TO-220"
    std::map<std::string, std::string> attributes;  ///< polarity, technology, arrangement, tab, pins, can, package …
    std::vector<Figure> figures;
    friend bool operator==(const Part&, const Part&) = default;
};

enum class Origin { new_, surplus, pulled };

/// A lot as the engine judges it: its type's figures with the lot's own readings merged in (catalog does the merging).
struct Lot {
    std::string label;  ///< "417-H"; empty for figures typed into a converter file
    Part part;          ///< figures of the type and the lot's readings (known = measured), the worst not set aside
    Origin origin = Origin::new_;
    int count = 1;
    bool suspect = false;      ///< a reading lies outside the type's limits
    std::string suspect_why;   ///< sentence, when suspect
    std::vector<std::pair<Symbol, std::string>> uncounted;  ///< readings under conditions too far from the type's figures to stand for them: why
};

/// Reads "17.5 mΩ max @ 10 V", "0.62 V max @ 15 A, 25 °C", "15 mA @ 45 V, 100 °C", "both legs 30 A", "12 .. 17.5 .. 22 mΩ"
/// (best .. typical .. worst). Conditions are told apart by their units.
/// @throws InputError with place.column within `text`
[[nodiscard]] Figure parse_figure(Symbol symbol, std::string_view text, Known known, bool bare_allowed = false);

/// The text that parse_figure reads back to an equal figure (known, date and method apart).
[[nodiscard]] std::string format_figure(const Figure& figure);

/// A sentence why the value is outside what its kind of part can be (an ESR of 38 Ω on 470 µF), or empty.
[[nodiscard]] std::string implausible(const Part& part, const Figure& figure);

/// A sentence why a measurement is not of a part within what is printed and published of its type, or empty: below a rating, or beyond a
/// minimum or maximum under the same conditions or harder ones. Estimates of the kind are no limits.
[[nodiscard]] std::string outside_limits(const Part& part, const Figure& reading);

[[nodiscard]] std::string_view to_string(Family family);   ///< "switch", "rectifier", "capacitor"
[[nodiscard]] std::string_view to_string(Known known);     ///< "measured", "datasheet", "marked", "told", "kind"
[[nodiscard]] std::string_view to_string(Column column);   ///< "", "min", "typ", "max"
[[nodiscard]] std::string_view to_string(Origin origin);   ///< "new", "surplus", "pulled"
[[nodiscard]] std::optional<Family> find_family(std::string_view text);       ///< of those that a bin keeps
[[nodiscard]] std::optional<Family> find_any_family(std::string_view text);   ///< of all that rules speak of
[[nodiscard]] std::optional<Known> find_known(std::string_view text);
[[nodiscard]] std::optional<Column> find_column(std::string_view text);
[[nodiscard]] std::optional<Origin> find_origin(std::string_view text);

/// Attribute by name, or empty.
[[nodiscard]] std::string_view attribute(const Part& part, std::string_view name);

/// "capacitor/aluminium", "rectifier/schottky", "switch": what rules select by.
[[nodiscard]] std::string selector(const Part& part);

}  // namespace binwright
