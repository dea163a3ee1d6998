// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/network/equations.hpp"

#include <Eigen/LU>
#include <cmath>
#include <numeric>

namespace binwright {
namespace {

constexpr int kMostUnknowns = 40;
using Matrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMostUnknowns, kMostUnknowns>;

/// A state that is a winding current (or the source's, or the magnetising current of an ideal transformer).
struct Inductor {
    int from, to;          ///< nodes; from = -1: the source's EMF behind it
    double resistance;
    Output output;
    double emf = 0;        ///< 1 for the source's inductance
};

/// A branch whose current is unknown and whose voltage is v = emf·E + v_C + R·i (+ V_T0), positive from → to.
struct Link {
    int from, to;
    double resistance;
    int state = -1;        ///< capacitor voltage, when it has one
    Output output{};
    int bank = -1;
    bool source = false, threshold = false;
};

struct Capacitor {
    int from, to, bank;
    double capacitance, resistance;
    std::vector<std::pair<int, double>> shares;  ///< original branch, its share of the current
};

/// The branches of a circuit sorted by what they contribute to the equations.
struct Parts {
    std::vector<Inductor> inductors;
    std::vector<Capacitor> capacitors;
    bool ideal_transformer = false;
    int winding_from[2]{}, winding_to[2]{};
    double winding_resistance[2]{};
    Matrix inductance;  ///< of the inductors
    double turns = 1;
    int switch_from = 0, switch_to = 0, rectifier_from = 0, rectifier_to = 0, load_from = 0, load_to = 0, in = 0;
    int coupling_from = 0, coupling_to = 0;
    bool mean_feed = false, stiff = false;
};

const std::vector<CapacitorValues>& bank_values(const Circuit& circuit, Seat seat) {
    if (seat == Seat::input_capacitor) return circuit.input;
    return seat == Seat::coupling_capacitor ? circuit.coupling_capacitor : circuit.output;
}

void add_bank(Parts& parts, const Branch& branch, const std::vector<CapacitorValues>& values, int bank) {
    Capacitor ideal{branch.from, branch.to, bank, 0, 0, {}};
    for (int k = 0; k < static_cast<int>(values.size()); ++k) {
        // Ideal capacitors in parallel have one voltage and share their current as their capacitance: one state.
        if (values[k].resistance == 0) {
            ideal.capacitance += values[k].capacitance;
            ideal.shares.emplace_back(k, values[k].capacitance);
        } else {
            parts.capacitors.push_back(
                {branch.from, branch.to, bank, values[k].capacitance, values[k].resistance, {{k, 1.0}}});
        }
    }
    if (ideal.shares.empty()) return;
    for (auto& share : ideal.shares) share.second /= ideal.capacitance;
    parts.capacitors.push_back(ideal);
}

Parts sort_branches(const Circuit& circuit) {
    Parts parts;
    const Topology& topology = *circuit.topology;
    parts.ideal_transformer = topology.transformer && circuit.coupling == 1.0;
    parts.stiff = (circuit.source == SourceKind::stiff) ||
                  (circuit.source == SourceKind::mean && circuit.input.empty()) ||
                  (circuit.source == SourceKind::impedance && circuit.source_resistance == 0 && circuit.source_inductance == 0);
    parts.mean_feed = !parts.stiff && circuit.source == SourceKind::mean;
    for (const Branch& branch : topology.branches) {
        switch (branch.kind) {
            case BranchKind::source:
                parts.in = branch.from;
                if (!parts.stiff && circuit.source == SourceKind::impedance && circuit.source_inductance > 0)
                    parts.inductors.push_back({-1, branch.from, circuit.source_resistance, Output::source_current, 1});
                break;
            case BranchKind::primary:
            case BranchKind::secondary: {
                const int which = branch.kind == BranchKind::primary ? 0 : 1;
                const WindingValues& winding = which == 0 ? circuit.primary : circuit.secondary;
                parts.winding_from[which] = branch.from;
                parts.winding_to[which] = branch.to;
                parts.winding_resistance[which] = winding.resistance;
                if (!parts.ideal_transformer)
                    parts.inductors.push_back({branch.from, branch.to, winding.resistance,
                                               which == 0 ? Output::primary_current : Output::secondary_current});
                else if (which == 0)
                    parts.inductors.push_back({branch.from, branch.to, 0, Output::magnetising_current});
                break;
            }
            case BranchKind::switch_: parts.switch_from = branch.from, parts.switch_to = branch.to; break;
            case BranchKind::rectifier: parts.rectifier_from = branch.from, parts.rectifier_to = branch.to; break;
            case BranchKind::load: parts.load_from = branch.from, parts.load_to = branch.to; break;
            case BranchKind::capacitor: {
                const int bank = *branch.seat == Seat::input_capacitor ? 0 : *branch.seat == Seat::coupling_capacitor ? 1 : 2;
                if (bank == 1) parts.coupling_from = branch.from, parts.coupling_to = branch.to;
                if (bank == 0 && parts.stiff) break;
                add_bank(parts, branch, bank_values(circuit, *branch.seat), bank);
                break;
            }
        }
    }
    const int count = static_cast<int>(parts.inductors.size());
    parts.inductance = Matrix::Zero(count, count);
    int first = -1, second = -1;
    for (int k = 0; k < count; ++k) {
        const Output output = parts.inductors[k].output;
        if (output == Output::source_current) parts.inductance(k, k) = circuit.source_inductance;
        if (output == Output::primary_current) first = k;
        if (output == Output::secondary_current) second = k;
        if (output == Output::primary_current || output == Output::magnetising_current)
            parts.inductance(k, k) = circuit.primary.inductance;
    }
    parts.turns = circuit.turns_ratio;
    if (second >= 0) {
        const double l1 = circuit.primary.inductance;
        const double l2 = topology.transformer ? l1 * circuit.turns_ratio * circuit.turns_ratio : circuit.secondary.inductance;
        if (!topology.transformer) parts.turns = std::sqrt(l2 / l1);
        parts.inductance(second, second) = l2;
        parts.inductance(first, second) = parts.inductance(second, first) = circuit.coupling * std::sqrt(l1 * l2);
    }
    return parts;
}

/// Groups of nodes joined by anything but windings; a group without the reference is cut off by windings alone.
std::vector<int> groups(int nodes, const std::vector<Link>& links) {
    std::vector<int> group(nodes);
    std::iota(group.begin(), group.end(), 0);
    for (bool changed = true; changed;) {
        changed = false;
        for (const Link& link : links) {
            const int lowest = std::min(group[link.from], group[link.to]);
            changed |= group[link.from] != lowest || group[link.to] != lowest;
            group[link.from] = group[link.to] = lowest;
        }
    }
    return group;
}

std::vector<Link> links_of(const Circuit& circuit, const Parts& parts, bool switch_on, bool rectifier_on) {
    std::vector<Link> links;
    const int winding_states = static_cast<int>(parts.inductors.size());
    if (parts.stiff)
        links.push_back({parts.in, 0, 0, -1, Output::source_current, -1, true, false});
    else if (circuit.source == SourceKind::impedance && circuit.source_inductance == 0)
        links.push_back({parts.in, 0, circuit.source_resistance, -1, Output::source_current, -1, true, false});
    for (int k = 0; k < static_cast<int>(parts.capacitors.size()); ++k) {
        const Capacitor& part = parts.capacitors[k];
        links.push_back({part.from, part.to, part.resistance, winding_states + k, Output::branches, part.bank, false, false});
    }
    if (switch_on)
        links.push_back({parts.switch_from, parts.switch_to, circuit.switch_resistance + circuit.sense_resistance, -1,
                         Output::switch_current, -1, false, false});
    if (rectifier_on)
        links.push_back({parts.rectifier_from, parts.rectifier_to, circuit.rectifier_resistance, -1,
                         Output::rectifier_current, -1, false, true});
    return links;
}

void derive_one(const Circuit& circuit, const Parts& parts, double load_conductance, bool switch_on, bool rectifier_on,
                StateEquations& all) {
    Configuration& result = all.configuration[configuration_index(switch_on, rectifier_on)];
    const std::vector<Link> links = links_of(circuit, parts, switch_on, rectifier_on);
    const int nodes = static_cast<int>(circuit.topology->nodes.size());
    const int winding_states = static_cast<int>(parts.inductors.size());
    const int states = all.states;
    const int transformer = parts.ideal_transformer ? 2 : 0;
    const int first_slope = nodes - 1, first_link = first_slope + winding_states;
    const int first_winding = first_link + static_cast<int>(links.size());
    const int unknowns = first_winding + transformer;
    const int known = states + kInputs;
    const bool windings_open = parts.ideal_transformer && !switch_on && !rectifier_on;

    // M·[node voltages, slopes of winding currents, link currents, transformer currents] = R·[x, u]
    Matrix M = Matrix::Zero(unknowns, unknowns);
    Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMostUnknowns, kMostStates + kInputs> R(unknowns, known);
    R.setZero();
    const auto node = [](int n) { return n - 1; };  // row and column of a node; the reference has none

    for (int k = 0; k < winding_states; ++k) {
        const Inductor& part = parts.inductors[k];
        if (!parts.ideal_transformer || part.output == Output::source_current) {  // its current leaves `from`
            if (part.from > 0) R(node(part.from), k) -= 1;
            if (part.to > 0) R(node(part.to), k) += 1;
        }
        const int row = first_slope + k;
        if (part.from > 0) M(row, node(part.from)) += 1;
        if (part.to > 0) M(row, node(part.to)) -= 1;
        for (int j = 0; j < winding_states; ++j) M(row, first_slope + j) -= parts.inductance(k, j);
        R(row, k) += part.resistance;
        R(row, states + Input::emf) -= part.emf;
    }
    for (int k = 0; k < static_cast<int>(links.size()); ++k) {
        const Link& link = links[k];
        const int column = first_link + k, row = column;
        if (link.from > 0) M(node(link.from), column) += 1, M(row, node(link.from)) += 1;
        if (link.to > 0) M(node(link.to), column) -= 1, M(row, node(link.to)) -= 1;
        M(row, column) -= link.resistance;
        if (link.state >= 0) R(row, link.state) += 1;
        if (link.source) R(row, states + Input::emf) += 1;
        if (link.threshold) R(row, states + Input::rectifier_threshold) += 1;
    }
    if (parts.ideal_transformer) {
        int magnetising = 0;
        while (parts.inductors[magnetising].output != Output::magnetising_current) ++magnetising;
        const int slope = first_slope + magnetising;
        // The row of the magnetising winding becomes the primary's: v1 − R1·i1 = L·di_m/dt.
        M(slope, first_winding) -= parts.winding_resistance[0];
        for (int w = 0; w < 2; ++w) {
            const int from = parts.winding_from[w], to = parts.winding_to[w], column = first_winding + w;
            if (from > 0) M(node(from), column) += 1;
            if (to > 0) M(node(to), column) -= 1;
        }
        const int row = first_winding;  // v2 − R2·i2 = n·L·di_m/dt
        if (parts.winding_from[1] > 0) M(row, node(parts.winding_from[1])) += 1;
        if (parts.winding_to[1] > 0) M(row, node(parts.winding_to[1])) -= 1;
        M(row, first_winding + 1) -= parts.winding_resistance[1];
        M(row, slope) -= parts.turns * circuit.primary.inductance;
        if (windings_open) {
            M(row + 1, slope) = 1;  // both windings open: the flux cannot change, i_m = 0
        } else {
            M(row + 1, first_winding) = 1;
            M(row + 1, first_winding + 1) = parts.turns;
            R(row + 1, magnetising) = 1;
        }
    }
    if (parts.mean_feed) R(node(parts.in), states + Input::source_feed) += 1;
    const auto load = [&](int at, double sign) {
        if (at == 0) return;
        R(node(at), states + Input::load_feed) -= sign;
        if (parts.load_from > 0) M(node(at), node(parts.load_from)) += sign * load_conductance;
        if (parts.load_to > 0) M(node(at), node(parts.load_to)) -= sign * load_conductance;
    };
    load(parts.load_from, 1);
    load(parts.load_to, -1);

    // A group of nodes that only windings reach: the sum of their currents is zero, and so is its slope.
    result.K.setZero(0, states);
    if (!parts.ideal_transformer) {
        const std::vector<int> group = groups(nodes, links);
        for (int g = 1; g < nodes; ++g) {
            if (group[g] != g) continue;
            ConstraintMatrix cut = ConstraintMatrix::Zero(1, states);
            for (int k = 0; k < winding_states; ++k) {
                const Inductor& part = parts.inductors[k];
                if (part.from >= 0 && group[part.from] == g) cut(0, k) -= 1;
                if (part.to >= 0 && group[part.to] == g) cut(0, k) += 1;
            }
            M.row(node(g)).setZero();
            R.row(node(g)).setZero();
            for (int k = 0; k < winding_states; ++k) M(node(g), first_slope + k) = cut(0, k);
            result.K.conservativeResize(result.K.rows() + 1, states);
            result.K.row(result.K.rows() - 1) = cut.row(0);
        }
    } else if (windings_open) {
        result.K.setZero(1, states);
        for (int k = 0; k < winding_states; ++k)
            if (parts.inductors[k].output == Output::magnetising_current) result.K(0, k) = 1;
    }

    // Row scaling keeps the elimination sound from nanohenries to farads.
    for (int row = 0; row < unknowns; ++row) {
        const double size = M.row(row).cwiseAbs().maxCoeff();
        if (!(size > 0)) return;
        M.row(row) /= size;
        R.row(row) /= size;
    }
    for (int column = first_slope; column < first_link; ++column) {  // slopes in units of 1/L
        M.col(column) /= parts.inductance(column - first_slope, column - first_slope);
    }
    const Eigen::PartialPivLU<Matrix> lu(M);
    const double least = lu.matrixLU().diagonal().cwiseAbs().minCoeff();
    if (!(least > 1e-13)) return;
    Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMostUnknowns, kMostStates + kInputs> y = lu.solve(R);
    if (!y.allFinite()) return;
    for (int k = 0; k < winding_states; ++k) y.row(first_slope + k) /= parts.inductance(k, k);
    result.possible = true;

    // State equations.
    result.A.setZero(states, states);
    result.B.setZero(states, kInputs);
    for (int k = 0; k < winding_states; ++k) {
        result.A.row(k) = y.row(first_slope + k).head(states);
        result.B.row(k) = y.row(first_slope + k).tail(kInputs);
    }
    for (int k = 0; k < static_cast<int>(links.size()); ++k) {
        if (links[k].state < 0) continue;
        const double c = parts.capacitors[links[k].state - winding_states].capacitance;
        result.A.row(links[k].state) = y.row(first_link + k).head(states) / c;
        result.B.row(links[k].state) = y.row(first_link + k).tail(kInputs) / c;
    }

    // Outputs.
    OutputMatrix& C = result.C;
    FeedMatrix& D = result.D;
    C.setZero(all.outputs, states);
    D.setZero(all.outputs, kInputs);
    const auto add = [&](int output, int row, double factor) {
        C.row(output) += factor * y.row(row).head(states);
        D.row(output) += factor * y.row(row).tail(kInputs);
    };
    const auto voltage = [&](int output, int from, int to, double sign = 1) {
        if (from > 0) add(output, node(from), sign);
        if (to > 0) add(output, node(to), -sign);
    };
    voltage(Output::rectifier_voltage, parts.rectifier_from, parts.rectifier_to);
    voltage(Output::input_voltage, parts.in, 0);
    voltage(Output::coupling_voltage, parts.coupling_from, parts.coupling_to);
    voltage(Output::output_voltage, parts.load_from, parts.load_to);
    C.row(Output::load_current) = load_conductance * C.row(Output::output_voltage);
    D.row(Output::load_current) = load_conductance * D.row(Output::output_voltage);
    D(Output::load_current, Input::load_feed) += 1;
    if (parts.mean_feed) D(Output::source_current, Input::source_feed) = 1;
    for (int k = 0; k < winding_states; ++k) C(parts.inductors[k].output, k) = 1;
    if (parts.ideal_transformer) {
        add(Output::primary_current, first_winding, 1);
        add(Output::secondary_current, first_winding + 1, 1);
    } else {
        C.row(Output::magnetising_current) = C.row(Output::primary_current) + parts.turns * C.row(Output::secondary_current);
        D.row(Output::magnetising_current) = D.row(Output::primary_current) + parts.turns * D.row(Output::secondary_current);
    }
    for (int k = 0; k < static_cast<int>(links.size()); ++k) {
        const Link& link = links[k];
        if (link.source) add(Output::source_current, first_link + k, -1);  // link runs in → reference
        if (link.output == Output::switch_current || link.output == Output::rectifier_current)
            add(link.output, first_link + k, 1);
        if (link.bank >= 0) {
            constexpr Output kBankCurrent[] = {Output::input_bank_current, Output::coupling_bank_current,
                                               Output::output_bank_current};
            add(kBankCurrent[link.bank], first_link + k, 1);
            for (const auto& [original, share] : parts.capacitors[link.state - winding_states].shares)
                for (const StateEquations::BankBranch& branch : all.bank_branches)
                    if (branch.bank == link.bank && branch.original == original) add(branch.output, first_link + k, share);
        }
    }
    if (switch_on) {  // V_DS without the sense resistor
        C.row(Output::switch_voltage) = circuit.switch_resistance * C.row(Output::switch_current);
        D.row(Output::switch_voltage) = circuit.switch_resistance * D.row(Output::switch_current);
    } else {
        voltage(Output::switch_voltage, parts.switch_from, parts.switch_to);
    }

    // Forcing K x = 0: an impulse of voltage at each cut-off group, flux linkage otherwise kept.
    result.P.setIdentity(states, states);
    if (result.K.rows() > 0) {
        const int rows = static_cast<int>(result.K.rows());
        const Matrix k_windings = result.K.leftCols(winding_states);
        const Matrix spread = parts.inductance.partialPivLu().solve(k_windings.transpose());
        const Matrix inner = k_windings * spread;
        const Matrix force = spread * inner.partialPivLu().solve(Matrix(k_windings));
        result.P.topLeftCorner(winding_states, winding_states) -= force;
        (void)rows;
    }
}

}  // namespace

void derive(const Circuit& circuit, double load_conductance, StateEquations& equations) {
    const Parts parts = sort_branches(circuit);
    const int winding_states = static_cast<int>(parts.inductors.size());
    equations.states = winding_states + static_cast<int>(parts.capacitors.size());
    equations.windings = winding_states;
    equations.input_bank_idle = parts.stiff;
    equations.bank_branches.clear();
    int output = Output::branches;
    for (int bank = 0; bank < 3; ++bank) {
        if (bank == 0 && parts.stiff) continue;
        const auto& values = bank == 0 ? circuit.input : bank == 1 ? circuit.coupling_capacitor : circuit.output;
        if (values.size() < 2) continue;
        for (int k = 0; k < static_cast<int>(values.size()); ++k) equations.bank_branches.push_back({bank, k, output++});
    }
    equations.outputs = output;
    if (equations.states > kMostStates || equations.outputs > kMostOutputs)
        throw OutsideModel("the banks hold more kinds of capacitor than the network takes (" +
                           std::to_string(equations.states) + " states, at most " + std::to_string(kMostStates) + ")");
    for (int k = 0; k < equations.states; ++k)
        equations.weight[k] = k < winding_states ? std::sqrt(parts.inductance(k, k))
                                                 : std::sqrt(parts.capacitors[k - winding_states].capacitance);
    for (int index = 0; index < 4; ++index) equations.configuration[index].possible = false;
    for (const bool switch_on : {false, true})
        for (const bool rectifier_on : {false, true}) {
            if (switch_on && rectifier_on && (!circuit.topology->transformer || parts.ideal_transformer)) continue;
            derive_one(circuit, parts, load_conductance, switch_on, rectifier_on, equations);
            if (!equations.configuration[configuration_index(switch_on, rectifier_on)].possible)
                throw OutsideModel("the equations of this network have no unique solution with the switch " +
                                   std::string(switch_on ? "on" : "off") + " and the rectifier " +
                                   (rectifier_on ? "conducting" : "blocking"));
        }
}

}  // namespace binwright
