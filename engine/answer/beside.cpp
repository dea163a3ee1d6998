// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/beside.hpp"

namespace binwright {
namespace {

Figure printed(Symbol symbol, double value) {
    Figure figure;
    figure.symbol = symbol;
    figure.value = {value, value, value};
    figure.known = Known::marked;
    return figure;
}

Beside core(Beside::What what, std::string name, const WindingConfig& winding) {
    Beside out{what, std::move(name), {}, {}};
    out.part.family = Family::choke;
    out.part.name = winding.core.empty() || winding.core == "other" ? "core" : winding.core + " core";
    if (winding.saturation_current && *winding.saturation_current > 0) out.part.figures.push_back(printed(Symbol::I_sat, *winding.saturation_current));
    return out;
}

}  // namespace

std::vector<Beside> beside_of(const Converter& converter) {
    std::vector<Beside> all;
    const auto& winding = converter.winding;
    if (winding.primary) {
        const bool two = has_secondary(*converter.topology);
        const bool coupled = converter.topology->transformer || winding.leakage || (winding.coupling && winding.coupling->highest > 0);
        if (two && coupled) {
            all.push_back(core(Beside::What::common_core, converter.topology->transformer ? "transformer" : "coupled windings", *winding.primary));
        } else {
            all.push_back(core(Beside::What::first_core, "primary winding", *winding.primary));
            if (two) all.push_back(core(Beside::What::second_core, "secondary winding", winding.secondary ? *winding.secondary : *winding.primary));
        }
    }
    if (converter.drive.sense_resistance && *converter.drive.sense_resistance > 0) {
        Beside sense{Beside::What::sense, "sense resistor", {}, {}};
        sense.part.family = Family::resistor;
        sense.part.name = format_quantity(*converter.drive.sense_resistance, Unit::ohm);
        if (converter.drive.sense_power) sense.part.figures.push_back(printed(Symbol::P_N, *converter.drive.sense_power));
        all.push_back(std::move(sense));
    }
    if (converter.clamp.voltage) {
        Beside clamp{Beside::What::clamp, "clamp", {}, {}};
        clamp.part.family = Family::resistor;
        clamp.part.name = "at " + format_quantity(*converter.clamp.voltage, Unit::volt);
        if (converter.clamp.power) clamp.part.figures.push_back(printed(Symbol::P_N, *converter.clamp.power));
        all.push_back(std::move(clamp));
    }
    if (converter.fuse.rating) {
        Beside fuse{Beside::What::fuse, "fuse", {}, {}};
        fuse.part.family = Family::fuse;
        fuse.part.name = format_quantity(*converter.fuse.rating, Unit::ampere);
        fuse.part.figures.push_back(printed(Symbol::I_N, *converter.fuse.rating));
        if (converter.fuse.melting) fuse.part.figures.push_back(printed(Symbol::I2t, *converter.fuse.melting));
        all.push_back(std::move(fuse));
    }
    for (const AcrossConfig& one : converter.across) {
        Beside across{Beside::What::across, one.name, {}, one.between};
        across.part.family = Family::capacitor;
        across.part.name = one.name;
        across.part.figures = one.figures;
        for (Figure& figure : across.part.figures)  // printed on it, for all that the file can say
            if (info(figure.symbol).rating && figure.known == Known::told) figure.known = Known::marked;
        across.part.attributes = one.attributes;
        all.push_back(std::move(across));
    }
    return all;
}

std::vector<Stress> stresses_of(const Beside& one) {
    switch (one.what) {
        case Beside::What::fuse: return {Stress::current_average, Stress::surge_integral};
        case Beside::What::sense:
        case Beside::What::clamp: return {Stress::power};
        case Beside::What::across: return {Stress::voltage_peak_repetitive, Stress::voltage_peak_single};
        default: return {Stress::current_peak};
    }
}

}  // namespace binwright
