// SPDX-License-Identifier: GPL-3.0-or-later
// The converters as data: each a short table of branches between named nodes, with the seat of every branch and where
// both are drawn. Nothing else in the program knows one converter from another.
#pragma once
#include <optional>
#include <span>
#include <string_view>
#include <vector>

namespace binwright {

/// The places of power parts in a converter.
enum class Seat { switch_, rectifier, input_capacitor, coupling_capacitor, output_capacitor };
inline constexpr Seat kSeats[] = {Seat::switch_, Seat::rectifier, Seat::input_capacitor, Seat::coupling_capacitor,
                                  Seat::output_capacitor};

[[nodiscard]] std::string_view to_string(Seat seat);  ///< "switch", "rectifier", "input_capacitor" …
[[nodiscard]] std::optional<Seat> find_seat(std::string_view text);

enum class BranchKind { source, primary, secondary, switch_, rectifier, capacitor, load };

/// One branch. Its current and voltage are positive from `from` to `to`, the direction of the mean current of windings,
/// switch and rectifier (anode → cathode), and of the mean voltage of capacitors and load.
struct Branch {
    BranchKind kind;
    int from, to;              ///< indices into Topology::nodes
    std::optional<Seat> seat;  ///< what a person can fit there
    float x;                   ///< drawn: vertical between its nodes' rails at x; where both rails lie at one height,
                               ///< horizontal in the gap between them and x is its middle
};

/// A node, drawn as a horizontal wire at height y (0 = top, 2 = bottom rail) from x_from to x_to.
struct Node {
    std::string_view name;
    float y, x_from, x_to;
};

struct Topology {
    std::string_view name;
    std::string_view meaning;     ///< what it does, for lists and help
    std::vector<Node> nodes;      ///< nodes[0] is the reference ("ground")
    std::vector<Branch> branches;
    bool transformer = false;     ///< the windings are one transformer; `primary` inductance is the magnetising one
    bool negative_output = false; ///< delivers a negative rail; voltages are told as magnitudes all the same
};

[[nodiscard]] std::span<const Topology> topologies();
[[nodiscard]] const Topology* find_topology(std::string_view name);
[[nodiscard]] bool has_seat(const Topology& topology, Seat seat);
[[nodiscard]] bool has_secondary(const Topology& topology);

}  // namespace binwright
