// SPDX-License-Identifier: GPL-3.0-or-later
// From a branch table and element values to the state equations of every switch configuration. One routine for all
// topologies: Kirchhoff's laws are set up and solved once a configuration.
#pragma once
#include <Eigen/Core>
#include <array>
#include <vector>

#include "engine/network/steady_state.hpp"

namespace binwright {

inline constexpr int kMostStates = 18;   ///< 3 winding currents and up to 15 capacitor kinds
inline constexpr int kMostOutputs = 32;

/// What is read off a network besides its states. Bank branches follow from Output::branches on.
enum Output : int {
    switch_voltage, switch_current,        ///< V_DS, I_D
    rectifier_voltage, rectifier_current,  ///< anode to cathode; forward current
    input_voltage, source_current, input_bank_current,
    coupling_voltage, coupling_bank_current,
    output_voltage, output_bank_current, load_current,
    primary_current, secondary_current, magnetising_current,  ///< magnetising: i1 + (N2/N1)·i2
    branches
};

/// Affine inputs of the network.
enum Input : int { emf, source_feed, rectifier_threshold, load_feed, kInputs };

using StateMatrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMostStates, kMostStates>;
using InputMatrix = Eigen::Matrix<double, Eigen::Dynamic, kInputs, 0, kMostStates, kInputs>;
using OutputMatrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMostOutputs, kMostStates>;
using FeedMatrix = Eigen::Matrix<double, Eigen::Dynamic, kInputs, 0, kMostOutputs, kInputs>;
using ConstraintMatrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 4, kMostStates>;

/// One switch configuration: dx/dt = A x + B u, y = C x + D u, while K x = 0.
struct Configuration {
    bool possible = false;   ///< false: the two contradict each other (an ideal transformer with both sides driven)
    StateMatrix A;
    InputMatrix B;
    OutputMatrix C;
    FeedMatrix D;
    ConstraintMatrix K;      ///< currents of cut-sets of windings: sums that must be zero here
    StateMatrix P;           ///< what becomes of the states when forced into K x = 0: flux linkage of every loop is kept
};

struct StateEquations {
    int states = 0;
    int windings = 0;  ///< the first of the states are currents
    int outputs = 0;
    std::array<Configuration, 4> configuration;  ///< index: switch on + 2·(rectifier on)
    std::array<double, kMostStates> weight{};    ///< √L or √C: scaled states have the unit √J
    struct BankBranch { int bank; int original; int output; };  ///< bank: 0 input, 1 coupling, 2 output
    std::vector<BankBranch> bank_branches;
    bool input_bank_idle = false;  ///< the input terminals are stiff: the input capacitor carries nothing
};
[[nodiscard]] constexpr int configuration_index(bool switch_on, bool rectifier_on) {
    return (switch_on ? 1 : 0) + (rectifier_on ? 2 : 0);
}

/// @param load_conductance  of a resistive load [S]; 0 for the others
/// @throws OutsideModel where the table's network has no unique solution
void derive(const Circuit& circuit, double load_conductance, StateEquations& equations);

}  // namespace binwright
