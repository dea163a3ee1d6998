// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/network/topology.hpp"

#include <algorithm>
#include <array>

namespace binwright {
namespace {

constexpr std::array<std::string_view, 5> kSeatNames = {"switch", "rectifier", "input_capacitor", "coupling_capacitor",
                                                        "output_capacitor"};

using enum BranchKind;

// nodes: name, height, drawn from … to; the first is the reference.
// branches: kind, from, to, seat, drawn at x. Directions: see Branch.
const std::vector<Topology> kTopologies = {
    {.name = "buck",
     .meaning = "steps down",
     .nodes = {{"ground", 2, 0, 7}, {"in", 0, 0, 2}, {"sw", 0, 3, 4}, {"out", 0, 5, 7}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {switch_, 1, 2, Seat::switch_, 2.5},
                  {rectifier, 0, 2, Seat::rectifier, 3.5},
                  {primary, 2, 3, {}, 4.5},
                  {capacitor, 3, 0, Seat::output_capacitor, 6},
                  {load, 3, 0, {}, 7}}},
    {.name = "boost",
     .meaning = "steps up",
     .nodes = {{"ground", 2, 0, 7}, {"in", 0, 0, 2}, {"sw", 0, 3, 4}, {"out", 0, 5, 7}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {primary, 1, 2, {}, 2.5},
                  {switch_, 2, 0, Seat::switch_, 3.5},
                  {rectifier, 2, 3, Seat::rectifier, 4.5},
                  {capacitor, 3, 0, Seat::output_capacitor, 6},
                  {load, 3, 0, {}, 7}}},
    {.name = "inverting",
     .meaning = "steps up or down, to a negative rail",
     .nodes = {{"ground", 2, 0, 7}, {"in", 0, 0, 2}, {"sw", 0, 3, 4}, {"out", 0, 5, 7}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {switch_, 1, 2, Seat::switch_, 2.5},
                  {primary, 2, 0, {}, 3.5},
                  {rectifier, 3, 2, Seat::rectifier, 4.5},
                  {capacitor, 0, 3, Seat::output_capacitor, 6},
                  {load, 0, 3, {}, 7}},
     .negative_output = true},
    {.name = "sepic",
     .meaning = "steps up or down, same polarity, input and output parted by a capacitor",
     .nodes = {{"ground", 2, 0, 9}, {"in", 0, 0, 2}, {"a", 0, 3, 4}, {"b", 0, 5, 6}, {"out", 0, 7, 9}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {primary, 1, 2, {}, 2.5},
                  {switch_, 2, 0, Seat::switch_, 3.5},
                  {capacitor, 2, 3, Seat::coupling_capacitor, 4.5},
                  {secondary, 0, 3, {}, 5.5},
                  {rectifier, 3, 4, Seat::rectifier, 6.5},
                  {capacitor, 4, 0, Seat::output_capacitor, 8},
                  {load, 4, 0, {}, 9}}},
    {.name = "cuk",
     .meaning = "steps up or down, to a negative rail, smooth current at both ends",
     .nodes = {{"ground", 2, 0, 9}, {"in", 0, 0, 2}, {"a", 0, 3, 4}, {"b", 0, 5, 6}, {"out", 0, 7, 9}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {primary, 1, 2, {}, 2.5},
                  {switch_, 2, 0, Seat::switch_, 3.5},
                  {capacitor, 2, 3, Seat::coupling_capacitor, 4.5},
                  {rectifier, 3, 0, Seat::rectifier, 5.5},
                  {secondary, 4, 3, {}, 6.5},
                  {capacitor, 0, 4, Seat::output_capacitor, 8},
                  {load, 0, 4, {}, 9}},
     .negative_output = true},
    {.name = "zeta",
     .meaning = "steps up or down, same polarity, smooth output current",
     .nodes = {{"ground", 2, 0, 9}, {"in", 0, 0, 2}, {"a", 0, 3, 4}, {"b", 0, 5, 6}, {"out", 0, 7, 9}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {switch_, 1, 2, Seat::switch_, 2.5},
                  {primary, 2, 0, {}, 3.5},
                  {capacitor, 3, 2, Seat::coupling_capacitor, 4.5},
                  {rectifier, 0, 3, Seat::rectifier, 5.5},
                  {secondary, 3, 4, {}, 6.5},
                  {capacitor, 4, 0, Seat::output_capacitor, 8},
                  {load, 4, 0, {}, 9}}},
    {.name = "flyback",
     .meaning = "steps up or down through a transformer",
     .nodes = {{"ground", 2, 0, 7}, {"in", 0, 0, 2.5}, {"a", 1, 2, 2.5}, {"s", 0, 3.2f, 4}, {"out", 0, 5, 7}},
     .branches = {{source, 1, 0, {}, 0},
                  {capacitor, 1, 0, Seat::input_capacitor, 1},
                  {primary, 1, 2, {}, 2.5},
                  {switch_, 2, 0, Seat::switch_, 2},
                  {secondary, 0, 3, {}, 3.2f},
                  {rectifier, 3, 4, Seat::rectifier, 4.5},
                  {capacitor, 4, 0, Seat::output_capacitor, 6},
                  {load, 4, 0, {}, 7}},
     .transformer = true},
};

}  // namespace

std::string_view to_string(Seat seat) { return kSeatNames[static_cast<std::size_t>(seat)]; }

std::optional<Seat> find_seat(std::string_view text) {
    const auto found = std::find(kSeatNames.begin(), kSeatNames.end(), text);
    if (found == kSeatNames.end()) return std::nullopt;
    return static_cast<Seat>(found - kSeatNames.begin());
}

std::span<const Topology> topologies() { return kTopologies; }

const Topology* find_topology(std::string_view name) {
    for (const Topology& topology : kTopologies)
        if (topology.name == name) return &topology;
    return nullptr;
}

bool has_seat(const Topology& topology, Seat seat) {
    return std::any_of(topology.branches.begin(), topology.branches.end(),
                       [seat](const Branch& branch) { return branch.seat == seat; });
}

bool has_secondary(const Topology& topology) {
    return std::any_of(topology.branches.begin(), topology.branches.end(),
                       [](const Branch& branch) { return branch.kind == BranchKind::secondary; });
}

}  // namespace binwright
