// SPDX-License-Identifier: GPL-3.0-or-later
// The one table of letter symbols behind parser, printer, headings, forms and rules.
#include <array>
#include <stdexcept>

#include "engine/part/part.hpp"

namespace binwright {
namespace {

constexpr Conditions none{};
constexpr Conditions gate(double volts) { return {volts, {}, {}, {}}; }
constexpr Conditions at_temperature(double celsius) { return {{}, {}, {}, celsius + kCelsiusZero}; }
constexpr Conditions tone(double hertz, double celsius) { return {{}, {}, hertz, celsius + kCelsiusZero}; }

// symbol, name, plain spelling, meaning, unit, switch, rectifier, capacitor, rating, ages, better, usual conditions
constexpr SymbolInfo kSymbols[] = {
    {Symbol::V_DSS, "V_DSS", "Vdss", "drain-source voltage rating", Unit::volt, true, false, false, true, false, Better::higher, none},
    {Symbol::V_GSS, "V_GSS", "Vgss", "gate-source voltage rating", Unit::volt, true, false, false, true, false, Better::higher, none},
    {Symbol::I_D, "I_D", "Id", "continuous drain current rating", Unit::ampere, true, false, false, true, false, Better::higher, at_temperature(25)},
    {Symbol::I_DM, "I_DM", "Idm", "pulsed drain current rating", Unit::ampere, true, false, false, true, false, Better::higher, none},
    {Symbol::P_tot, "P_tot", "Ptot", "power rating", Unit::watt, true, false, false, true, false, Better::higher, at_temperature(25)},
    {Symbol::R_DSon, "R_DS(on)", "Rdson", "on-state resistance", Unit::ohm, true, false, false, false, false, Better::lower, gate(10)},
    {Symbol::V_GSth, "V_GS(th)", "Vgsth", "gate threshold voltage", Unit::volt, true, false, false, false, false, Better::neither, none},
    {Symbol::Q_g, "Q_g", "Qg", "total gate charge", Unit::coulomb, true, false, false, false, false, Better::lower, gate(10)},
    {Symbol::Q_gd, "Q_gd", "Qgd", "gate-drain charge", Unit::coulomb, true, false, false, false, false, Better::lower, none},
    {Symbol::Q_gs, "Q_gs", "Qgs", "gate-source charge", Unit::coulomb, true, false, false, false, false, Better::lower, none},
    {Symbol::C_oss, "C_oss", "Coss", "output capacitance", Unit::farad, true, false, false, false, false, Better::lower, gate(25)},
    {Symbol::R_g, "R_g", "Rg", "internal gate resistance", Unit::ohm, true, false, false, false, false, Better::lower, none},
    {Symbol::V_RRM, "V_RRM", "Vrrm", "repetitive peak reverse voltage rating", Unit::volt, false, true, false, true, false, Better::higher, none},
    {Symbol::I_FAV, "I_F(AV)", "Ifav", "average forward current rating", Unit::ampere, false, true, false, true, false, Better::higher, none},
    {Symbol::I_FSM, "I_FSM", "Ifsm", "surge forward current rating", Unit::ampere, false, true, false, true, false, Better::higher, none},
    {Symbol::V_F, "V_F", "Vf", "forward voltage", Unit::volt, false, true, false, false, false, Better::lower, at_temperature(25)},
    {Symbol::I_R, "I_R", "Ir", "reverse leakage current", Unit::ampere, false, true, false, false, false, Better::lower, at_temperature(25)},
    {Symbol::C_j, "C_j", "Cj", "junction capacitance", Unit::farad, false, true, false, false, false, Better::lower, gate(4)},
    {Symbol::Q_rr, "Q_rr", "Qrr", "reverse recovery charge", Unit::coulomb, false, true, false, false, false, Better::lower, none},
    {Symbol::t_rr, "t_rr", "Trr", "reverse recovery time", Unit::second, false, true, false, false, false, Better::lower, none},
    {Symbol::T_jmax, "T_jmax", "Tjmax", "highest junction temperature", Unit::celsius, true, true, false, true, false, Better::higher, none},
    {Symbol::R_thjc, "R_th(j-c)", "Rthjc", "thermal resistance, junction to case", Unit::kelvin_per_watt, true, true, false, false, false, Better::lower, none},
    {Symbol::R_thja, "R_th(j-a)", "Rthja", "thermal resistance, junction to ambient", Unit::kelvin_per_watt, true, true, false, false, false, Better::lower, none},
    {Symbol::C, "C", "C", "capacitance", Unit::farad, false, false, true, false, true, Better::higher, tone(120, 20)},
    {Symbol::U_R, "U_R", "Ur", "rated voltage", Unit::volt, false, false, true, true, false, Better::higher, none},
    {Symbol::ESR, "ESR", "ESR", "equivalent series resistance", Unit::ohm, false, false, true, false, true, Better::lower, tone(100e3, 20)},
    {Symbol::tan_delta, "tan_delta", "Tdelta", "loss factor", Unit::none, false, false, true, false, true, Better::lower, tone(120, 20)},
    {Symbol::I_ripple, "I_R~", "Iripple", "ripple current rating", Unit::ampere, false, false, true, true, false, Better::higher, tone(120, 105)},
    {Symbol::T_max, "T_max", "Tmax", "highest temperature", Unit::celsius, false, false, true, true, false, Better::higher, none},
    {Symbol::life, "life", "life", "rated life", Unit::second, false, false, true, true, false, Better::higher, none},
    {Symbol::I_N, "I_N", "In", "rated current", Unit::ampere, false, false, false, true, false, Better::higher, none},
    {Symbol::I2t, "I2t", "I2t", "melting integral", Unit::ampere2_second, false, false, false, true, false, Better::higher, none},
    {Symbol::I_sat, "I_sat", "Isat", "saturation current", Unit::ampere, false, false, false, true, false, Better::higher, none},
    {Symbol::P_N, "P_N", "Pn", "rated power", Unit::watt, false, false, false, true, false, Better::higher, none},
};

/// What stands beside the three families that bins keep.
std::optional<Family> beside(Symbol symbol) {
    switch (symbol) {
        case Symbol::I_N:
        case Symbol::I2t: return Family::fuse;
        case Symbol::I_sat: return Family::choke;
        case Symbol::P_N: return Family::resistor;
        default: return std::nullopt;
    }
}

std::string folded(std::string_view text) {
    std::string out;
    for (const char c : text) out += c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
    return out;
}

template <class Value, std::size_t N>
std::optional<Value> find_in(const std::array<std::string_view, N>& names, std::string_view text) {
    for (std::size_t k = 0; k < N; ++k)
        if (folded(names[k]) == folded(text)) return static_cast<Value>(k);
    return std::nullopt;
}

constexpr std::array<std::string_view, 6> kFamilies = {"switch", "rectifier", "capacitor", "fuse", "choke", "resistor"};
constexpr std::array<std::string_view, 5> kKnown = {"measured", "datasheet", "marked", "told", "kind"};
constexpr std::array<std::string_view, 4> kColumns = {"", "min", "typ", "max"};
constexpr std::array<std::string_view, 3> kOrigins = {"new", "surplus", "pulled"};

}  // namespace

std::span<const SymbolInfo> symbols() { return kSymbols; }

const SymbolInfo& info(Symbol symbol) {
    for (const SymbolInfo& entry : kSymbols)
        if (entry.symbol == symbol) return entry;
    throw std::logic_error("a symbol without its row");
}

std::optional<Symbol> find_symbol(std::string_view spelling, Family family) {
    const std::string wanted = folded(spelling);
    for (const SymbolInfo& entry : kSymbols) {
        const bool fits = family == Family::switch_     ? entry.in_switch
                          : family == Family::rectifier ? entry.in_rectifier
                          : family == Family::capacitor ? entry.in_capacitor
                                                        : beside(entry.symbol) == family;
        if (fits && (folded(entry.name) == wanted || folded(entry.plain) == wanted)) return entry.symbol;
    }
    return std::nullopt;
}

std::string_view to_string(Family family) { return kFamilies[static_cast<std::size_t>(family)]; }
std::string_view to_string(Known known) { return kKnown[static_cast<std::size_t>(known)]; }
std::string_view to_string(Column column) { return kColumns[static_cast<std::size_t>(column)]; }
std::string_view to_string(Origin origin) { return kOrigins[static_cast<std::size_t>(origin)]; }
std::optional<Family> find_any_family(std::string_view text) { return find_in<Family>(kFamilies, text); }
std::optional<Family> find_family(std::string_view text) {
    const auto found = find_any_family(text);
    return found && *found <= Family::capacitor ? found : std::nullopt;
}
std::optional<Known> find_known(std::string_view text) { return find_in<Known>(kKnown, text); }
std::optional<Column> find_column(std::string_view text) { return find_in<Column>(kColumns, text); }
std::optional<Origin> find_origin(std::string_view text) { return find_in<Origin>(kOrigins, text); }

std::string_view attribute(const Part& part, std::string_view name) {
    const auto found = part.attributes.find(std::string(name));
    return found == part.attributes.end() ? std::string_view() : std::string_view(found->second);
}

std::string selector(const Part& part) {
    std::string text(to_string(part.family));
    const std::string_view technology = attribute(part, "technology");
    if (!technology.empty()) text += "/" + folded(technology);
    return text;
}

}  // namespace binwright
