// SPDX-License-Identifier: GPL-3.0-or-later
// The part types that ship: complete, ordered, and such as physics and the trade let them be.
#include <catch2/catch.hpp>

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <map>
#include <regex>
#include <set>

#include "import/starter.hpp"

using namespace binwright;

namespace {

const Figure* figure(const Part& part, Symbol symbol) {
    for (const Figure& one : part.figures)
        if (one.symbol == symbol) return &one;
    return nullptr;
}
double worst(const Part& part, Symbol symbol) {
    const Figure* found = figure(part, symbol);
    if (found == nullptr) FAIL(part.name << " has no " << info(symbol).name);
    return found->value.worst;
}
double typical(const Part& part, Symbol symbol) { return worst(part, symbol), figure(part, symbol)->value.typical; }

std::vector<Part> of(Family family, const std::string& technology = "") {
    std::vector<Part> found;
    for (const PartRecord& record : starter_parts())
        if (record.part.family == family && (technology.empty() || attribute(record.part, "technology") == technology)) found.push_back(record.part);
    return found;
}

bool registered(const std::string& name) { return std::regex_match(name, std::regex("[12]N[0-9]{3,4}")); }

/// Diameter and length of a round can "10x20 mm" [m]; none for a case letter or a box.
struct Can {
    double diameter = 0, length = 0;
    [[nodiscard]] double surface() const { return M_PI * diameter * (length + diameter / 4); }  // one end is sealed by the board
};
std::optional<Can> can_of(const Part& part) {
    std::smatch found;
    const std::string text(attribute(part, "can"));
    if (!std::regex_match(text, found, std::regex("([0-9.]+)x([0-9.]+) mm"))) return std::nullopt;
    return Can{std::strtod(found[1].str().c_str(), nullptr) / 1000, std::strtod(found[2].str().c_str(), nullptr) / 1000};
}

}  // namespace

TEST_CASE("the starter catalogue holds at least 90 types and each name once", "[import][starter]") {
    CHECK(starter_parts().size() >= 90);
    std::set<std::string> names;
    for (const PartRecord& record : starter_parts()) {
        CAPTURE(record.part.name);
        CHECK(names.insert(record.part.name).second);
        CHECK(record.starter);
        CHECK(record.id == 0);
    }
    for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor}) CHECK(of(family).size() >= 25);
}

TEST_CASE("every type of the starter catalogue has the figures that its family is judged by", "[import][starter]") {
    const auto needs = [](const Part& part, std::initializer_list<Symbol> wanted) {
        for (const Symbol symbol : wanted) {
            CAPTURE(part.name, info(symbol).name);
            CHECK(figure(part, symbol) != nullptr);
        }
    };
    for (const Part& part : of(Family::switch_))
        needs(part, {Symbol::V_DSS, Symbol::V_GSS, Symbol::I_D, Symbol::I_DM, Symbol::P_tot, Symbol::R_DSon, Symbol::V_GSth, Symbol::Q_g, Symbol::Q_gd,
                     Symbol::Q_gs, Symbol::C_oss, Symbol::R_g, Symbol::T_jmax, Symbol::R_thjc, Symbol::R_thja});
    for (const Part& part : of(Family::rectifier)) {
        needs(part, {Symbol::V_RRM, Symbol::I_FAV, Symbol::I_FSM, Symbol::V_F, Symbol::I_R, Symbol::C_j, Symbol::T_jmax, Symbol::R_thja});
        if (attribute(part, "technology") != "schottky") needs(part, {Symbol::t_rr});
        if (attribute(part, "tab") == "cathode") needs(part, {Symbol::R_thjc});
    }
    for (const Part& part : of(Family::capacitor)) {
        needs(part, {Symbol::C, Symbol::U_R, Symbol::ESR, Symbol::I_ripple, Symbol::T_max});
        const auto technology = attribute(part, "technology");
        if (technology == "aluminium" || technology == "polymer") needs(part, {Symbol::life});
    }
    for (const PartRecord& record : starter_parts()) {
        CAPTURE(record.part.name);
        CHECK(!attribute(record.part, "technology").empty());
        if (record.part.family == Family::switch_) CHECK(attribute(record.part, "polarity") == "n");
        if (record.part.family == Family::rectifier) CHECK(!attribute(record.part, "arrangement").empty());
        CHECK(!attribute(record.part, record.part.family == Family::capacitor ? "can" : "package").empty());
    }
}

TEST_CASE("ratings of the starter catalogue are marked and everything else is a spread of its kind", "[import][starter]") {
    for (const PartRecord& record : starter_parts())
        for (const Figure& one : record.part.figures) {
            CAPTURE(record.part.name, format_figure(one));
            const SymbolInfo& symbol = info(one.symbol);
            CHECK(one.date.empty());
            if (symbol.rating || one.symbol == Symbol::C) {
                CHECK(one.known == Known::marked);  // printed on the part
                CHECK(one.value.exact());
            } else if (registered(record.part.name) && one.known != Known::kind) {
                CHECK(one.known == Known::datasheet);  // the registered figures of a registered number
                CHECK(one.column == Column::maximum);
            } else {
                CHECK(one.known == Known::kind);
                if (symbol.better == Better::lower) CHECK((one.value.best <= one.value.typical && one.value.typical <= one.value.worst));
                if (symbol.better == Better::higher) CHECK((one.value.best >= one.value.typical && one.value.typical >= one.value.worst));
            }
            CHECK(one.value.best > 0);
            CHECK(implausible(record.part, one).empty());
            CHECK(parse_figure(one.symbol, format_figure(one), one.known) == one);
        }
}

TEST_CASE("no name in the catalogue or the demo bin looks like a maker's number", "[import][starter]") {
    // Letters and digits run together, as makers number parts: "AB1234", "12AB34". Registered numbers (1N…, 2N…), packages, sizes,
    // characteristics of ceramics and multiplied currents ("2x10") are words of the trade.
    const std::regex word("[0-9.]+(x[0-9.]+){0,2}|[A-Za-z-]+|1N[0-9]{3,4}|2N[0-9]{3,4}|TO-[0-9]{2,3}|DO-[0-9]{2,3}[A-Z]{0,2}|SO-8|D2PAK|DPAK|X[57]R|C0G|low-ESR|µF|mΩ");
    Store store(":memory:");
    store.apply(demo_edit(store));
    for (const PartRecord& record : store.parts()) {
        CAPTURE(record.part.name);
        std::size_t from = 0;
        while (from <= record.part.name.size()) {
            const std::size_t to = std::min(record.part.name.find(' ', from), record.part.name.size());
            const std::string piece = record.part.name.substr(from, to - from);
            CAPTURE(piece);
            CHECK(std::regex_match(piece, word));
            from = to + 1;
        }
    }
}

TEST_CASE("a type is called by its own figures", "[import][starter]") {
    for (const PartRecord& record : starter_parts()) {
        const Part& part = record.part;
        CAPTURE(part.name);
        if (registered(part.name)) continue;
        const auto says = [&](Symbol symbol) {
            const std::string text = format_quantity(worst(part, symbol), info(symbol).unit);
            CAPTURE(text);
            CHECK((part.name + " ").find(" " + text + " ") != std::string::npos);
        };
        if (part.family == Family::switch_) says(Symbol::V_DSS), says(Symbol::R_DSon);
        if (part.family == Family::rectifier) says(Symbol::V_RRM);
        if (part.family == Family::capacitor) {
            says(Symbol::U_R);
            // 10000 µF is how it is printed, and 10 mF how it would be scaled.
            const double microfarads = worst(part, Symbol::C) * 1e6;
            if (microfarads < 1000) says(Symbol::C);
            else CHECK(part.name.find(" " + std::to_string(std::lround(microfarads)) + " µF ") != std::string::npos);
        }
    }
}

TEST_CASE("the resistance of a switch times its charge lies where parts of its voltage do", "[import][starter]") {
    // Common practice, no source: typical R_DS(on) · Q_g of silicon in the trade, from the newest trench parts to planar parts of the
    // 1990s, is about 3 to 20 mΩ·nC for each volt of V_DSS, whatever the size of the die.
    std::map<double, double> best;
    for (const Part& part : of(Family::switch_)) {
        CAPTURE(part.name);
        const double merit = typical(part, Symbol::R_DSon) * typical(part, Symbol::Q_g) * 1e12;  // [mΩ·nC]
        CAPTURE(merit);
        CHECK(merit > 3 * worst(part, Symbol::V_DSS));
        CHECK(merit < 20 * worst(part, Symbol::V_DSS));
        // Q_g holds what charges the gate to the plateau and over it.
        CHECK(typical(part, Symbol::Q_gs) + typical(part, Symbol::Q_gd) < typical(part, Symbol::Q_g));
        CHECK(worst(part, Symbol::Q_gs) + worst(part, Symbol::Q_gd) <= 1.05 * worst(part, Symbol::Q_g));
        CHECK(typical(part, Symbol::V_GSth) < 0.6 * worst(part, Symbol::V_GSS));
        // A logic-level part is specified at 4.5 V or 5 V, a standard one at 10 V.
        const bool logic = attribute(part, "level") == "logic";
        CHECK(figure(part, Symbol::R_DSon)->at.voltage == (logic ? 4.5 : 10.0));
        CHECK((typical(part, Symbol::V_GSth) < 2.5) == logic);
        auto& least = best.try_emplace(worst(part, Symbol::V_DSS), merit).first->second;
        least = std::min(least, merit);
    }
    CHECK(best.size() >= 8);
}

TEST_CASE("power and thermal resistance and current of a switch agree with each other", "[import][starter]") {
    for (const Part& part : of(Family::switch_)) {
        CAPTURE(part.name);
        const double rise = worst(part, Symbol::T_jmax) - (273.15 + 25);
        if (attribute(part, "package") == "SO-8") {
            CHECK(worst(part, Symbol::P_tot) == Approx(rise / worst(part, Symbol::R_thja)).epsilon(0.02));  // no tab: rated on a board
        } else {
            CHECK(worst(part, Symbol::P_tot) == Approx(rise / worst(part, Symbol::R_thjc)).epsilon(0.02));  // by definition (IEC 60747-8)
            // I_D² · R_DS(on) at T_jmax is at most the power: the resistance at least rises by half up to 150 °C (common practice).
            CHECK(std::pow(worst(part, Symbol::I_D), 2) * 1.5 * worst(part, Symbol::R_DSon) <= worst(part, Symbol::P_tot));
        }
        CHECK(worst(part, Symbol::I_DM) >= 3 * worst(part, Symbol::I_D));
        CHECK(worst(part, Symbol::I_DM) <= 5 * worst(part, Symbol::I_D));
    }
}

TEST_CASE("thermal resistances lie where the package puts them", "[import][starter]") {
    // From memory of what is published of such packages: junction to case (lead or tab) and junction to ambient [K/W].
    struct Band {
        double case_low, case_high, air_low, air_high;
    };
    const std::map<std::string, Band> bands = {
        {"TO-220", {0.5, 4, 50, 65}}, {"TO-247", {0.3, 1.5, 30, 42}}, {"D2PAK", {0.5, 3, 30, 65}},  {"DPAK", {1, 6, 40, 100}},      {"SO-8", {10, 30, 35, 100}},
        {"SMA", {15, 40, 80, 150}},   {"SMB", {12, 30, 70, 120}},     {"SMC", {8, 20, 50, 100}},    {"DO-41", {15, 60, 50, 110}},   {"DO-201AD", {8, 25, 25, 60}},
    };
    std::set<std::string> seen;
    for (const PartRecord& record : starter_parts()) {
        const Part& part = record.part;
        if (part.family == Family::capacitor) continue;
        CAPTURE(part.name);
        const std::string package(attribute(part, "package"));
        REQUIRE(bands.count(package) == 1);
        const Band& band = bands.at(package);
        seen.insert(package);
        if (const Figure* through = figure(part, Symbol::R_thjc)) {
            CHECK(through->value.best >= band.case_low);
            CHECK(through->value.worst <= band.case_high);
        }
        CHECK(figure(part, Symbol::R_thja)->value.best >= band.air_low);
        CHECK(worst(part, Symbol::R_thja) <= band.air_high);
    }
    CHECK(seen.size() == bands.size());
}

TEST_CASE("among rectifiers of a kind the drop rises with the rating and the leakage falls", "[import][starter]") {
    // The barrier of a Schottky diode is chosen higher for a higher rating: more drop, less leakage for each ampere (common practice).
    const auto at = [](const Part& part, double kelvin) {
        for (const Figure& one : part.figures)
            if (one.symbol == Symbol::V_F && std::abs(one.at.temperature.value_or(298.15) - kelvin) < 1 &&
                std::abs(*one.at.current / worst(part, Symbol::I_FAV) - 1) < 1e-6)
                return one.value.worst;
        FAIL(part.name);
        return 0.0;
    };
    std::map<std::string, int> compared;
    for (const std::string technology : {"schottky", "ultrafast"})
        for (const Part& low : of(Family::rectifier, technology))
            for (const Part& high : of(Family::rectifier, technology)) {
                if (registered(low.name) || registered(high.name) || !(worst(low, Symbol::V_RRM) < worst(high, Symbol::V_RRM))) continue;
                CAPTURE(low.name, high.name);
                ++compared[technology];
                CHECK(at(low, 298.15) < at(high, 298.15));
                const auto leak = [](const Part& part) { return worst(part, Symbol::I_R) / worst(part, Symbol::I_FAV); };
                CHECK(leak(low) >= leak(high) * 0.95);
            }
    CHECK(compared["schottky"] > 100);
    CHECK(compared["ultrafast"] > 3);
    for (const Part& part : of(Family::rectifier)) {
        CAPTURE(part.name);
        for (const Figure& one : part.figures)
            if (one.symbol == Symbol::I_R) CHECK(one.at.voltage == worst(part, Symbol::V_RRM));
        if (registered(part.name)) continue;
        CHECK(at(part, 398.15) < at(part, 298.15));  // the drop falls as it warms
        CHECK(worst(part, Symbol::I_FSM) >= 10 * worst(part, Symbol::I_FAV));
    }
}

TEST_CASE("among aluminium cans of one voltage a bigger one has less ESR and bears more ripple", "[import][starter]") {
    int compared = 0;
    const auto parts = of(Family::capacitor, "aluminium");
    for (const Part& small : parts)
        for (const Part& big : parts) {
            const auto a = can_of(small), b = can_of(big);
            REQUIRE((a && b));
            if (worst(small, Symbol::U_R) != worst(big, Symbol::U_R) || !(a->surface() < b->surface()) || !(worst(small, Symbol::C) <= worst(big, Symbol::C))) continue;
            CAPTURE(small.name, big.name);
            ++compared;
            CHECK(typical(small, Symbol::ESR) > typical(big, Symbol::ESR));
            CHECK(worst(small, Symbol::ESR) > worst(big, Symbol::ESR));
            CHECK(worst(small, Symbol::I_ripple) < worst(big, Symbol::I_ripple));
            CHECK(worst(small, Symbol::life) <= worst(big, Symbol::life));
        }
    CHECK(compared > 40);
}

TEST_CASE("ripple rating and ESR and can of a wet capacitor agree about its heat", "[import][starter]") {
    // I²·ESR/(β·S) with β = 2.3 mW/(K·cm²)·S^−0.2, S in cm², after a published guide to capacitor life: a can at its rating warms by
    // some kelvin. 5 K is usual for a 105 °C aluminium part, 20 K for a polymer (common practice).
    for (const Part& part : of(Family::capacitor)) {
        const auto technology = attribute(part, "technology");
        if (technology != "aluminium" && technology != "polymer") continue;
        CAPTURE(part.name);
        const double square_centimetres = can_of(part).value().surface() * 1e4;
        const double beta = 2.3e-3 * std::pow(square_centimetres, -0.2);
        const double rise = std::pow(worst(part, Symbol::I_ripple), 2) * worst(part, Symbol::ESR) / (beta * square_centimetres);
        CAPTURE(rise);
        CHECK(rise > (technology == "aluminium" ? 2.5 : 10));
        CHECK(rise < (technology == "aluminium" ? 10 : 35));
    }
}

TEST_CASE("a polymer capacitor has less ESR than any aluminium one of its size or voltage", "[import][starter]") {
    int compared = 0;
    for (const Part& polymer : of(Family::capacitor, "polymer"))
        for (const Part& aluminium : of(Family::capacitor, "aluminium")) {
            const bool same_can = attribute(polymer, "can") == attribute(aluminium, "can"), same_voltage = worst(polymer, Symbol::U_R) == worst(aluminium, Symbol::U_R);
            if (!same_can && !(same_voltage && worst(aluminium, Symbol::C) <= worst(polymer, Symbol::C) * 2.5)) continue;
            CAPTURE(polymer.name, aluminium.name);
            ++compared;
            CHECK(worst(polymer, Symbol::ESR) < worst(aluminium, Symbol::ESR));
            if (same_can) CHECK(worst(polymer, Symbol::I_ripple) > worst(aluminium, Symbol::I_ripple));
        }
    CHECK(compared > 20);
}

TEST_CASE("energy for each volume of a wet capacitor is what such parts hold", "[import][starter]") {
    // ½·C·U_R² for each cubic centimetre of can: about 0.02 J to 0.4 J in the aluminium parts of the trade up to 100 V (common practice).
    for (const Part& part : of(Family::capacitor, "aluminium")) {
        CAPTURE(part.name);
        const Can can = can_of(part).value();
        const double volume = M_PI / 4 * can.diameter * can.diameter * can.length * 1e6;  // [cm³]
        const double density = 0.5 * worst(part, Symbol::C) * std::pow(worst(part, Symbol::U_R), 2) / volume;
        CAPTURE(density);
        CHECK(density > 0.015);
        CHECK(density < 0.45);
    }
}

TEST_CASE("the starter catalogue goes into a bin once and comes out as it went in", "[import][starter]") {
    Store store(":memory:");
    store.apply(starter_edit(store));
    std::vector<PartRecord> stored = store.parts();
    REQUIRE(stored.size() == starter_parts().size());
    for (std::size_t k = 0; k < stored.size(); ++k) {
        CAPTURE(stored[k].part.name);
        CHECK(stored[k].part == starter_parts()[k].part);
        CHECK(stored[k].starter);
    }
    CHECK(starter_edit(store).changes.empty());
    store.undo();
    CHECK(store.parts().empty());
}
