// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/surroundings.hpp"

#include <algorithm>
#include <limits>

namespace binwright {
namespace {

constexpr double kInfinite = std::numeric_limits<double>::infinity();

/// The least resistance from one node to every other, through windings, rectifier and the other capacitors.
std::vector<double> distances(const Topology& topology, int from, double primary, double secondary, Seat own) {
    std::vector<double> out(topology.nodes.size(), kInfinite);
    out[static_cast<std::size_t>(from)] = 0;
    for (std::size_t round = 0; round < topology.nodes.size(); ++round)
        for (const Branch& branch : topology.branches) {
            double resistance = 0;
            switch (branch.kind) {
                case BranchKind::primary: resistance = primary; break;
                case BranchKind::secondary: resistance = secondary; break;
                case BranchKind::capacitor:
                    if (branch.seat == own) continue;
                    break;
                case BranchKind::rectifier: break;
                default: continue;
            }
            double& a = out[static_cast<std::size_t>(branch.from)];
            double& b = out[static_cast<std::size_t>(branch.to)];
            a = std::min(a, b + resistance);
            b = std::min(b, a + resistance);
        }
    return out;
}

}  // namespace

std::vector<StressValue> surroundings(const Setup& setup, const Exposure& exposure, Seat seat) {
    if (seat == Seat::switch_ || seat == Seat::rectifier) return {};
    const Converter& converter = setup.converter;
    StressValue air;
    air.stress = Stress::air_temperature;
    air.at = exposure.hottest;
    air.at.ambient = converter.operating.ambient.highest;
    air.made_of.push_back({"ambient", air.at.ambient});
    if (converter.enclosure) {
        double loss = 0;
        for (const Loss& one : exposure.losses) loss += one.power;
        air.made_of.push_back({"inner air above ambient", *converter.enclosure * std::max(0.0, loss)});
    } else {
        air.rests_on.push_back("open air: no enclosure is given");
    }
    if (const double warmer = converter.seat(seat).warmer_by; warmer != 0) air.made_of.push_back({"warmer by", warmer});
    for (const Term& term : air.made_of) air.value += term.value;

    StressValue path;
    path.stress = Stress::series_resistance;
    path.at = exposure.hottest;
    const double source = converter.source ? converter.source->resistance : 0;
    path.made_of.push_back({"source", source});
    if (!converter.source) path.rests_on.push_back("a stiff source: no [source] is given");
    const auto& winding = converter.winding;
    const double primary = winding.primary ? winding.primary->resistance : 0;
    const double secondary = winding.secondary ? winding.secondary->resistance : primary;
    int input = 0;
    for (const Branch& branch : converter.topology->branches)
        if (branch.kind == BranchKind::source) input = branch.from != 0 ? branch.from : branch.to;
    for (const Branch& branch : converter.topology->branches) {
        if (branch.kind != BranchKind::capacitor || branch.seat != seat) continue;
        double copper = 0;
        if (!converter.topology->transformer) {  // through a transformer the source charges nothing directly
            const auto there = distances(*converter.topology, input, primary, secondary, seat), back = distances(*converter.topology, 0, primary, secondary, seat);
            const auto loop = [&](int a, int b) { return there[static_cast<std::size_t>(a)] + back[static_cast<std::size_t>(b)]; };
            copper = std::min(loop(branch.from, branch.to), loop(branch.to, branch.from));
        }
        if (copper > 0 && copper < kInfinite) path.made_of.push_back({"copper of the windings", copper});
    }
    for (const Term& term : path.made_of) path.value += term.value;
    return {air, path};
}

}  // namespace binwright
